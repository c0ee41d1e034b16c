//! Pictures over the protocol: the command, its answer and its errors, what is offered, and
//! the file that a client is asked to show.

#[path = "common/lsp.rs"]
mod lsp;
#[path = "common/words.rs"]
mod words;

use std::sync::Arc;
use std::time::Duration;

use lsp::{Client, pushed};
use lyate::server::checker::Checker;
use serde_json::{Value, json};
use words::Words;

const URI: &str = "file:///plant/rinse.lyate";
const RINSE: &str = "problem \"Rinse\"\nuse aqueous\ncomponent NH3, Cl-\nadd NH4Cl 2 mmol/L\n\
                     case \"warm\"\n    temperature 40 °C\n";

fn showing() -> Value {
    let mut capabilities = pushed();
    capabilities["window"] = json!({ "showDocument": { "support": true } });
    capabilities
}

async fn draw(client: &mut Client, argument: Value) -> Result<Value, Value> {
    let params = json!({ "command": "lyate.draw", "arguments": [argument] });
    client.ask("workspace/executeCommand", params).await
}

#[tokio::test]
async fn the_command_answers_with_the_picture_of_the_text_as_it_is() {
    let mut client = Client::start(Words::new(), pushed()).await;
    assert_eq!(client.capabilities["executeCommandProvider"]["commands"], json!(["lyate.draw"]));
    client.open(URI, 1, "one two").await;
    client.change(URI, 2, json!([{ "text": "one two three" }])).await;
    let answer = draw(&mut client, json!({ "uri": URI, "case": "all" })).await;
    let svg = "<svg><text>3</text></svg>";
    assert_eq!(answer, Ok(json!({ "title": "rinse, all", "svg": svg })));
    // A client that shows no files is asked for nothing, and offered nothing.
    let range =
        json!({ "start": { "line": 0, "character": 0 }, "end": { "line": 0, "character": 9 } });
    client.change(URI, 3, json!([{ "text": "draw" }])).await;
    let more = json!({ "range": range, "context": { "diagnostics": [] } });
    let actions = client.ask_about("textDocument/codeAction", URI, more).await;
    assert_eq!(actions, Ok(json!([])));
    assert!(client.asked.is_empty(), "{:?}", client.asked);
    client.stop().await;
}

#[tokio::test]
async fn what_cannot_be_drawn_is_an_error_with_words() {
    let mut client = Client::start(Words::new(), pushed()).await;
    client.open(URI, 1, "").await;
    for (argument, code, words) in [
        (json!({ "uri": URI }), -32803, "there are no words to draw"),
        (json!({ "uri": "file:///other" }), -32803, "the file is not open in the editor"),
        (json!({}), -32602, "`lyate.draw` takes `{\"uri\": …}`"),
        (json!("x"), -32602, "`lyate.draw` takes `{\"uri\": …}`"),
        (json!({ "uri": URI, "picture": "portrait" }), -32602, "portrait"),
        (json!({ "uri": URI, "width": -3 }), -32602, "-3"),
    ] {
        let error = draw(&mut client, argument.clone()).await.expect_err("it cannot be drawn");
        assert_eq!(error["code"], code, "{argument}: {error}");
        assert!(error["message"].as_str().unwrap().contains(words), "{argument}: {error}");
    }
    let other = json!({ "command": "lyate.paint", "arguments": [] });
    let error = client.ask("workspace/executeCommand", other).await.expect_err("no such command");
    assert_eq!(error["code"], -32602);
    client.stop().await;
}

#[tokio::test]
async fn an_offer_draws_a_real_problem_and_shows_it() {
    let mut client = Client::start(Arc::new(Checker::default()), showing()).await;
    client.open(URI, 1, RINSE).await;
    let line = |line: u32| json!({ "line": line, "character": 3 });
    let mut offered = Vec::new();
    for at in [0, 3, 4] {
        let range = json!({ "start": line(at), "end": line(at) });
        let more = json!({ "range": range, "context": { "diagnostics": [], "only": ["source"] } });
        let actions = client.ask_about("textDocument/codeAction", URI, more).await.unwrap();
        offered.push(actions);
    }
    assert_eq!(offered[0][0]["title"], "Draw log concentration against pH");
    assert_eq!(offered[1], json!([]));
    assert_eq!(offered[2][0]["title"], "Draw log concentration against pH, case \"warm\"");
    let command = offered[2][0]["command"].clone();
    let params = json!({ "command": command["command"], "arguments": command["arguments"] });
    let answer = client.ask("workspace/executeCommand", params).await.expect("a picture");
    assert_eq!(answer["title"], "Rinse, case \"warm\"");
    let svg = answer["svg"].as_str().unwrap();
    assert!(roxmltree::Document::parse(svg).is_ok());

    let asked = client.next("window/showDocument").await;
    let uri = asked["params"]["uri"].as_str().unwrap();
    assert_eq!(asked["params"]["external"], true);
    let path = tower_lsp::lsp_types::Url::parse(uri).unwrap().to_file_path().unwrap();
    assert_eq!(std::fs::read_to_string(&path).unwrap(), svg);
    client.stop().await;
    tokio::time::sleep(Duration::from_millis(50)).await;
    assert!(!path.exists(), "the picture goes with the session");
}
