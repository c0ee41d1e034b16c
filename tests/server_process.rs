//! The real server as its own process, over its standard input and output: a burst of edits
//! to a real problem file leaves no stale finding, and the exit codes are the protocol's.

use std::io::{BufRead, BufReader, Write};
use std::process::{Child, ChildStdin, Command, Stdio};
use std::sync::mpsc::{Receiver, channel};
use std::time::Duration;

use serde_json::{Value, json};

/// A loaded machine may take its time.
const PATIENCE: Duration = Duration::from_secs(60);

struct Server {
    process: Child,
    input: Option<ChildStdin>,
    messages: Receiver<Value>,
}

impl Server {
    fn start() -> Server {
        let mut process = Command::new(env!("CARGO_BIN_EXE_lyate"))
            .arg("serve")
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .spawn()
            .expect("the server starts");
        let mut output = BufReader::new(process.stdout.take().expect("piped"));
        let (sender, messages) = channel();
        std::thread::spawn(move || {
            while let Some(message) = read(&mut output) {
                if sender.send(message).is_err() {
                    return;
                }
            }
        });
        let input = process.stdin.take();
        Server { process, input, messages }
    }

    fn send(&mut self, message: Value) {
        let body = message.to_string();
        let input = self.input.as_mut().expect("still open");
        write!(input, "Content-Length: {}\r\n\r\n{body}", body.len()).expect("the server reads");
        input.flush().expect("the server reads");
    }

    fn wait(&self, what: &str, wanted: impl Fn(&Value) -> bool) -> Value {
        loop {
            let message = self.messages.recv_timeout(PATIENCE).unwrap_or_else(|_| panic!("{what}"));
            if wanted(&message) {
                return message;
            }
        }
    }

    fn initialize(&mut self) {
        let capabilities = json!({ "textDocument": { "publishDiagnostics": {} } });
        let params = json!({ "processId": null, "rootUri": null, "capabilities": capabilities });
        self.send(json!({ "jsonrpc": "2.0", "id": 1, "method": "initialize", "params": params }));
        self.wait("initialize is answered", |message| message["id"] == 1);
        self.send(json!({ "jsonrpc": "2.0", "method": "initialized", "params": {} }));
    }

    fn published(&self, version: i64) -> Vec<String> {
        let message = self.wait("findings are published", |message| {
            message["method"] == "textDocument/publishDiagnostics"
                && message["params"]["version"] == version
        });
        let mut codes: Vec<String> = message["params"]["diagnostics"]
            .as_array()
            .expect("a list")
            .iter()
            .map(|diagnostic| {
                let line = &diagnostic["range"]["start"]["line"];
                format!("{line} {}", diagnostic["code"].as_str().unwrap_or_default())
            })
            .collect();
        codes.sort();
        codes
    }

    fn end(mut self, orderly: bool) -> Option<i32> {
        if orderly {
            self.send(json!({ "jsonrpc": "2.0", "id": 99, "method": "shutdown" }));
            self.wait("shutdown is answered", |message| message["id"] == 99);
        }
        self.send(json!({ "jsonrpc": "2.0", "method": "exit" }));
        self.input.take();
        self.process.wait().expect("the server ends").code()
    }
}

fn read(output: &mut impl BufRead) -> Option<Value> {
    let mut length = 0;
    loop {
        let mut line = String::new();
        if output.read_line(&mut line).ok()? == 0 {
            return None;
        }
        match line.trim().split_once(": ") {
            Some(("Content-Length", value)) => length = value.parse().ok()?,
            _ if line.trim().is_empty() => break,
            _ => {}
        }
    }
    let mut body = vec![0; length];
    output.read_exact(&mut body).ok()?;
    serde_json::from_slice(&body).ok()
}

const FILE: &str = "problem \"Rinse tank R-3\"
use aqueous
component Na+, Cl-
add NaOH 2 mmol/L
add HCl 3 mmol/L
expect pH < 4
";

#[test]
fn a_burst_of_edits_leaves_no_stale_finding() {
    let mut server = Server::start();
    server.initialize();
    let uri = "untitled:rinse.lyate";
    let document = json!({ "uri": uri, "languageId": "lyate", "version": 1, "text": FILE });
    server.send(json!({ "jsonrpc": "2.0", "method": "textDocument/didOpen",
        "params": { "textDocument": document } }));
    assert_eq!(server.published(1), Vec::<String>::new());
    let change =
        |server: &mut Server, version: i64, from: (u32, u32), to: (u32, u32), text: &str| {
            let range = json!({
                "start": { "line": from.0, "character": from.1 },
                "end": { "line": to.0, "character": to.1 },
            });
            server.send(json!({ "jsonrpc": "2.0", "method": "textDocument/didChange", "params": {
            "textDocument": { "uri": uri, "version": version },
            "contentChanges": [{ "range": range, "text": text }],
        } }));
        };
    // Twenty edits without waiting: digits typed and deleted behind the 2 of the caustic, then
    // one that makes it 32 mmol/L, and a line on top.
    for version in 2..20 {
        let typed = version % 2 == 0;
        let (to, text) = if typed { ((3, 10), "7") } else { ((3, 11), "") };
        change(&mut server, version, (3, 10), to, text);
    }
    change(&mut server, 20, (3, 9), (3, 10), "32");
    change(&mut server, 21, (0, 0), (0, 0), "# typed on top\n");
    let found = server.published(21);
    assert_eq!(found, vec!["6 expectation-not-met", "6 ph-past-corrosive-threshold"]);
    change(&mut server, 22, (4, 9), (4, 11), "2");
    assert_eq!(server.published(22), Vec::<String>::new());
    assert_eq!(server.end(true), Some(0));
}

#[test]
fn leaving_without_shutdown_is_an_error() {
    let mut server = Server::start();
    server.initialize();
    assert_eq!(server.end(false), Some(1));
}

#[test]
fn a_malformed_message_does_not_end_the_server() {
    let mut server = Server::start();
    let input = server.input.as_mut().expect("open");
    input.write_all(b"Content-Length: 9\r\n\r\n{\"broken\"").expect("the server reads");
    server.initialize();
    assert_eq!(server.end(true), Some(0));
}
