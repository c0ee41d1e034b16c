//! What is wrong with the writing, shown under the characters that are wrong: the
//! snapshots hold the source and the problems together.

use lyate::text::problem::{SyntaxProblem, SyntaxProblemKind};
use lyate::text::tree::{Document, Statement};

/// The source with a line of carets and words under each problem.
fn render(text: &str) -> String {
    let document = Document::parse(text);
    let mut out = String::new();
    let mut line_start = 0;
    for line in text.split_inclusive('\n') {
        let content = line.trim_end_matches(['\r', '\n']);
        out.push_str(&format!("  {content}\n"));
        for placed in document.statements() {
            for problem in &placed.parsed.problems {
                let start = placed.start + problem.span.start as usize;
                let end = placed.start + problem.span.end as usize;
                let at_end = start == text.len() && !line.ends_with('\n');
                if !(at_end || (line_start..line_start + line.len()).contains(&start)) {
                    continue;
                }
                let column = text[line_start..start].chars().count();
                let width = text[start..end].chars().count().max(1);
                let words = words(problem);
                out.push_str(&format!("! {}{} {words}\n", " ".repeat(column), "^".repeat(width)));
            }
        }
        line_start += line.len();
    }
    out
}

fn words(problem: &SyntaxProblem) -> String {
    match &problem.kind {
        SyntaxProblemKind::Unexpected { found, expected } => {
            let found = if found.is_empty() { "the end" } else { found };
            format!("found {found}, expected {}", expected.join(" | "))
        }
        other => format!("{other:?}"),
    }
}

/// How many problems each statement has.
fn counts(text: &str) -> Vec<usize> {
    Document::parse(text).statements().map(|placed| placed.parsed.problems.len()).collect()
}

const TEN_BROKEN: &str = include_str!("text/ten_broken.lyate");

#[test]
fn ten_broken_statements_give_ten_problems() {
    let total: usize = counts(TEN_BROKEN).iter().sum();
    assert_eq!(total, 10);
    insta::assert_snapshot!(render(TEN_BROKEN));
}

#[test]
fn neighbours_of_broken_statements_keep_their_meaning() {
    let document = Document::parse(TEN_BROKEN);
    let whole: Vec<String> = document
        .statements()
        .filter(|placed| placed.parsed.problems.is_empty())
        .map(|placed| placed.parsed.statement.to_string())
        .collect();
    assert_eq!(
        whole,
        [
            "use aqueous",
            "activity davies",
            "component NH3, SO4^2-",
            "add (NH4)2SO4 12 mmol/L",
            "balance NH3 [NH4+] + [NH3] = total NH3",
            "expect [NH3] < 200 mg/L as N",
            "case \"winter\"",
            "temperature 4 °C",
        ]
    );
}

#[test]
fn a_broken_clause_costs_that_clause() {
    let text = "reaction NH4+ <=> NH3 + H+, pKa = 9.25, enthalpy = many kJ/mol, foo, at 20 °C,\n    valid 0 to 50 °C, source \"sheet 3\"\n";
    let document = Document::parse(text);
    let parsed = &document.sections[0].statements[0].parsed;
    assert_eq!(parsed.problems.len(), 2);
    assert_eq!(
        parsed.statement.to_string(),
        "reaction NH4+ <=> NH3 + H+, pKa = 9.25, at 20 °C, valid 0 to 50 °C, source \"sheet 3\""
    );
}

#[test]
fn a_broken_item_costs_that_item() {
    let parsed = |text: &str| Document::parse(text).sections[0].statements[0].parsed.clone();
    let components = parsed("component NH3, na+, Cl- \"salt\"");
    assert_eq!(components.statement.to_string(), "component NH3, Cl- \"salt\"");
    assert_eq!(components.problems.len(), 1);
    assert_eq!(parsed("component foo").statement, Statement::Broken);
}

#[test]
fn problems_of_reactions() {
    insta::assert_snapshot!(render(include_str!("text/reactions.lyate")));
}

#[test]
fn problems_of_quantities() {
    insta::assert_snapshot!(render(include_str!("text/quantities.lyate")));
}

#[test]
fn problems_of_other_statements() {
    insta::assert_snapshot!(render(include_str!("text/statements.lyate")));
}

#[test]
fn problems_of_layout_and_characters() {
    insta::assert_snapshot!(render(include_str!("text/characters.lyate")));
}
