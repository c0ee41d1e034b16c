//! Layout: pieces cover the text, statements go to their sections, and neighbours of a
//! broken statement keep their meaning.

use lyate::text::problem::SyntaxProblemKind;
use lyate::text::tree::{Document, Statement};

/// The texts of the statements, section by section.
fn sections(text: &str) -> Vec<Vec<String>> {
    let document = Document::parse(text);
    assert_covers(&document);
    document
        .sections
        .iter()
        .map(|section| section.statements.iter().map(|s| s.parsed.text.to_string()).collect())
        .collect()
}

fn assert_covers(document: &Document) {
    let mut position = 0;
    for piece in &document.pieces {
        assert_eq!(piece.start, position, "no gap, no overlap");
        assert!(piece.end > piece.start, "no empty piece");
        if let Some((section, statement)) = piece.statement {
            let placed = &document.sections[section as usize].statements[statement as usize];
            assert_eq!(placed.start, piece.start);
            assert_eq!(&*placed.parsed.text, &document.text[piece.start..piece.end]);
        }
        position = piece.end;
    }
    assert_eq!(position, document.text.len());
}

#[test]
fn deeper_lines_continue_a_statement_and_comments_do_not_end_it() {
    let text = "balance charge\n    [H+]\n\n# not the end\n      = [OH-]  # here\n  # after\nuse aqueous\n";
    let expected = "balance charge\n    [H+]\n\n# not the end\n      = [OH-]  # here";
    assert_eq!(sections(text), [[expected, "use aqueous"]]);
}

#[test]
fn a_case_holds_the_statements_at_its_own_depth() {
    let text = "use aqueous\ncase \"a\"\n    # note\n    temperature 4 °C\n    add NaOH\n      9 mmol/L\n\ncase \"b\"\n  add NaOH 8 mmol/L\nadd HCl 1 mmol/L\n";
    assert_eq!(
        sections(text),
        [
            vec!["use aqueous", "add HCl 1 mmol/L"],
            vec!["case \"a\"", "temperature 4 °C", "add NaOH\n      9 mmol/L"],
            vec!["case \"b\"", "add NaOH 8 mmol/L"],
        ]
    );
}

#[test]
fn every_line_end_and_a_byte_order_mark_are_read() {
    let plain = "use aqueous\nadd NaOH\n\t9 mmol/L\n";
    let parsed = |text: &str| {
        let sections = sections(text);
        sections[0].iter().map(|s| s.replace("\r\n", "\n").replace('\r', "\n")).collect::<Vec<_>>()
    };
    assert_eq!(parsed(&plain.replace('\n', "\r\n")), parsed(plain));
    assert_eq!(parsed(&plain.replace('\n', "\r")), parsed(plain));
    assert_eq!(parsed(&format!("\u{FEFF}{plain}")), parsed(plain));
    assert_eq!(parsed(plain.trim_end()), parsed(plain));
    assert_eq!(sections(""), [Vec::<String>::new()]);
    assert_eq!(sections("\u{FEFF}"), [Vec::<String>::new()]);
    assert_eq!(sections("\n  # only this\n"), [Vec::<String>::new()]);
}

#[test]
fn tabs_and_spaces_indent_alike() {
    let text = "case \"a\"\n\ttemperature 4 °C\n    add NaOH 9 mmol/L\n\t  , giving Na+\n";
    assert_eq!(
        sections(text)[1],
        ["case \"a\"", "temperature 4 °C", "add NaOH 9 mmol/L\n\t  , giving Na+"]
    );
}

#[test]
fn a_line_at_no_open_depth_is_read_and_said_to_be_astray() {
    let text = "  use aqueous\nadd NaOH 1 mmol/L\ncase \"a\"\n    temperature 4 °C\n  add HCl 2 mmol/L\n    expect pH = 7\n    case \"b\"\n";
    let document = Document::parse(text);
    assert_covers(&document);
    let stray = |section: usize, statement: usize| {
        document.sections[section].statements[statement]
            .parsed
            .problems
            .iter()
            .any(|p| p.kind == SyntaxProblemKind::StrayIndent)
    };
    assert!(stray(0, 0));
    assert!(!stray(0, 1));
    assert!(!stray(1, 1), "the case's own depth");
    assert!(stray(1, 2), "between the margin and the case's depth");
    assert!(!stray(1, 3), "back at the case's depth");
    assert!(stray(1, 4), "a case inside a case");
    let statement = &document.sections[1].statements[2].parsed.statement;
    assert!(matches!(statement, Statement::Add { .. }), "{statement:?}");
}

#[test]
fn only_the_word_case_opens_a_case() {
    assert_eq!(sections("cases \"a\"\nadd NaOH 1 mmol/L").len(), 1);
    assert_eq!(sections("case\"a\"\n").len(), 2);
    assert_eq!(sections("case").len(), 2);
}
