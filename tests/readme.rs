//! The tour of the README, taken: its files are written, its commands run, and what they
//! print must be what stands there. With `README_UPDATE` set, a block without gaps is put
//! right instead.

use std::path::Path;
use std::process::Command;

/// A line that stands for any number of lines.
const GAP: &str = "…";

#[derive(Debug)]
struct Block {
    /// What follows the fence, such as `console` or `lyate condensate.lyate`.
    words: String,
    text: String,
}

fn blocks(page: &str) -> Vec<Block> {
    let mut blocks: Vec<Block> = Vec::new();
    let mut open = false;
    for line in page.lines() {
        match line.strip_prefix("```") {
            Some(words) => {
                open = !open;
                if open {
                    blocks.push(Block { words: words.to_owned(), text: String::new() });
                }
            }
            None if open => {
                let text = &mut blocks.last_mut().expect("a block").text;
                text.push_str(line);
                text.push('\n');
            }
            None => {}
        }
    }
    assert!(!open, "a block that does not end");
    blocks
}

/// Whether lines are as shown, where a gap may stand for any of them.
fn is_as_shown(shown: &[&str], lines: &[&str]) -> bool {
    match shown.split_first() {
        None => lines.is_empty(),
        Some((&GAP, rest)) => (0..=lines.len()).any(|skip| is_as_shown(rest, &lines[skip..])),
        Some((first, rest)) => lines
            .split_first()
            .is_some_and(|(line, lines)| line == first && is_as_shown(rest, lines)),
    }
}

#[test]
fn the_tour_is_real() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md");
    let page = std::fs::read_to_string(&path).expect("the README");
    let mut updated = page.clone();
    let folder = tempfile::tempdir().expect("a folder");
    let (mut files, mut commands, mut wrong) = (0, 0, Vec::new());
    for block in blocks(&page) {
        if let Some(name) = block.words.strip_prefix("lyate ") {
            std::fs::write(folder.path().join(name), &block.text).expect("a file");
            files += 1;
        } else if block.words == "console" {
            let (command, shown) = block.text.split_once('\n').expect("a command and its answer");
            let arguments = command.strip_prefix("$ lyate ").expect("a command of ours");
            let output = Command::new(env!("CARGO_BIN_EXE_lyate"))
                .args(arguments.split_whitespace())
                .current_dir(folder.path())
                .output()
                .expect("the binary runs");
            let printed = String::from_utf8_lossy(&output.stdout);
            commands += 1;
            let (shown, lines): (Vec<_>, Vec<_>) =
                (shown.lines().collect(), printed.lines().collect());
            if !is_as_shown(&shown, &lines) {
                if !shown.contains(&GAP) {
                    updated = updated.replace(&block.text, &format!("{command}\n{printed}"));
                }
                wrong.push(format!("{command} prints\n{printed}"));
            }
        }
    }
    assert!(files >= 1 && commands >= 4, "{files} files and {commands} commands in the README");
    if std::env::var_os("README_UPDATE").is_some() && updated != page {
        std::fs::write(&path, updated).expect("the README");
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn links_lead_somewhere() {
    let project = Path::new(env!("CARGO_MANIFEST_DIR"));
    let pages = [
        "README.md",
        "DEVELOPERS.md",
        "grammar/reference.md",
        "editors/README.md",
        "editors/any-other.md",
        "editors/neovim/README.md",
        "tests/problems/README.md",
    ];
    let mut links = 0;
    for page in pages {
        let path = project.join(page);
        let text = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{page}: {error}"));
        for target in text.split("](").skip(1).filter_map(|rest| rest.split(')').next()) {
            if target.contains("://") || target.starts_with('#') {
                continue;
            }
            let file = target.split('#').next().unwrap_or_default();
            let place = path.parent().expect("a folder").join(file);
            assert!(place.exists(), "{page} links to {target}, which is not there");
            links += 1;
        }
        // Headings of the page itself.
        for target in text.split("](#").skip(1).filter_map(|rest| rest.split(')').next()) {
            let found = text.lines().filter(|line| line.starts_with('#')).any(|heading| {
                let words = heading.trim_start_matches('#').trim().to_lowercase();
                let keep = |c: &char| c.is_alphanumeric() || matches!(c, ' ' | '-');
                words.chars().filter(keep).collect::<String>().replace(' ', "-") == target
            });
            assert!(found, "{page} links to #{target}, which is no heading of it");
            links += 1;
        }
    }
    assert!(links > 20, "{links} links");
}
