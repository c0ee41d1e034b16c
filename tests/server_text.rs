//! The server's text is the editor's text: random edits, in each encoding, over
//! characters of every width and every kind of line end, against a plain model.

#[path = "common/lsp.rs"]
mod lsp;
#[path = "common/words.rs"]
mod words_analyser;

use std::sync::Arc;
use std::sync::atomic::AtomicBool;

use lsp::{Client, pulled, pushed};
use lyate::server::analysis::{Analyser, Request};
use proptest::prelude::*;
use serde_json::{Value, json};
use words_analyser::Words;

const URI: &str = "file:///plant/sump.lyate";

fn at(line: usize, character: usize) -> Value {
    json!({ "line": line, "character": character })
}

fn units(text: &str, encoding: &str) -> usize {
    match encoding {
        "utf-8" => text.len(),
        "utf-16" => text.encode_utf16().count(),
        _ => text.chars().count(),
    }
}

/// The text's lines with where they start, without what ends them. Kept apart from the
/// server's own way on purpose: it walks the whole text each time.
fn lines(text: &str) -> Vec<(usize, &str)> {
    let mut lines = Vec::new();
    let mut start = 0;
    let mut at = 0;
    while at < text.len() {
        let rest = &text[at..];
        let width = if rest.starts_with("\r\n") {
            2
        } else if rest.starts_with(['\r', '\n']) {
            1
        } else {
            at += rest.chars().next().map_or(1, char::len_utf8);
            continue;
        };
        lines.push((start, &text[start..at]));
        at += width;
        start = at;
    }
    lines.push((start, &text[start..]));
    lines
}

/// Where a position stands, by the protocol's words.
fn offset(text: &str, line: usize, character: usize, encoding: &str) -> usize {
    let lines = lines(text);
    let Some((start, content)) = lines.get(line) else { return text.len() };
    let mut end = *start;
    for c in content.chars() {
        let next = end + c.len_utf8();
        if units(&text[*start..next], encoding) > character {
            break;
        }
        end = next;
    }
    end
}

fn position(text: &str, offset: usize, encoding: &str) -> Value {
    let lines = lines(text);
    let line = lines.iter().rposition(|(start, _)| *start <= offset).unwrap_or(0);
    at(line, units(&text[lines[line].0..offset], encoding))
}

/// What a fresh look at the text finds, as rules and ranges.
fn fresh(text: &str, encoding: &str) -> Vec<(String, Value, Value)> {
    let view = Words::default()
        .analyse(Request {
            path: None,
            text: Arc::from(text),
            roots: &[],
            open: &|_| None,
            previous: None,
            cancel: &AtomicBool::new(false),
        })
        .expect("nobody cancels");
    let mut found: Vec<_> = view
        .findings()
        .iter()
        .map(|finding| {
            let start = position(text, finding.at.start, encoding);
            (finding.rule.to_owned(), start, position(text, finding.at.end, encoding))
        })
        .collect();
    found.sort_by_key(|one| format!("{one:?}"));
    found
}

fn told(diagnostics: &[Value]) -> Vec<(String, Value, Value)> {
    let mut found: Vec<_> = diagnostics
        .iter()
        .map(|one| {
            let rule = one["code"].as_str().unwrap_or_default().to_owned();
            (rule, one["range"]["start"].clone(), one["range"]["end"].clone())
        })
        .collect();
    found.sort_by_key(|one| format!("{one:?}"));
    found
}

#[derive(Clone, Debug)]
struct Edit {
    /// None replaces the whole text.
    range: Option<[(usize, usize); 2]>,
    text: String,
}

fn pieces() -> impl Strategy<Value = String> {
    let piece = prop_oneof![
        4 => Just("bad"), 2 => Just("ugly"), 2 => Just("ok"), 4 => Just(" "), 2 => Just("\n"),
        2 => Just("\r\n"), 1 => Just("\r"), 2 => Just("µ"), 2 => Just("𝄞"), 1 => Just("é—"),
    ];
    prop::collection::vec(piece, 0..8).prop_map(|pieces| pieces.concat())
}

fn edit() -> impl Strategy<Value = Edit> {
    let place = (0usize..7, prop_oneof![9 => 0usize..12, 1 => Just(usize::MAX >> 33)]);
    let range = prop_oneof![9 => [place.clone(), place].prop_map(Some), 1 => Just(None)];
    (range, pieces()).prop_map(|(range, text)| Edit { range, text })
}

async fn follow(text: String, rounds: Vec<Vec<Edit>>, encoding: &str, pull: bool) {
    let words = Words::new();
    let mut capabilities = if pull { pulled() } else { pushed() };
    capabilities["general"]["positionEncodings"] = json!([encoding]);
    let mut client = Client::start(words.clone(), capabilities).await;
    assert_eq!(client.capabilities["positionEncoding"], encoding);
    client.open(URI, 0, &text).await;
    let mut text = text;
    for (version, edits) in rounds.iter().enumerate() {
        let mut changes = Vec::new();
        for edit in edits {
            match edit.range {
                Some([one, other]) => {
                    let ends =
                        [one, other].map(|(line, column)| offset(&text, line, column, encoding));
                    text.replace_range(ends[0].min(ends[1])..ends[0].max(ends[1]), &edit.text);
                    let range = json!({ "start": at(one.0, one.1), "end": at(other.0, other.1) });
                    changes.push(json!({ "range": range, "text": edit.text }));
                }
                None => {
                    text = edit.text.clone();
                    changes.push(json!({ "text": edit.text }));
                }
            }
        }
        client.change(URI, version as i32 + 1, Value::Array(changes)).await;
    }
    let found = if pull {
        let report =
            client.ask_about("textDocument/diagnostic", URI, json!({})).await.expect("one");
        report["items"].as_array().cloned().expect("a list")
    } else {
        client.published(URI, rounds.len() as i32).await
    };
    assert_eq!(words.last.lock().unwrap().as_deref(), Some(text.as_str()));
    assert_eq!(told(&found), fresh(&text, encoding));
    client.stop().await;
}

proptest! {
    // No file of failures beside the sources.
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::with_cases(200) })]

    #[test]
    fn random_edits_give_the_findings_of_a_fresh_look(
        text in pieces(),
        rounds in prop::collection::vec(prop::collection::vec(edit(), 0..4), 1..8),
        encoding in prop_oneof![Just("utf-16"), Just("utf-8"), Just("utf-32")],
        pull in any::<bool>(),
    ) {
        let runtime = tokio::runtime::Builder::new_current_thread().enable_time().build();
        runtime.expect("a runtime").block_on(follow(text, rounds, encoding, pull));
    }
}

#[tokio::test]
async fn the_first_encoding_of_the_client_that_is_known_is_used() {
    for (offered, taken) in [
        (json!(["utf-8", "utf-16"]), "utf-8"),
        (json!(["utf-16", "utf-8"]), "utf-16"),
        (json!(["utf-7", "utf-32"]), "utf-32"),
        (json!([]), "utf-16"),
        (Value::Null, "utf-16"),
    ] {
        let mut capabilities = pushed();
        capabilities["general"]["positionEncodings"] = offered;
        let client = Client::start(Words::new(), capabilities).await;
        assert_eq!(client.capabilities["positionEncoding"], taken);
        client.stop().await;
    }
}

/// A finding after characters that take two UTF-16 units, four bytes, and one each.
#[tokio::test]
async fn columns_count_in_the_units_agreed_on() {
    for (encoding, column) in [("utf-16", 5), ("utf-8", 8), ("utf-32", 4)] {
        let mut capabilities = pushed();
        capabilities["general"]["positionEncodings"] = json!([encoding]);
        let mut client = Client::start(Words::new(), capabilities).await;
        client.open(URI, 1, "x\r\n𝄞 µ bad\r\n").await;
        let found = client.published(URI, 1).await;
        assert_eq!(found[0]["range"]["start"], at(1, column), "{encoding}");
        client.stop().await;
    }
}

/// Half a surrogate pair, as an editor sends it while a pair is typed or cut in two.
#[tokio::test]
async fn an_edit_with_half_a_surrogate_pair_is_not_lost() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pushed()).await;
    client.open(URI, 1, "ab").await;
    let body = r#"{"jsonrpc":"2.0","method":"textDocument/didChange","params":{
        "textDocument":{"uri":"file:///plant/sump.lyate","version":2},
        "contentChanges":[{"range":{"start":{"line":0,"character":1},"end":{"line":0,"character":1}},"text":" bad \ud834"}]}}"#;
    client.raw(format!("Content-Length: {}\r\n\r\n{body}", body.len()).as_bytes()).await;
    let found = client.published(URI, 2).await;
    assert_eq!(found[0]["range"]["start"], at(0, 2));
    assert_eq!(words.last.lock().unwrap().as_deref(), Some("a bad \u{fffd}b"));
    client.stop().await;
}
