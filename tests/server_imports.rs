//! Documents follow the files they import: as edited in another tab, as changed on disk,
//! and as they come and go.

#[path = "common/lsp.rs"]
mod lsp;
#[path = "common/words.rs"]
mod words_analyser;

use std::path::Path;
use std::time::Duration;

use lsp::{Client, pulled, pushed};
use serde_json::json;
use tower_lsp::lsp_types::Url;
use words_analyser::Words;

fn uri(path: &Path) -> String {
    Url::from_file_path(path).expect("an absolute path").to_string()
}

async fn told(client: &mut Client, uri: &str, version: i32) -> String {
    let found = client.published(uri, version).await;
    found[0]["message"].as_str().unwrap_or_default().to_owned()
}

async fn changed_on_disk(client: &mut Client, path: &Path) {
    let changes = json!([{ "uri": uri(path), "type": 2 }]);
    client.notify("workspace/didChangeWatchedFiles", json!({ "changes": changes })).await;
}

#[tokio::test]
async fn an_importer_follows_an_open_import_and_then_the_disk() {
    let folder = tempfile::tempdir().expect("a folder");
    let (main, part) = (folder.path().join("main.lyate"), folder.path().join("part.lyate"));
    std::fs::write(&part, "bad").expect("a file");
    let (main_uri, part_uri) = (uri(&main), uri(&part));
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(&main_uri, 1, "use \"part.lyate\"").await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "1 bad words");
    client.open(&part_uri, 1, "bad bad").await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "2 bad words");
    client.change(&part_uri, 2, json!([{ "text": "bad bad bad" }])).await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "3 bad words");
    // While it is open, its text counts and not the disk's.
    client.rest(Duration::from_millis(50)).await;
    changed_on_disk(&mut client, &part).await;
    let quiet = client.rest(Duration::from_millis(50)).await;
    assert!(quiet.is_empty(), "{quiet:?}");
    client.close(&part_uri).await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "1 bad words");
    std::fs::write(&part, "bad bad bad bad").expect("a file");
    changed_on_disk(&mut client, &part).await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "4 bad words");
    std::fs::remove_file(&part).expect("it was there");
    changed_on_disk(&mut client, &part).await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "no such file");
    client.stop().await;
}

#[tokio::test]
async fn an_import_that_was_missing_is_found_when_it_comes() {
    let folder = tempfile::tempdir().expect("a folder");
    let main_uri = uri(&folder.path().join("main.lyate"));
    let part = folder.path().join("below").join("part.lyate");
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(&main_uri, 5, "use \"other/../below/./part.lyate\"").await;
    assert_eq!(told(&mut client, &main_uri, 5).await, "no such file");
    client.open(&uri(&part), 1, "bad").await;
    assert_eq!(told(&mut client, &main_uri, 5).await, "1 bad words");
    client.stop().await;
}

#[cfg(unix)]
#[tokio::test]
async fn an_import_is_the_same_file_through_a_link() {
    let folder = tempfile::tempdir().expect("a folder");
    let part = folder.path().join("part.lyate");
    std::fs::write(&part, "bad").expect("a file");
    std::os::unix::fs::symlink(&part, folder.path().join("link.lyate")).expect("a link");
    let main_uri = uri(&folder.path().join("main.lyate"));
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(&main_uri, 1, "use \"link.lyate\"").await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "1 bad words");
    client.open(&uri(&part), 1, "bad bad").await;
    assert_eq!(told(&mut client, &main_uri, 1).await, "2 bad words");
    client.stop().await;
}

/// An edit to the importer's own text invites nobody; one to its import does.
#[tokio::test]
async fn a_client_that_asks_is_invited_only_where_an_import_changed() {
    let folder = tempfile::tempdir().expect("a folder");
    let (main, part) = (folder.path().join("main.lyate"), folder.path().join("part.lyate"));
    let (main_uri, part_uri) = (uri(&main), uri(&part));
    let mut client = Client::start(Words::new(), pulled()).await;
    client.open(&main_uri, 1, "use \"part.lyate\"").await;
    let pull = "textDocument/diagnostic";
    let first = client.ask_about(pull, &main_uri, json!({})).await.expect("a report");
    assert_eq!(first["items"][0]["message"], "no such file");
    client.change(&main_uri, 2, json!([{ "text": "use \"part.lyate\" " }])).await;
    client.ask_about(pull, &main_uri, json!({})).await.expect("a report");
    client.rest(Duration::from_millis(50)).await;
    assert!(client.asked.is_empty(), "{:?}", client.asked);

    client.open(&part_uri, 1, "bad").await;
    client.next("workspace/diagnostic/refresh").await;
    client.next("workspace/inlayHint/refresh").await;
    let known = json!({ "previousResultId": first["resultId"] });
    let second = client.ask_about(pull, &main_uri, known).await.expect("a report");
    assert_eq!(second["items"][0]["message"], "1 bad words");
    client.stop().await;
}

/// A request that waits for a text is not sent away because that text's import changed:
/// it gets the newer answer.
#[tokio::test(flavor = "multi_thread", worker_threads = 2)]
async fn a_request_outlives_a_change_of_an_import() {
    let folder = tempfile::tempdir().expect("a folder");
    let (main, part) = (folder.path().join("main.lyate"), folder.path().join("part.lyate"));
    let words = Words::new();
    let mut client = Client::start(words.clone(), pulled()).await;
    client.open(&uri(&part), 1, "bad").await;
    client.open(&uri(&main), 1, "use \"part.lyate\"").await;
    let pull = "textDocument/diagnostic";
    for round in 1..50 {
        let waiting = client.request_about(pull, &uri(&main), json!({})).await;
        let text = "bad ".repeat(round);
        client.change(&uri(&part), round as i32 + 1, json!([{ "text": text }])).await;
        client.answer(waiting).await.expect("a report");
        let report = client.ask_about(pull, &uri(&main), json!({})).await.expect("a report");
        assert_eq!(report["items"][0]["message"], format!("{round} bad words"));
    }
    client.stop().await;
}

#[tokio::test]
async fn files_are_watched_where_the_client_lets_us_ask_for_it() {
    let mut capabilities = pushed();
    capabilities["workspace"]["didChangeWatchedFiles"] = json!({ "dynamicRegistration": true });
    let mut client = Client::start(Words::new(), capabilities).await;
    let asked = client.next("client/registerCapability").await;
    let registration = &asked["params"]["registrations"][0];
    assert_eq!(registration["method"], "workspace/didChangeWatchedFiles");
    assert_eq!(
        registration["registerOptions"],
        json!({ "watchers": [{ "globPattern": "**/*.lyate" }] })
    );
    client.stop().await;

    let mut client = Client::start(Words::new(), pushed()).await;
    client.open("untitled:a", 1, "bad").await;
    client.published("untitled:a", 1).await;
    assert!(client.asked.is_empty());
    client.stop().await;
}

#[tokio::test]
async fn documents_are_checked_again_where_the_folders_change() {
    let words = Words::new();
    let mut client = Client::start(words.clone(), pushed()).await;
    client.open("file:///plant/a.lyate", 1, "bad").await;
    client.published("file:///plant/a.lyate", 1).await;
    let event = json!({ "added": [{ "uri": "file:///plant", "name": "plant" }], "removed": [] });
    client.notify("workspace/didChangeWorkspaceFolders", json!({ "event": event })).await;
    client.published("file:///plant/a.lyate", 1).await;
    assert_eq!(words.started(), 2);
    client.stop().await;
}
