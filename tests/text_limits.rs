//! Texts that are too long or too deep: one clear problem, soon, on any stack.

use std::sync::Arc;
use std::time::{Duration, Instant};

use lyate::text::parse::{DEEPEST, LONGEST};
use lyate::text::problem::{MOST_PROBLEMS, SyntaxProblemKind};
use lyate::text::tree::{Document, Parsed};

const MEGABYTE: usize = 1 << 20;
/// How long most of the long texts are: in a build for tests a megabyte of each would
/// take a minute.
const LONG: usize = if cfg!(debug_assertions) { MEGABYTE / 8 } else { MEGABYTE };

fn fill(start: &str, part: &str, length: usize) -> String {
    let mut text = start.to_owned();
    while text.len() < length {
        text.push_str(part);
    }
    text
}

/// Reads one statement, and fails where that takes long even for a slow machine.
fn read(text: &str) -> Arc<Parsed> {
    let start = Instant::now();
    let document = Document::parse(text);
    let spent = start.elapsed();
    assert!(spent < Duration::from_secs(20), "{spent:?} for {:?}…", &text[..40.min(text.len())]);
    let mut parsed: Vec<_> = document.statements().map(|placed| placed.parsed.clone()).collect();
    assert_eq!(parsed.len(), 1);
    parsed.remove(0)
}

fn kinds(parsed: &Parsed) -> Vec<&SyntaxProblemKind> {
    parsed.problems.iter().map(|problem| &problem.kind).collect()
}

#[test]
fn a_hundred_thousand_parentheses_give_one_problem() {
    let open = "(".repeat(100_000);
    let close = ")".repeat(100_000);
    let nested = format!("reaction A <=> B, log K(T) = {open}T{close}");
    assert_eq!(kinds(&read(&nested)), [&SyntaxProblemKind::NestingTooDeep { limit: DEEPEST }]);
    for text in [
        format!("{open}T{close}"),
        format!("add {open}{close}"),
        format!("add NaOH {open}{close} mmol/L"),
        format!("expect {} = 3", "[".repeat(100_000)),
        format!("reaction A <=> B, log K(T) = {close}"),
        format!("reaction A <=> B, log K(T) = {}", "log(".repeat(100_000)),
        format!("reaction A <=> B, log K(T) = {}T", "-".repeat(100_000)),
        format!("reaction A <=> B, log K(T) = T{}", "^T".repeat(100_000)),
        format!("reaction A <=> B, log K(T) = T{}", " + T".repeat(100_000)),
        format!("reaction A <=> B, log K(T) = T{}", "^-(T".repeat(100_000)),
    ] {
        assert_eq!(read(&text).problems.len(), 1, "{}", &text[..60]);
    }
}

#[test]
fn nesting_to_the_limit_is_read_and_beyond_it_is_not() {
    let nested =
        |n: usize| format!("reaction A <=> B, log K(T) = {}T{}", "(1 + ".repeat(n), ")".repeat(n));
    assert_eq!(kinds(&read(&nested(DEEPEST))), Vec::<&SyntaxProblemKind>::new());
    assert_eq!(
        kinds(&read(&nested(DEEPEST + 1))),
        [&SyntaxProblemKind::NestingTooDeep { limit: DEEPEST }]
    );
    let chain = |n: usize| format!("reaction A <=> B, log K(T) = T{}", " - T".repeat(n));
    assert_eq!(kinds(&read(&chain(LONGEST))), Vec::<&SyntaxProblemKind>::new());
    assert_eq!(
        kinds(&read(&chain(LONGEST + 1))),
        [&SyntaxProblemKind::ExpressionTooLong { limit: LONGEST }]
    );
}

#[test]
fn a_small_stack_is_enough() {
    let deepest = format!(
        "reaction A <=> B, log K(T) = {}T{}",
        "-log(2^(1 + ".repeat(DEEPEST / 2),
        "))".repeat(DEEPEST / 2)
    );
    let longest = format!("reaction A <=> B, log K(T) = T{}", " * T".repeat(LONGEST));
    let done = std::thread::Builder::new()
        .stack_size(256 * 1024)
        .spawn(move || {
            for text in [deepest, longest] {
                let document = Document::parse(text.as_str());
                let placed = document.statements().next().cloned();
                let parsed = placed.map(|placed| placed.parsed);
                assert!(parsed.as_ref().is_some_and(|parsed| parsed.problems.is_empty()));
                let printed = parsed.map(|parsed| parsed.statement.to_string());
                assert!(printed.is_some_and(|printed| printed.starts_with("reaction A <=> B")));
            }
        })
        .map(std::thread::JoinHandle::join);
    assert!(matches!(done, Ok(Ok(()))));
}

#[test]
fn a_megabyte_on_one_line_is_read() {
    assert_eq!(kinds(&read(&fill("component A", ", A", MEGABYTE))), [] as [&SyntaxProblemKind; 0]);
    let parsed = read(&fill("", "x", MEGABYTE));
    assert!(matches!(
        kinds(&parsed)[..],
        [SyntaxProblemKind::UnknownStatement { word, nearest: None }] if word.len() < 100
    ));
}

#[test]
fn long_lines_are_read_whole_or_give_few_problems() {
    // Whole, however long.
    for (start, part) in [
        ("problem \"", "x"),
        ("component A", ", A"),
        ("component A", ", A \"title\""),
        ("reaction A <=> B", " + 2 A"),
        ("reaction A <=> B", ", pKa = 3"),
        ("balance charge [A] = [B]", " + 2 [A]"),
        ("balance charge 0 = 0", " - 3 mmol/L"),
        ("add A 1 mmol/L, giving A", " + A"),
        ("add A 1 mmol/L", "/L"),
        ("total A", "B"),
        ("add NaOH 1", "0"),
    ] {
        let mut text = fill(start, part, LONG);
        if start.ends_with('"') {
            text.push('"');
        }
        if start.starts_with("total") {
            text.push_str(" = 1 mmol/L");
        }
        let problems = read(&text).problems.len();
        // A number of so many digits is not finite.
        assert_eq!(problems, usize::from(start == "add NaOH 1"), "{start}…{part}");
    }
    // Broken, with few problems.
    for (start, part) in [
        ("", "x"),
        ("", "x "),
        ("", "€ "),
        ("", "1 "),
        ("add ", "A "),
        ("add ", "A+"),
        ("add ", "€ x "),
        ("add ", "\" "),
        ("reaction ", "A+"),
        ("reaction A <=> ", "A "),
        ("reaction A <=> B", ", foo"),
        ("reaction A <=> B, log K(T) = ", "T "),
        ("add NaOH ", "1e"),
        ("add NaOH ", "1,"),
        ("add NaOH 1 ", "± 1 "),
        ("expect pH = 1", ", source \"x\""),
    ] {
        let parsed = read(&fill(start, part, LONG));
        let problems = parsed.problems.len();
        assert!((1..=2 * MOST_PROBLEMS).contains(&problems), "{problems} for {start}…{part}");
    }
}
