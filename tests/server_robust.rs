//! Nothing that comes in ends the server: malformed messages, unknown methods, and
//! panics cost one answer each.

#[path = "common/lsp.rs"]
mod lsp;
#[path = "common/words.rs"]
mod words_analyser;

use std::time::{Duration, Instant};

use lsp::{Client, frame, pulled, pushed};
use serde_json::{Value, json};
use words_analyser::Words;

const URI: &str = "file:///plant/sump.lyate";

fn code(answer: Result<Value, Value>) -> Option<i64> {
    answer.err().and_then(|error| error["code"].as_i64())
}

#[tokio::test]
async fn a_malformed_message_is_answered_and_the_next_one_is_served() {
    let mut client = Client::start(Words::new(), pushed()).await;
    let cases: [(&[u8], i64); 11] = [
        (b"Content-Length: 9\r\n\r\n{\"jsonrpc", -32700),
        (b"Content-Length: 2\r\n\r\n[]", -32600),
        (b"Content-Length: 2\r\n\r\n{}", -32600),
        (b"Content-Length: 0\r\n\r\n", -32700),
        (b"Content-Length: 4\r\n\r\n\"\xff\xfe\"", -32700),
        (b"Content-Length: x\r\n\r\n", -32700),
        (b"Content-Length: -1\r\n\r\n", -32700),
        (b"Content-Length: 18446744073709551615\r\n\r\n", -32700),
        (b"Content-Length: 123456789\r\n\r\n{}", -32700),
        (b"Content-Type: application/json\r\n\r\n{}", -32700),
        (b"\xff\xfe\x00GET / HTTP/1.1\r\n\r\n", -32700),
    ];
    for (version, (bytes, expected)) in cases.into_iter().enumerate() {
        client.raw(bytes).await;
        let version = version as i32;
        client.open(URI, version, "bad").await;
        assert_eq!(
            code(client.answer_to(Value::Null).await),
            Some(expected),
            "{}",
            String::from_utf8_lossy(bytes)
        );
        assert_eq!(client.published(URI, version).await.len(), 1);
    }
    client.stop().await;
}

#[tokio::test]
async fn a_request_that_is_refused_is_told_by_its_id() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.raw(&frame(&json!({ "jsonrpc": "1.0", "id": "mine", "method": "shutdown" }))).await;
    assert_eq!(code(client.answer_to(json!("mine")).await), Some(-32600));
    client.raw(&frame(&json!({ "jsonrpc": "2.0", "id": 77, "method": ["x"] }))).await;
    assert_eq!(code(client.answer_to(json!(77)).await), Some(-32600));
    client.stop().await;
}

#[tokio::test]
async fn deep_nesting_is_a_parse_error() {
    let mut client = Client::start(Words::new(), pushed()).await;
    for depth in [120, 1000, 100_000] {
        let params = format!("{}1{}", "[".repeat(depth), "]".repeat(depth));
        let body = format!(r#"{{"jsonrpc":"2.0","id":5,"method":"any/thing","params":{params}}}"#);
        client.raw(format!("Content-Length: {}\r\n\r\n{body}", body.len()).as_bytes()).await;
        let answer = client.wait("an answer", |message| message.get("error").is_some()).await;
        let expected = if depth < 127 { -32601 } else { -32700 };
        assert_eq!(answer["error"]["code"], expected, "{depth}");
    }
    client.stop().await;
}

#[tokio::test]
async fn unknown_requests_are_answered_and_unknown_notifications_ignored() {
    let mut client = Client::start(Words::new(), pushed()).await;
    for method in ["any/thing", "$/any", "textDocument/publishDiagnostics"] {
        assert_eq!(code(client.ask(method, json!({})).await), Some(-32601), "{method}");
        client.notify(method, json!({})).await;
        client.notify(method, Value::Null).await;
    }
    // One that the protocol knows and the server does not offer.
    let position = json!({ "position": { "line": 0, "character": 0 } });
    assert_eq!(
        code(client.ask_about("textDocument/definition", URI, position).await),
        Some(-32601)
    );
    // Known ones with the wrong parameters.
    for params in [json!({}), json!([]), Value::Null, json!({ "textDocument": { "uri": 4 } })] {
        assert_eq!(code(client.ask("textDocument/hover", params.clone()).await), Some(-32602));
        for method in ["didOpen", "didChange", "didClose"] {
            client.notify(&format!("textDocument/{method}"), params.clone()).await;
        }
        client.notify("workspace/didChangeWatchedFiles", params.clone()).await;
        client.notify("$/cancelRequest", params).await;
    }
    // A request's method without an id, and a notification's with one.
    client.notify("textDocument/hover", json!({})).await;
    assert_eq!(code(client.ask("textDocument/didSave", json!({})).await), Some(-32600));
    // An answer to nothing that was asked.
    client.raw(&frame(&json!({ "jsonrpc": "2.0", "id": 1234, "result": null }))).await;
    client.raw(&frame(&json!({ "jsonrpc": "2.0", "id": 0, "error": { "code": 1, "message": "no", "odd": 2 } }))).await;
    let quiet = client.rest(Duration::from_millis(100)).await;
    let errors: Vec<_> = quiet.iter().filter(|message| message.get("error").is_some()).collect();
    assert!(errors.len() <= 1, "{errors:?}");
    client.open(URI, 1, "bad").await;
    assert_eq!(client.published(URI, 1).await.len(), 1);
    client.stop().await;
}

#[tokio::test]
async fn a_panic_in_an_analysis_costs_that_version_only() {
    let mut client = Client::start(Words::new(), pulled()).await;
    client.open(URI, 1, "panic").await;
    for method in ["textDocument/diagnostic", "textDocument/documentSymbol"] {
        assert_eq!(code(client.ask_about(method, URI, json!({})).await), Some(-32603));
    }
    client.change(URI, 2, json!([{ "text": "bad" }])).await;
    let report =
        client.ask_about("textDocument/diagnostic", URI, json!({})).await.expect("a report");
    assert_eq!(report["items"].as_array().map(Vec::len), Some(1));
    client.stop().await;
}

#[tokio::test]
async fn a_panic_in_an_analysis_is_told_where_findings_are_pushed() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 1, "bad bad").await;
    assert_eq!(client.published(URI, 1).await.len(), 2);
    client.change(URI, 2, json!([{ "text": "panic" }])).await;
    let told = client.published(URI, 2).await;
    assert_eq!(told.len(), 1);
    assert_eq!(told[0]["code"], "internal-error");
    client.change(URI, 3, json!([{ "text": "bad" }])).await;
    assert_eq!(client.published(URI, 3).await[0]["code"], "bad-word");
    client.stop().await;
}

#[tokio::test]
async fn a_panic_in_a_request_costs_that_request_only() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 1, "crash fine").await;
    let at = |character| json!({ "position": { "line": 0, "character": character } });
    for _ in 0..3 {
        assert_eq!(code(client.ask_about("textDocument/hover", URI, at(1)).await), Some(-32603));
        let hover = client.ask_about("textDocument/hover", URI, at(7)).await.expect("a hover");
        assert_eq!(hover["contents"]["value"], "the word *fine*");
    }
    client.stop().await;
}

#[tokio::test]
async fn a_used_id_can_be_used_again_after_a_panic() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 1, "crash").await;
    for _ in 0..2 {
        let position = json!({ "line": 0, "character": 1 });
        let params = json!({ "textDocument": { "uri": URI }, "position": position });
        let message = json!({ "jsonrpc": "2.0", "id": "same", "method": "textDocument/hover", "params": params });
        client.raw(&frame(&message)).await;
        assert_eq!(code(client.answer_to(json!("same")).await), Some(-32603));
    }
    client.stop().await;
}

/// Ten thousand findings at the end of one line of a megabyte would cost ten thousand
/// walks along it, were each position counted from the line's start.
#[tokio::test]
async fn a_megabyte_of_one_line_is_served_in_time() {
    let mut client = Client::start(Words::new(), pushed()).await;
    let text = format!("{}{}", "µ ".repeat(350_000), "bad ".repeat(10_000));
    let begun = Instant::now();
    client.open(URI, 1, &text).await;
    let found = client.published(URI, 1).await;
    assert_eq!(found.len(), 10_000);
    assert_eq!(found[9_999]["range"]["end"], json!({ "line": 0, "character": 700_000 + 39_999 }));
    assert!(begun.elapsed() < Duration::from_secs(20), "{:?}", begun.elapsed());
    client.stop().await;
}
