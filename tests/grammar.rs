//! The language reference and the EBNF against the program: what they show is read, what
//! the EBNF makes is read, what the project's files hold is in the EBNF, and no word of the
//! parser is missing from either.

mod grammar_support;

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;

use grammar_support::made::Maker;
use grammar_support::read::read;
use grammar_support::recognised::is_sentence;
use grammar_support::{Expression, Grammar};
use lyate::chemistry::activity::ActivityKind;
use lyate::chemistry::unit::{Dimension, Unit};
use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::rules::finding::Severity;
use lyate::rules::outcome::State;
use lyate::text::parse::{CLAUSES, KEYWORDS};
use lyate::text::problem::SyntaxProblemKind;
use lyate::text::tree::{Document, Statement};

/// Sentences made of each kind of statement.
const SENTENCES: usize = 60;

fn project(path: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(path)
}

fn text(path: &str) -> String {
    std::fs::read_to_string(project(path)).unwrap_or_else(|error| panic!("{path}: {error}"))
}

fn grammar() -> Grammar {
    read(&text("grammar/lyate.ebnf"))
}

/// The rules of the kinds of statement, `case` among them.
fn kinds(grammar: &Grammar) -> Vec<&str> {
    let Expression::Choice(choices) = grammar.rule("statement") else { panic!("a choice") };
    let names = choices.iter().map(|choice| match choice {
        Expression::Rule(name) => name.as_str(),
        other => panic!("{other:?} is no rule"),
    });
    names.chain(["case"]).collect()
}

/// What is wrong with the writing of a document.
fn syntax_problems(document: &Document) -> Vec<String> {
    document
        .statements()
        .flat_map(|placed| placed.parsed.problems.iter().map(move |problem| (placed, problem)))
        .map(|(placed, problem)| format!("{:?} in {:?}", problem, placed.parsed.text))
        .collect()
}

#[test]
fn every_rule_is_defined_and_used() {
    fn uses<'g>(expression: &'g Expression, found: &mut BTreeSet<&'g str>) {
        match expression {
            Expression::Rule(name) => {
                found.insert(name);
            }
            Expression::Sequence(parts) | Expression::Choice(parts) => {
                parts.iter().for_each(|part| uses(part, found));
            }
            Expression::Repeat(part, ..) => uses(part, found),
            Expression::Literal(_) | Expression::Class { .. } => {}
        }
    }
    let grammar = grammar();
    // Where it starts, and what stands between words.
    let mut used = BTreeSet::from(["file", "COMMENT"]);
    grammar.rules.values().for_each(|expression| uses(expression, &mut used));
    let defined: BTreeSet<&str> = grammar.rules.keys().map(String::as_str).collect();
    assert_eq!(used, defined);
    assert_eq!(kinds(&grammar).len(), KEYWORDS.len());
}

#[test]
fn what_the_grammar_makes_is_read() {
    let grammar = grammar();
    let mut maker = Maker::new(&grammar);
    let mut wrong = Vec::new();
    // Clauses and expressions are too rare inside whole statements to be tried in full.
    let inside =
        [("clause", "reaction A <=> B, "), ("expression", "reaction A <=> B, log K(T) = ")];
    let whole = kinds(&grammar).into_iter().map(|kind| (kind, ""));
    for (kind, before) in whole.chain(inside) {
        for _ in 0..SENTENCES {
            let made = maker.sentence(kind);
            assert!(is_sentence(&grammar, kind, &made), "made, not recognised: {made}");
            let sentence = format!("{before}{made}");
            // The first line under a case is its first statement already.
            if kind == "case" && sentence.contains('\n') {
                continue;
            }
            let document = Document::parse(sentence.as_str());
            // A clause that stands twice is told in words, and not by the grammar.
            let problems = document
                .statements()
                .flat_map(|placed| &placed.parsed.problems)
                .filter(|problem| !matches!(problem.kind, SyntaxProblemKind::RepeatedClause { .. }))
                .count();
            let broken = document
                .statements()
                .any(|placed| matches!(placed.parsed.statement, Statement::Broken));
            if problems > 0 || broken || document.statements().count() != 1 {
                wrong.push(format!("{sentence}\n  {:?}", syntax_problems(&document)));
            }
        }
    }
    wrong.sort_by_key(String::len);
    let shown = wrong.iter().take(5).cloned().collect::<Vec<_>>().join("\n\n");
    assert!(wrong.is_empty(), "{} wrong, such as\n{shown}", wrong.len());
    let unseen: Vec<_> =
        grammar.rules.keys().filter(|name| !maker.seen.contains(name.as_str())).collect();
    assert_eq!(unseen, ["COMMENT", "SPACE", "file", "section", "statement"], "rules never tried");
}

fn problem_files(below: &Path, found: &mut Vec<PathBuf>) {
    for entry in std::fs::read_dir(below).expect("a folder of the project") {
        let path = entry.expect("an entry").path();
        if path.is_dir() {
            problem_files(&path, found);
        } else if path.extension().is_some_and(|extension| extension == "lyate") {
            found.push(path);
        }
    }
}

#[test]
fn what_the_projects_files_hold_is_in_the_grammar() {
    let grammar = grammar();
    let mut files = Vec::new();
    for folder in ["tests/problems", "tests/text", "src/library"] {
        problem_files(&project(folder), &mut files);
    }
    let mut texts: Vec<String> =
        files.iter().map(|path| std::fs::read_to_string(path).expect("a problem file")).collect();
    texts.extend(blocks(&text("grammar/reference.md")).into_iter().map(|(_, block)| block));
    // The same statement in many files is one.
    let mut right = BTreeSet::new();
    let mut broken = BTreeSet::new();
    for text in texts {
        for placed in Document::parse(text).statements() {
            let parsed = &placed.parsed;
            // Layout and repeated clauses are not the grammar's.
            let other = |kind: &SyntaxProblemKind| {
                use SyntaxProblemKind::{RepeatedClause, StrayIndent};
                !matches!(kind, RepeatedClause { .. } | StrayIndent)
            };
            if parsed.problems.is_empty() {
                right.insert(parsed.text.to_string());
            } else if parsed.problems.iter().any(|problem| other(&problem.kind)) {
                broken.insert(parsed.text.to_string());
            }
        }
    }
    assert!(right.len() > 400 && broken.len() > 50, "{} and {}", right.len(), broken.len());
    let is_statement =
        |text: &str| ["statement", "case"].iter().any(|rule| is_sentence(&grammar, rule, text));
    let missing: Vec<_> = right.iter().filter(|text| !is_statement(text)).collect();
    assert!(missing.is_empty(), "read, and not in the grammar: {missing:#?}");
    let extra: Vec<_> = broken.iter().filter(|text| is_statement(text)).collect();
    assert!(extra.is_empty(), "in the grammar, and not read: {extra:#?}");
}

/// Every unit that is read.
fn units() -> Vec<Unit> {
    use Dimension as D;
    [
        D::AmountPerLitre,
        D::AmountPerKilogram,
        D::EquivalentsPerLitre,
        D::MassPerLitre,
        D::MassPerKilogram,
        D::MassFraction,
        D::VolumePerVolume,
        D::Temperature,
        D::Pressure,
        D::MolarEnergy,
        D::MolarEntropy,
        D::Percent,
    ]
    .into_iter()
    .flat_map(Dimension::units)
    .collect()
}

#[test]
fn every_word_of_the_parser_stands_in_the_grammar_and_in_the_reference() {
    let ebnf = text("grammar/lyate.ebnf");
    let reference = text("grammar/reference.md");
    let is_word = |c: char| c.is_alphanumeric() || c == '-';
    let words: BTreeSet<&str> = reference.split(|c| !is_word(c)).collect();
    let mut wanted: Vec<&str> = KEYWORDS.into_iter().chain(CLAUSES).collect();
    wanted.extend(ActivityKind::ALL.map(ActivityKind::name));
    wanted.extend([
        "strength",
        "with",
        "giving",
        "by",
        "charge",
        "protons",
        "added",
        "as",
        "between",
        "and",
        "pH",
        "pOH",
        "pe",
        "fraction",
        "alkalinity",
        "buffer",
        "capacity",
        "saturation",
        "index",
        "precipitated",
        "dose",
        "imbalance",
        "over",
        "from",
        "to",
        "beta",
        "ln",
    ]);
    for word in wanted {
        assert!(ebnf.contains(&format!("\"{word}\"")), "{word} is not in the grammar");
        assert!(words.contains(word), "{word} is not in the reference");
    }
    let grammar = grammar();
    let units = units();
    assert!(units.len() > 30, "hardly a unit: {units:?}");
    for unit in units {
        assert!(is_sentence(&grammar, "UNIT", unit.name), "{} is not in the grammar", unit.name);
        let shown = reference.contains(&format!("`{}`", unit.name));
        assert!(shown, "`{}` is not in the reference", unit.name);
    }
}

/// Blocks of problem text in a page: the words after `lyate`, and the text.
fn blocks(page: &str) -> Vec<(String, String)> {
    let mut blocks = Vec::new();
    let mut open: Option<(String, String)> = None;
    for line in page.lines() {
        match &mut open {
            Some(block) if line == "```" => {
                blocks.push(std::mem::take(block));
                open = None;
            }
            Some((_, text)) => {
                text.push_str(line);
                text.push('\n');
            }
            None => {
                if let Some(words) = line.strip_prefix("```lyate") {
                    open = Some((words.trim().to_owned(), String::new()));
                }
            }
        }
    }
    assert!(open.is_none(), "a block that does not end");
    blocks
}

/// Checks a text as a file of its own.
fn checked(text: &str) -> Checked {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("example.lyate");
    std::fs::write(&path, text).expect("a file");
    let around = Surroundings {
        path: Some(&path),
        roots: &[],
        files: &Disk,
        imports: &Imports::default(),
        cancel: &AtomicBool::new(false),
    };
    check(Document::parse(text), &around, None).expect("nobody cancels")
}

#[test]
fn the_examples_of_the_reference_hold() {
    let blocks = blocks(&text("grammar/reference.md"));
    let mut files = 0;
    for (words, block) in &blocks {
        let problems = syntax_problems(&Document::parse(block.as_str()));
        assert!(problems.is_empty(), "{problems:#?}\nin\n{block}");
        match words.as_str() {
            "" => {}
            "file" => {
                files += 1;
                let checked = checked(block);
                let found: Vec<_> = checked
                    .findings
                    .iter()
                    .filter(|finding| finding.severity > Severity::Note)
                    .map(|finding| &finding.message)
                    .collect();
                assert!(found.is_empty(), "{found:#?}\nin\n{block}");
                for outcome in &checked.outcomes {
                    let solved = matches!(outcome.state, State::Solved(_));
                    assert!(solved, "{:?}\nin\n{block}", outcome.state);
                    for compared in outcome.problem.expectations.iter() {
                        let value = outcome
                            .solved()
                            .and_then(|solved| solved.value(&outcome.problem, compared.sought));
                        let met = value.is_some_and(|value| compared.limit.is_met_by(value));
                        assert!(met, "{} is {value:?}\nin\n{block}", compared.words);
                    }
                }
            }
            other => panic!("a block that is neither a fragment nor a file: {other}"),
        }
    }
    assert!(files >= 5, "{files} complete files in the reference");
    let shown: BTreeSet<String> = blocks
        .iter()
        .flat_map(|(_, block)| {
            let document = Document::parse(block.as_str());
            let first = |text: &str| text.split_whitespace().next().map(str::to_owned);
            document.statements().filter_map(|p| first(&p.parsed.text)).collect::<Vec<_>>()
        })
        .collect();
    let lacking: Vec<_> = KEYWORDS.iter().filter(|word| !shown.contains(**word)).collect();
    assert!(lacking.is_empty(), "statements without an example: {lacking:?}");
}
