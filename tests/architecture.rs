//! The rooms and their arrows: each room knows only the rooms before it, every file says
//! what it is for, and none grows past what one concept needs.

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};

/// The rooms, and those that each may know.
const ROOMS: &[(&str, &[&str])] = &[
    ("text", &[]),
    ("chemistry", &[]),
    ("problem", &["text", "chemistry"]),
    ("balance", &["text", "chemistry", "problem"]),
    ("equilibrium", &["text", "chemistry", "problem", "balance"]),
    ("rules", &["text", "chemistry", "problem", "balance", "equilibrium"]),
    ("report", &["text", "chemistry", "problem", "balance", "equilibrium", "rules"]),
    ("server", &["text", "chemistry", "problem", "balance", "equilibrium", "rules", "report"]),
    (
        "command",
        &["text", "chemistry", "problem", "balance", "equilibrium", "rules", "report", "server"],
    ),
];

/// Lines that a file may have; tests at its end do not count.
const LONGEST_FILE: usize = 450;

fn sources(below: &Path, found: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(below).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            sources(&path, found);
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            found.push(path);
        }
    }
}

fn source_files() -> Vec<(PathBuf, String)> {
    let mut found = Vec::new();
    sources(&Path::new(env!("CARGO_MANIFEST_DIR")).join("src"), &mut found);
    assert!(found.len() > 50, "the source was not found");
    found
        .into_iter()
        .map(|path| {
            let text = fs::read_to_string(&path).unwrap();
            (path, text)
        })
        .collect()
}

fn room_of(path: &Path) -> Option<String> {
    let source = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let inside = path.strip_prefix(source).ok()?;
    let first = inside.components().next()?.as_os_str().to_str()?;
    (inside.components().count() > 1).then(|| first.to_owned())
}

/// Rooms that a text imports from, by `crate::room`.
fn imports(text: &str) -> BTreeSet<String> {
    let mut rooms = BTreeSet::new();
    for (at, _) in text.match_indices("crate::") {
        let rest = &text[at + "crate::".len()..];
        let name: String =
            rest.chars().take_while(|c| c.is_ascii_alphanumeric() || *c == '_').collect();
        rooms.insert(name);
    }
    rooms
}

#[test]
fn imports_follow_the_arrows() {
    let names: Vec<&str> = ROOMS.iter().map(|(name, _)| *name).collect();
    let mut wrong = Vec::new();
    let mut seen = BTreeSet::new();
    for (path, text) in source_files() {
        let Some(room) = room_of(&path) else { continue };
        let (_, known) = ROOMS
            .iter()
            .find(|(name, _)| *name == room)
            .unwrap_or_else(|| panic!("{}: a room that no arrow leads to", path.display()));
        for import in imports(&text) {
            if import != room && names.contains(&import.as_str()) {
                seen.insert(import.clone());
                if !known.contains(&import.as_str()) {
                    wrong.push(format!("{} knows {import}", path.display()));
                }
            }
        }
    }
    assert!(seen.len() > 4, "hardly an import was seen: {seen:?}");
    assert!(wrong.is_empty(), "against the arrows:\n{}", wrong.join("\n"));
}

#[test]
fn every_file_says_what_it_is_for_and_stays_short() {
    let mut wrong = Vec::new();
    for (path, text) in source_files() {
        if !text.starts_with("//! ") {
            wrong.push(format!("{} does not open with what it is for", path.display()));
        }
        let code = text.split("#[cfg(test)]\nmod tests").next().unwrap_or_default();
        let lines = code.lines().count();
        if lines > LONGEST_FILE {
            wrong.push(format!("{} has {lines} lines", path.display()));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn the_top_level_holds_only_what_belongs_there() {
    let allowed = ["Cargo.toml", "Cargo.lock", "README.md", "DEVELOPERS.md", "src", "grammar"];
    let more = ["tests", "editors", "target"];
    for entry in fs::read_dir(env!("CARGO_MANIFEST_DIR")).unwrap() {
        let name = entry.unwrap().file_name().into_string().unwrap();
        let fine = name.starts_with('.')
            || name.starts_with("LICENSE")
            || allowed.contains(&name.as_str())
            || more.contains(&name.as_str());
        assert!(fine, "{name} does not belong at the top");
    }
}
