//! Random statements, random garbage and random edits: what must hold whatever the
//! text is.

mod generate;

use generate::statement;
use lyate::text::tree::{Document, Statement};
use proptest::prelude::*;

/// A tree without its ranges, so that trees of different layout compare.
fn shape(statement: &Statement) -> String {
    without_spans(&format!("{statement:?}"))
}

fn without_spans(debug: &str) -> String {
    let mut out = String::new();
    let mut rest = debug;
    while let Some(at) = rest.find("Span { start: ") {
        let end = rest[at..].find('}').map_or(rest.len(), |end| at + end + 1);
        out.push_str(&rest[..at]);
        rest = &rest[end..];
    }
    out.push_str(rest);
    out
}

/// What holds of every document, whatever its text.
fn assert_whole(document: &Document) {
    let mut position = 0;
    let mut seen = 0;
    for piece in &document.pieces {
        assert_eq!(piece.start, position, "no gap, no overlap");
        assert!(piece.end > piece.start, "no empty piece");
        position = piece.end;
        let text = &document.text[piece.start..piece.end];
        let Some((section, statement)) = piece.statement else {
            let blank = |line: &str| {
                let line = line.trim_start_matches('\u{FEFF}').trim_start();
                let line = line.trim_start_matches('\u{FEFF}').trim_start();
                line.is_empty() || line.starts_with('#')
            };
            assert!(text.split(['\n', '\r']).all(blank), "only blank and comment lines: {text:?}");
            continue;
        };
        seen += 1;
        let placed = &document.sections[section as usize].statements[statement as usize];
        let parsed = &placed.parsed;
        assert_eq!(placed.start, piece.start);
        assert_eq!(&*parsed.text, text);
        let mut end = 0;
        for (_, span) in &parsed.tokens {
            assert_eq!(span.start, end, "tokens leave no gap");
            assert!(span.end > span.start, "no token is empty");
            end = span.end;
        }
        assert_eq!(end as usize, text.len(), "tokens give the text");
        for problem in &parsed.problems {
            let span = problem.span;
            assert!(span.start <= span.end && span.end as usize <= text.len(), "{problem:?}");
            assert!(text.get(span.range()).is_some(), "on characters: {problem:?}");
        }
        if parsed.statement == Statement::Broken {
            assert!(!parsed.problems.is_empty(), "a broken statement says why: {text:?}");
        }
    }
    assert_eq!(position, document.text.len());
    let total: usize = document.sections.iter().map(|section| section.statements.len()).sum();
    assert_eq!(seen, total, "every statement has its piece");
}

fn assert_same(a: &Document, b: &Document) {
    assert_eq!(a.pieces, b.pieces);
    assert_eq!(a.sections.len(), b.sections.len());
    for (a, b) in a.statements().zip(b.statements()) {
        assert_eq!(a.start, b.start);
        // Expressions may hold what is not equal to itself in no way but this.
        assert_eq!(format!("{:?}", a.parsed), format!("{:?}", b.parsed));
    }
}

const FILE: &str = include_str!("text/scrubber.lyate");

/// Puts `inserted` in the place of part of a text.
fn edited(text: &str, at: prop::sample::Index, length: usize, inserted: &str) -> String {
    let places: Vec<usize> = text.char_indices().map(|(i, _)| i).chain([text.len()]).collect();
    let from = at.index(places.len());
    let to = (from + length).min(places.len() - 1);
    format!("{}{inserted}{}", &text[..places[from]], &text[places[to]..])
}

fn snippet() -> BoxedStrategy<String> {
    prop_oneof![
        prop::sample::select(vec![
            "",
            "\n",
            "\r",
            "\r\n",
            "\t",
            "    ",
            " ",
            "#",
            "\"",
            "(",
            ")",
            "[",
            "]",
            "{",
            "}",
            ",",
            "+",
            "-",
            "^",
            "*",
            "±",
            "=",
            "<=>",
            "->",
            "case",
            "case \"b\"\n",
            "add",
            "log K(T) = ",
            "1e",
            "1e999",
            "%",
            "% w/w",
            "as N",
            "e-",
            "K",
            "°C",
            "⁻",
            "₄",
            "𝄞",
            "\u{FEFF}",
            "“",
            "\0",
            "/",
            "·",
            ".",
            "1.2",
            "NH3+H+",
            "source \"x\"",
            "T^-2",
        ])
        .prop_map(str::to_owned),
        "\\PC{0,6}",
    ]
    .boxed()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(if cfg!(debug_assertions) { 600 } else { 5_000 }))]

    #[test]
    fn a_printed_statement_reads_as_the_same_tree(statement in statement()) {
        let text = statement.to_string();
        let document = Document::parse(text.as_str());
        assert_whole(&document);
        let parsed: Vec<_> = document.statements().map(|placed| &placed.parsed).collect();
        prop_assert_eq!(parsed.len(), 1, "{}", text);
        prop_assert_eq!(&parsed[0].problems, &vec![], "{}", text);
        prop_assert_eq!(shape(&parsed[0].statement), shape(&statement), "{}", text);
    }

    #[test]
    fn any_text_is_covered(text in "(\\PC|[\r\n\t #\"(),=+^-])*") {
        assert_whole(&Document::parse(text));
    }

    #[test]
    fn any_statement_of_any_words_is_covered(parts in prop::collection::vec(snippet(), 0..30), keyword in prop::sample::select(lyate::text::parse::KEYWORDS.to_vec())) {
        assert_whole(&Document::parse(format!("{keyword} {}", parts.join(" "))));
    }

    #[test]
    fn edits_give_what_a_fresh_reading_gives(
        edits in prop::collection::vec((any::<prop::sample::Index>(), 0usize..30, snippet()), 1..8),
    ) {
        let mut text = FILE.to_owned();
        let mut document = Document::parse(text.as_str());
        for (at, length, inserted) in edits {
            text = edited(&text, at, length, &inserted);
            document = Document::parse_with(text.as_str(), &document);
            assert_whole(&document);
            assert_same(&document, &Document::parse(text.as_str()));
        }
    }
}
