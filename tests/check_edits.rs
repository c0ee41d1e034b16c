//! A file that is edited and checked again, with everything kept that an edit did not touch,
//! has the findings and the answers of the same text checked afresh.

use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

/// A small generator of its own, so that a failure can be had again from its seed.
struct Random(u64);

impl Random {
    fn below(&mut self, bound: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % bound.max(1) as u64) as usize
    }
}

/// What typing, deleting and moving lines put into a file.
const PIECES: &[&str] = &[
    "1",
    "9",
    ".",
    "0.5",
    " ",
    "\n",
    "#",
    "\"",
    ",",
    "+",
    "^2-",
    "mmol/L",
    "mg/L as N",
    "NaOH",
    "add HCl 2 mmol/L\n",
    "total Na+ = 3 mmol/L\n",
    "hold pH = 7\n",
    "temperature 30 °C\n",
    "activity ideal\n",
    "use aqueous\n",
    "expect pH < 9\n",
    "case \"typed\"\n    add NaOH 1 mmol/L\n",
    "balance charge\n    [H+] = [OH-]\n",
    "component Cl-\n",
    "precipitate CaCO3(s)\n",
    "saturate with Mg(OH)2(s)\n",
    "    ",
    "without expect pH\n",
];

fn edit(text: &str, random: &mut Random) -> String {
    let floor = |mut at: usize| {
        while !text.is_char_boundary(at) {
            at -= 1;
        }
        at
    };
    let lines: Vec<&str> = text.split_inclusive('\n').collect();
    match random.below(5) {
        0 => {
            let (a, b) = (random.below(text.len() + 1), random.below(6));
            let (from, to) = (floor(a), floor((a + b).min(text.len())));
            format!("{}{}", &text[..from], &text[to..])
        }
        1 if lines.len() > 1 => {
            let (a, b) = (random.below(lines.len()), random.below(lines.len()));
            let mut lines = lines;
            lines.swap(a, b);
            lines.concat()
        }
        2 if lines.len() > 1 => {
            let mut lines = lines;
            lines.remove(random.below(lines.len()));
            lines.concat()
        }
        3 if !lines.is_empty() => {
            // At the start of a line, where statements begin.
            let line = random.below(lines.len());
            let piece = PIECES[random.below(PIECES.len())];
            format!("{}{piece}{}", lines[..line].concat(), lines[line..].concat())
        }
        _ => {
            let at = floor(random.below(text.len() + 1));
            let piece = PIECES[random.below(PIECES.len())];
            format!("{}{piece}{}", &text[..at], &text[at..])
        }
    }
}

fn checked(text: &str, path: &Path, imports: &Imports, previous: Option<&Checked>) -> Checked {
    let document = match previous {
        Some(previous) => Document::parse_with(text, &previous.document),
        None => Document::parse(text),
    };
    let around = Surroundings {
        path: Some(path),
        roots: &[],
        files: &Disk,
        imports,
        cancel: &AtomicBool::new(false),
    };
    check(document, &around, previous).expect("nothing cancels it")
}

/// Rules, places and whole sentences. Figures at the edge of rounding could differ between
/// an answer found from near by and one found from afar; so far none did.
fn findings(checked: &Checked) -> Vec<String> {
    checked
        .findings
        .iter()
        .map(|f| format!("{:?} {} {:?} {}", f.at, f.rule, f.case, f.message))
        .collect()
}

fn files() -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/problems");
    ["plant", "buffers", "ammonia", "gases"]
        .iter()
        .flat_map(|part| std::fs::read_dir(folder.join(part)).unwrap())
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|extension| extension == "lyate"))
        .collect()
}

#[test]
fn an_edited_file_is_checked_as_one_that_is_read_afresh() {
    let files = files();
    assert!(files.len() > 20, "the problem library was not found");
    let (mut edits, mut solved) = (0, 0);
    for (seed, path) in files.iter().enumerate() {
        let imports = Imports::default();
        let mut random = Random(0x9e37_79b9_7f4a_7c15 ^ (seed as u64 + 1));
        let mut text = std::fs::read_to_string(path).unwrap();
        let mut kept = checked(&text, path, &imports, None);
        for step in 0..40 {
            // Back to the whole file now and then, so that most texts are nearly right.
            text = match step % 4 {
                0 => std::fs::read_to_string(path).unwrap(),
                _ => edit(&text, &mut random),
            };
            kept = checked(&text, path, &imports, Some(&kept));
            let fresh = checked(&text, path, &Imports::default(), None);
            assert_eq!(
                findings(&kept),
                findings(&fresh),
                "{} after step {step}:\n{text}",
                path.display()
            );
            for (one, other) in kept.outcomes.iter().zip(&fresh.outcomes) {
                let (one, other) = (one.solved(), other.solved());
                assert_eq!(one.is_some(), other.is_some(), "{}:\n{text}", path.display());
                if let (Some(one), Some(other)) = (one, other) {
                    let off = (one.ph() - other.ph()).abs();
                    assert!(off < 1e-9, "{}: {off}\n{text}", path.display());
                    solved += 1;
                }
            }
            edits += 1;
        }
    }
    assert!(edits > 800 && solved > 500, "{edits} edits, {solved} answers compared");
}
