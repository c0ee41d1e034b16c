//! Edits count in the order received: no burst leaves a stale finding, a newer edit ends
//! a slow analysis, and no answer is ever about an older text.

#[path = "common/lsp.rs"]
mod lsp;
#[path = "common/words.rs"]
mod words_analyser;

use std::time::{Duration, Instant};

use lsp::{Client, is_publish, pulled, pushed};
use serde_json::{Value, json};
use words_analyser::{SLOW, Words};

const URI: &str = "file:///plant/sump.lyate";
const BURST: i32 = 20;
const ROUNDS: i32 = 100;

fn insert(line: u32, character: u32, text: &str) -> Value {
    let at = json!({ "line": line, "character": character });
    json!([{ "range": { "start": at, "end": at }, "text": text }])
}

fn lines_of(diagnostics: &[Value]) -> Vec<i64> {
    diagnostics.iter().filter_map(|one| one["range"]["start"]["line"].as_i64()).collect()
}

/// Each edit of a burst adds a line on top, so every finding moves with every edit.
#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_burst_leaves_no_stale_finding_where_they_are_pushed() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pushed()).await;
    client.open(URI, 0, "bad\nbad").await;
    let mut version = 0;
    for round in 0..ROUNDS {
        for _ in 0..BURST {
            version += 1;
            client.change(URI, version, insert(0, 0, "good\n")).await;
        }
        if round % 10 == 0 {
            // Quiet, to see what comes last and in what order.
            let seen: Vec<_> = client.rest(Duration::from_millis(100)).await;
            let seen: Vec<_> = seen.iter().filter(|message| is_publish(message, URI)).collect();
            let versions: Vec<_> =
                seen.iter().map(|one| one["params"]["version"].as_i64()).collect();
            assert!(versions.is_sorted(), "{versions:?}");
            assert_eq!(versions.last().copied().flatten(), Some(i64::from(version)));
            let last = seen.last().and_then(|one| one["params"]["diagnostics"].as_array()).unwrap();
            assert_eq!(lines_of(last), [i64::from(version), i64::from(version) + 1]);
        } else {
            let found = client.published(URI, version).await;
            assert_eq!(lines_of(&found), [i64::from(version), i64::from(version) + 1]);
        }
    }
    assert!(words.with_previous.load(std::sync::atomic::Ordering::SeqCst) > 0);
    client.stop().await;
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_burst_leaves_no_stale_answer_where_they_are_asked_for() {
    let mut client = Client::start(Words::new(), pulled()).await;
    client.open(URI, 0, "bad\nbad").await;
    for round in 1..=ROUNDS {
        for edit in 0..BURST {
            client.change(URI, round * BURST + edit, insert(0, 0, "good\n")).await;
        }
        let top = i64::from(round * BURST);
        let pull = client.request_about("textDocument/diagnostic", URI, json!({})).await;
        let symbols = client.request_about("textDocument/documentSymbol", URI, json!({})).await;
        let position = json!({ "position": { "line": top, "character": 1 } });
        let hover = client.request_about("textDocument/hover", URI, position).await;
        let report = client.answer(pull).await.expect("a report");
        let found = report["items"].as_array().cloned().unwrap_or_default();
        assert_eq!(lines_of(&found), [top, top + 1]);
        let symbols = client.answer(symbols).await.expect("an outline");
        assert_eq!(symbols.as_array().map(Vec::len), Some(top as usize + 2));
        let hover = client.answer(hover).await.expect("a hover");
        assert!(hover["contents"]["value"].as_str().is_some_and(|page| page.contains("bad-word")));
    }
    client.stop().await;
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_newer_edit_ends_a_slow_analysis_and_what_waits_for_it() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pulled()).await;
    client.open(URI, 1, "slow bad").await;
    words.wait_started(1).await;
    let begun = Instant::now();
    let hover_at = json!({ "position": { "line": 0, "character": 0 } });
    let hover = client.request_about("textDocument/hover", URI, hover_at.clone()).await;
    let pull = client.request_about("textDocument/diagnostic", URI, json!({})).await;
    client.change(URI, 2, json!([{ "text": "quick bad" }])).await;
    let error = client.answer(hover).await.expect_err("its text is gone");
    assert_eq!(error["code"], -32801);
    let error = client.answer(pull).await.expect_err("its text is gone");
    assert_eq!(error["code"], -32802);
    assert_eq!(error["data"], json!({ "retriggerRequest": true }));
    let report =
        client.ask_about("textDocument/diagnostic", URI, json!({})).await.expect("a report");
    assert_eq!(report["items"].as_array().map(Vec::len), Some(1));
    let hover = client.ask_about("textDocument/hover", URI, hover_at).await.expect("a hover");
    assert_eq!(hover["contents"]["value"], "the word *quick*");
    assert!(begun.elapsed() < SLOW / 2, "nobody waited for the slow one");
    assert_eq!(words.cancelled(), 1);
    client.stop().await;
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_slow_document_holds_up_no_other() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pushed()).await;
    client.open(URI, 1, "slow").await;
    words.wait_started(1).await;
    let begun = Instant::now();
    for waiting in 0..50 {
        let hover_at = json!({ "position": { "line": 0, "character": waiting } });
        client.request_about("textDocument/hover", URI, hover_at).await;
    }
    client.open("file:///plant/other.lyate", 1, "bad").await;
    assert_eq!(client.published("file:///plant/other.lyate", 1).await.len(), 1);
    assert!(begun.elapsed() < SLOW / 2);
    client.stop().await;
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn one_analysis_serves_all_requests_of_a_version() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pulled()).await;
    client.open(URI, 1, "bad").await;
    let mut asked = Vec::new();
    for _ in 0..20 {
        asked.push(client.request_about("textDocument/diagnostic", URI, json!({})).await);
        asked.push(client.request_about("textDocument/documentSymbol", URI, json!({})).await);
    }
    for id in asked {
        client.answer(id).await.expect("an answer");
    }
    assert_eq!(words.started(), 1);
    client.stop().await;
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_request_can_be_cancelled_by_the_client() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pushed()).await;
    client.open(URI, 1, "slow").await;
    words.wait_started(1).await;
    let id = client.request_about("textDocument/documentSymbol", URI, json!({})).await;
    client.notify("$/cancelRequest", json!({ "id": id })).await;
    let error = client.answer(id).await.expect_err("it was cancelled");
    assert_eq!(error["code"], -32800);
    client.stop().await;
}

#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_closed_document_takes_its_findings_away_and_may_come_back() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 7, "bad").await;
    client.published(URI, 7).await;
    client.close(URI).await;
    let cleared = client.next("textDocument/publishDiagnostics").await;
    assert_eq!(cleared["params"]["diagnostics"], json!([]));
    assert_eq!(cleared["params"].get("version"), None);
    // What is said about a closed document is nothing, and changes to it are left out.
    let hover_at = json!({ "position": { "line": 0, "character": 0 } });
    assert_eq!(client.ask_about("textDocument/hover", URI, hover_at).await, Ok(Value::Null));
    client.change(URI, 8, json!([{ "text": "bad bad" }])).await;
    for round in 0..50 {
        client.open(URI, round, "bad bad").await;
        client.close(URI).await;
    }
    client.open(URI, 99, "bad bad bad").await;
    let seen = client.rest(Duration::from_millis(100)).await;
    let last = seen.iter().rfind(|message| is_publish(message, URI)).expect("diagnostics");
    assert_eq!(last["params"]["version"], 99);
    assert_eq!(last["params"]["diagnostics"].as_array().map(Vec::len), Some(3));
    client.stop().await;
}
