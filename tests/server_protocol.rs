//! What the server says to a client: capabilities, diagnostics pushed or asked for and
//! never both, features, and how it ends.

#[path = "common/lsp.rs"]
mod lsp;
#[path = "common/words.rs"]
mod words_analyser;

use std::time::Duration;

use lsp::{Client, pulled, pushed};
use lyate::server::Ending;
use serde_json::{Value, json};
use words_analyser::Words;

const URI: &str = "file:///plant/sump.lyate";
const QUIET: Duration = Duration::from_millis(100);

fn span(start: (u32, u32), end: (u32, u32)) -> Value {
    let position = |(line, character)| json!({ "line": line, "character": character });
    json!({ "start": position(start), "end": position(end) })
}

#[tokio::test]
async fn the_server_says_who_it_is_and_what_it_can_do() {
    let mut client = Client::silent(Words::new());
    let params = json!({ "capabilities": pushed(), "rootUri": null });
    let answer = client.ask("initialize", params).await.expect("an answer");
    assert_eq!(answer["serverInfo"]["name"], "lyate");
    assert_eq!(answer["serverInfo"]["version"], env!("CARGO_PKG_VERSION"));
    let can = &answer["capabilities"];
    assert_eq!(can["positionEncoding"], "utf-16");
    assert_eq!(can["textDocumentSync"], json!({ "openClose": true, "change": 2 }));
    assert_eq!(can.get("diagnosticProvider"), None);
    assert_eq!(
        can["codeActionProvider"]["codeActionKinds"],
        json!(["quickfix", "source.fixAll.lyate"])
    );
    client.notify("initialized", json!({})).await;
    assert_eq!(client.stop().await, Ending::Orderly);
}

#[tokio::test]
async fn odd_capabilities_do_not_keep_it_from_starting() {
    for params in [
        json!({}),
        Value::Null,
        json!({ "capabilities": { "textDocument": 7, "general": { "positionEncodings": [3, "utf-9"] } } }),
        json!({ "capabilities": {}, "rootUri": "not a uri", "workspaceFolders": [{ "name": 1 }], "trace": "loud" }),
    ] {
        let mut client = Client::silent(Words::new());
        let answer = client.ask("initialize", params).await.expect("an answer");
        assert_eq!(answer["capabilities"]["positionEncoding"], "utf-16");
        client.open("untitled:Untitled-1", 1, "bad").await;
        assert_eq!(client.published("untitled:Untitled-1", 1).await.len(), 1);
        client.stop().await;
    }
}

#[tokio::test]
async fn pushed_diagnostics_carry_all_that_was_found() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 3, "good bad\nugly").await;
    let found = client.published(URI, 3).await;
    assert_eq!(
        found[0],
        json!({
            "range": span((0, 5), (0, 8)),
            "severity": 1,
            "code": "bad-word",
            "source": "lyate",
            "message": "this word is bad",
            "relatedInformation": [{
                "location": { "uri": URI, "range": span((0, 0), (0, 0)) },
                "message": "the text starts here",
            }],
        })
    );
    assert_eq!(found[1]["severity"], 2);
    let error = client.ask_about("textDocument/diagnostic", URI, json!({})).await;
    assert_eq!(error.map_err(|error| error["code"].clone()), Err(json!(-32601)));
    client.stop().await;
}

/// A publish comes for each version, also where nothing was found or nothing is new.
#[tokio::test]
async fn each_version_is_published() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 1, "good").await;
    assert!(client.published(URI, 1).await.is_empty());
    client.change(URI, 2, json!([{ "text": "fine" }])).await;
    assert!(client.published(URI, 2).await.is_empty());
    client.change(URI, 9, json!([])).await;
    assert!(client.published(URI, 9).await.is_empty());
    client.stop().await;
}

#[tokio::test]
async fn diagnostics_asked_for_are_never_pushed() {
    let mut client = Client::start(Words::new(), pulled()).await;
    assert_eq!(
        client.capabilities["diagnosticProvider"],
        json!({ "identifier": "lyate", "interFileDependencies": true, "workspaceDiagnostics": false })
    );
    client.open(URI, 1, "bad").await;
    let first =
        client.ask_about("textDocument/diagnostic", URI, json!({})).await.expect("a report");
    assert_eq!(first["kind"], "full");
    assert_eq!(first["items"].as_array().map(Vec::len), Some(1));
    let known = json!({ "previousResultId": first["resultId"] });

    // An edit after the finding leaves the report as it was; one before moves it.
    client.change(URI, 2, json!([{ "text": "bad good" }])).await;
    let second =
        client.ask_about("textDocument/diagnostic", URI, known.clone()).await.expect("a report");
    assert_eq!(second, json!({ "kind": "unchanged", "resultId": first["resultId"] }));
    client.change(URI, 3, json!([{ "text": "\nbad good" }])).await;
    let third = client.ask_about("textDocument/diagnostic", URI, known).await.expect("a report");
    assert_eq!(third["kind"], "full");
    assert_eq!(third["items"][0]["range"], span((1, 0), (1, 3)));
    assert_ne!(third["resultId"], first["resultId"]);

    client.close(URI).await;
    let closed =
        client.ask_about("textDocument/diagnostic", URI, json!({})).await.expect("a report");
    assert_eq!(closed["items"], json!([]));
    let pushed = client.rest(QUIET).await;
    assert!(
        pushed.iter().all(|message| message["method"] != "textDocument/publishDiagnostics"),
        "{pushed:?}"
    );
    client.stop().await;
}

#[tokio::test]
async fn hover_hints_and_outline_follow_the_text() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 1, "one two\nthree\nbad").await;
    let at = |line, character| json!({ "position": { "line": line, "character": character } });
    let hover = client.ask_about("textDocument/hover", URI, at(0, 5)).await.expect("a hover");
    assert_eq!(
        hover,
        json!({ "contents": { "kind": "markdown", "value": "the word *two*" }, "range": span((0, 4), (0, 7)) })
    );
    let page = client.ask_about("textDocument/hover", URI, at(2, 1)).await.expect("a page");
    assert_eq!(page["contents"]["value"], "# bad-word\n\nA word that is bad.");
    assert_eq!(client.ask_about("textDocument/hover", URI, at(0, 3)).await, Ok(Value::Null));

    let range = json!({ "range": span((1, 0), (2, 0)) });
    let hints = client.ask_about("textDocument/inlayHint", URI, range).await.expect("hints");
    assert_eq!(
        hints,
        json!([{ "position": { "line": 1, "character": 5 }, "label": "1 words", "paddingLeft": true }])
    );

    let outline =
        client.ask_about("textDocument/documentSymbol", URI, json!({})).await.expect("one");
    assert_eq!(outline[2]["name"], "three");
    assert_eq!(outline[2]["selectionRange"], span((1, 0), (1, 5)));
    client.stop().await;
}

#[tokio::test]
async fn a_client_without_nested_symbols_or_markdown_gets_plain_ones() {
    let mut client = Client::start(Words::new(), json!({})).await;
    assert_eq!(client.capabilities.get("codeActionProvider"), None);
    client.open(URI, 1, "one").await;
    let outline =
        client.ask_about("textDocument/documentSymbol", URI, json!({})).await.expect("one");
    assert_eq!(outline[0]["location"], json!({ "uri": URI, "range": span((0, 0), (0, 3)) }));
    let at = json!({ "position": { "line": 0, "character": 0 } });
    let hover = client.ask_about("textDocument/hover", URI, at).await.expect("a hover");
    assert_eq!(hover["contents"]["kind"], "plaintext");
    client.stop().await;
}

#[tokio::test]
async fn fixes_are_offered_where_they_are_and_only_safe_ones_all_at_once() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 4, "bad ugly\nbad").await;
    let ask = |range: Value, only: Value| json!({ "range": range, "context": { "diagnostics": [], "only": only } });

    let here = ask(span((0, 5), (0, 5)), Value::Null);
    let actions = client.ask_about("textDocument/codeAction", URI, here).await.expect("actions");
    let titles: Vec<_> =
        actions.as_array().into_iter().flatten().map(|one| &one["title"]).collect();
    assert_eq!(titles, ["Write `pretty`", "Apply all safe fixes"]);
    assert_eq!(actions[0].get("isPreferred"), None, "it is not a safe one");
    assert_eq!(actions[0]["diagnostics"][0]["code"], "ugly-word");

    let first = ask(span((0, 1), (0, 2)), json!(["quickfix"]));
    let actions = client.ask_about("textDocument/codeAction", URI, first).await.expect("actions");
    assert_eq!(actions.as_array().map(Vec::len), Some(1));
    assert_eq!(actions[0]["isPreferred"], true);

    for only in ["source", "source.fixAll", "source.fixAll.lyate"] {
        let all = ask(span((0, 0), (0, 0)), json!([only]));
        let actions = client.ask_about("textDocument/codeAction", URI, all).await.expect("actions");
        assert_eq!(
            actions[0]["edit"]["documentChanges"],
            json!([{
                "textDocument": { "uri": URI, "version": 4 },
                "edits": [
                    { "range": span((0, 0), (0, 3)), "newText": "good" },
                    { "range": span((1, 0), (1, 3)), "newText": "good" },
                ],
            }])
        );
    }
    for only in ["source.fixAll.other", "source.fixAll.lyate.more", "refactor", "sour"] {
        let none = ask(span((0, 0), (9, 0)), json!([only]));
        let actions = client.ask_about("textDocument/codeAction", URI, none).await;
        assert_eq!(actions, Ok(json!([])), "{only}");
    }
    client.stop().await;
}

#[tokio::test]
async fn it_ends_when_told_and_says_whether_that_was_in_order() {
    let client = Client::start(Words::new(), pushed()).await;
    assert_eq!(client.stop().await, Ending::Orderly);

    let mut client = Client::start(Words::new(), pushed()).await;
    client.notify("exit", Value::Null).await;
    assert_eq!(client.ended().await, Ending::Abrupt);

    let mut client = Client::silent(Words::new());
    client.notify("exit", json!({})).await;
    assert_eq!(client.ended().await, Ending::Abrupt);

    let client = Client::start(Words::new(), pushed()).await;
    assert_eq!(client.leave().await, Ending::Abrupt);
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn it_ends_though_an_analysis_is_slow() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pushed()).await;
    client.open(URI, 1, "slow").await;
    words.wait_started(1).await;
    client.request_about("textDocument/documentSymbol", URI, json!({})).await;
    let begun = std::time::Instant::now();
    assert_eq!(client.stop().await, Ending::Orderly);
    assert!(begun.elapsed() < Duration::from_secs(5));
}

#[tokio::test]
async fn nothing_is_answered_before_initialize_or_after_shutdown() {
    let mut client = Client::silent(Words::new());
    client.open(URI, 1, "bad").await;
    let error = client.ask_about("textDocument/documentSymbol", URI, json!({})).await;
    assert_eq!(error.map_err(|error| error["code"].clone()), Err(json!(-32002)));
    client.ask("initialize", json!({ "capabilities": pushed() })).await.expect("an answer");
    let outline = client.ask_about("textDocument/documentSymbol", URI, json!({})).await;
    assert_eq!(outline, Ok(Value::Null), "what was opened too early is not open");
    client.open(URI, 1, "bad").await;
    client.published(URI, 1).await;
    for params in [json!({}), Value::Null] {
        let again = client.ask("initialize", params).await;
        assert_eq!(again.map_err(|error| error["code"].clone()), Err(json!(-32600)));
    }
    assert_eq!(client.ask("shutdown", json!({})).await, Ok(Value::Null));
    let error = client.ask_about("textDocument/documentSymbol", URI, json!({})).await;
    assert_eq!(error.map_err(|error| error["code"].clone()), Err(json!(-32600)));
    client.notify("exit", Value::Null).await;
    assert_eq!(client.ended().await, Ending::Orderly);
}

/// The protocol asks clients to wait for the answer to `initialize`; some do not.
#[tokio::test]
async fn a_client_that_does_not_wait_is_served() {
    let mut client = Client::silent(Words::new());
    let first = client.request("initialize", json!({ "capabilities": pushed() })).await;
    client.notify("initialized", json!({})).await;
    client.open(URI, 1, "bad").await;
    let outline = client.request_about("textDocument/documentSymbol", URI, json!({})).await;
    let last = client.request("shutdown", Value::Null).await;
    client.notify("exit", Value::Null).await;
    client.answer(first).await.expect("capabilities");
    // Answered or cut short by `exit`, but not left open.
    let _ = client.answer(outline).await;
    client.answer(last).await.expect("an answer");
    assert_eq!(client.ended().await, Ending::Orderly);
}
