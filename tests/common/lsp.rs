//! A client of the language server for tests, in the same process and over a pipe in
//! memory. Every wait ends after a while with what was awaited.

#![allow(dead_code, reason = "each test file uses a part of it")]

use std::collections::VecDeque;
use std::sync::Arc;
use std::time::Duration;

use lyate::server::analysis::Analyser;
use lyate::server::{Ending, serve};
use serde_json::{Value, json};
use tokio::io::{
    AsyncBufReadExt, AsyncReadExt, AsyncWriteExt, BufReader, DuplexStream, ReadHalf, WriteHalf,
};
use tokio::sync::mpsc::{UnboundedReceiver, UnboundedSender, unbounded_channel};
use tokio::task::JoinHandle;

pub const PATIENCE: Duration = Duration::from_secs(30);

pub struct Client {
    writer: WriteHalf<DuplexStream>,
    incoming: UnboundedReceiver<Value>,
    kept: VecDeque<Value>,
    next_id: i64,
    server: JoinHandle<Ending>,
    /// What the server asked of the client, each answered with null.
    pub asked: Vec<Value>,
    pub capabilities: Value,
}

/// What a client can do that has its diagnostics pushed.
pub fn pushed() -> Value {
    json!({
        "textDocument": {
            "publishDiagnostics": { "relatedInformation": true, "versionSupport": true },
            "hover": { "contentFormat": ["markdown", "plaintext"] },
            "documentSymbol": { "hierarchicalDocumentSymbolSupport": true },
            "codeAction": { "codeActionLiteralSupport": { "codeActionKind": { "valueSet": ["quickfix"] } } },
        },
        "workspace": { "workspaceEdit": { "documentChanges": true }, "inlayHint": { "refreshSupport": true } },
        "general": { "positionEncodings": ["utf-16"] },
    })
}

/// What a client can do that asks for diagnostics.
pub fn pulled() -> Value {
    let mut capabilities = pushed();
    capabilities["textDocument"]["diagnostic"] = json!({ "dynamicRegistration": true });
    capabilities["workspace"]["diagnostics"] = json!({ "refreshSupport": true });
    capabilities
}

impl Client {
    /// A client that has not said anything yet.
    pub fn silent(analyser: Arc<dyn Analyser>) -> Self {
        let (ours, theirs) = tokio::io::duplex(1 << 20);
        let (reader, writer) = tokio::io::split(ours);
        let (server_reader, server_writer) = tokio::io::split(theirs);
        let server = tokio::spawn(serve(analyser, server_reader, server_writer));
        let (sender, incoming) = unbounded_channel();
        tokio::spawn(receive(reader, sender));
        Self {
            writer,
            incoming,
            kept: VecDeque::new(),
            next_id: 1,
            server,
            asked: Vec::new(),
            capabilities: Value::Null,
        }
    }

    pub async fn start(analyser: Arc<dyn Analyser>, capabilities: Value) -> Self {
        let mut client = Self::silent(analyser);
        let params = json!({ "processId": null, "rootUri": null, "capabilities": capabilities });
        let answer = client.ask("initialize", params).await.expect("initialize succeeds");
        client.capabilities = answer["capabilities"].clone();
        client.notify("initialized", json!({})).await;
        client
    }

    pub async fn raw(&mut self, bytes: &[u8]) {
        self.writer.write_all(bytes).await.expect("the server reads");
    }

    pub async fn notify(&mut self, method: &str, params: Value) {
        self.raw(&frame(&json!({ "jsonrpc": "2.0", "method": method, "params": params }))).await;
    }

    /// Sends a request and returns its id.
    pub async fn request(&mut self, method: &str, params: Value) -> i64 {
        let id = self.next_id;
        self.next_id += 1;
        let message = json!({ "jsonrpc": "2.0", "id": id, "method": method, "params": params });
        self.raw(&frame(&message)).await;
        id
    }

    /// Sends a request and waits for its answer: a result, or an error's code and all.
    pub async fn ask(&mut self, method: &str, params: Value) -> Result<Value, Value> {
        let id = self.request(method, params).await;
        self.answer(id).await
    }

    pub async fn answer(&mut self, id: i64) -> Result<Value, Value> {
        self.answer_to(json!(id)).await
    }

    pub async fn answer_to(&mut self, id: Value) -> Result<Value, Value> {
        let what = format!("an answer to {id}");
        let mut message = self
            .wait(&what, |message| message.get("method").is_none() && message["id"] == id)
            .await;
        match message.get_mut("error") {
            Some(error) => Err(error.take()),
            None => Ok(message["result"].take()),
        }
    }

    pub async fn ask_about(
        &mut self,
        method: &str,
        uri: &str,
        more: Value,
    ) -> Result<Value, Value> {
        let id = self.request_about(method, uri, more).await;
        self.answer(id).await
    }

    pub async fn request_about(&mut self, method: &str, uri: &str, more: Value) -> i64 {
        let mut params = json!({ "textDocument": { "uri": uri } });
        if let (Some(params), Value::Object(more)) = (params.as_object_mut(), more) {
            params.extend(more);
        }
        self.request(method, params).await
    }

    pub async fn open(&mut self, uri: &str, version: i32, text: &str) {
        let document =
            json!({ "uri": uri, "languageId": "lyate", "version": version, "text": text });
        self.notify("textDocument/didOpen", json!({ "textDocument": document })).await;
    }

    pub async fn change(&mut self, uri: &str, version: i32, changes: Value) {
        let document = json!({ "uri": uri, "version": version });
        let params = json!({ "textDocument": document, "contentChanges": changes });
        self.notify("textDocument/didChange", params).await;
    }

    pub async fn close(&mut self, uri: &str) {
        self.notify("textDocument/didClose", json!({ "textDocument": { "uri": uri } })).await;
    }

    /// The diagnostics pushed for this version.
    pub async fn published(&mut self, uri: &str, version: i32) -> Vec<Value> {
        let what = format!("diagnostics of version {version}");
        let mut message = self
            .wait(&what, |message| {
                is_publish(message, uri) && message["params"]["version"] == version
            })
            .await;
        match message["params"]["diagnostics"].take() {
            Value::Array(list) => list,
            other => panic!("diagnostics are a list, not {other}"),
        }
    }

    /// The next message of a method, from the server.
    pub async fn next(&mut self, method: &str) -> Value {
        self.wait(method, |message| message["method"] == method).await
    }

    /// All messages that have come and that come within a time without any.
    pub async fn rest(&mut self, quiet: Duration) -> Vec<Value> {
        while let Ok(Some(message)) = tokio::time::timeout(quiet, self.incoming.recv()).await {
            self.take(message).await;
        }
        self.kept.drain(..).collect()
    }

    pub async fn wait(&mut self, what: &str, wanted: impl Fn(&Value) -> bool) -> Value {
        loop {
            if let Some(at) = self.kept.iter().position(&wanted) {
                return self.kept.remove(at).expect("it was just found");
            }
            match tokio::time::timeout(PATIENCE, self.incoming.recv()).await {
                Ok(Some(message)) => self.take(message).await,
                Ok(None) => panic!("the server has gone; awaited: {what}; kept: {:?}", self.kept),
                Err(_) => panic!("nothing came; awaited: {what}; kept: {:?}", self.kept),
            }
        }
    }

    async fn take(&mut self, message: Value) {
        if message.get("method").is_some() && message.get("id").is_some() {
            let answer = json!({ "jsonrpc": "2.0", "id": message["id"], "result": null });
            self.raw(&frame(&answer)).await;
            self.asked.push(message.clone());
        }
        self.kept.push_back(message);
    }

    /// Ends the session as the protocol says.
    pub async fn stop(mut self) -> Ending {
        let answer = self.ask("shutdown", Value::Null).await;
        assert_eq!(answer, Ok(Value::Null));
        self.notify("exit", Value::Null).await;
        self.ended().await
    }

    /// Waits for the server to end by itself.
    pub async fn ended(self) -> Ending {
        tokio::time::timeout(PATIENCE, self.server)
            .await
            .expect("the server ends")
            .expect("it does not panic")
    }

    /// Closes the pipe and waits for the server to end.
    pub async fn leave(mut self) -> Ending {
        self.writer.shutdown().await.expect("the pipe closes");
        self.ended().await
    }
}

pub fn is_publish(message: &Value, uri: &str) -> bool {
    message["method"] == "textDocument/publishDiagnostics" && message["params"]["uri"] == uri
}

pub fn frame(message: &Value) -> Vec<u8> {
    let body = message.to_string();
    format!("Content-Length: {}\r\n\r\n{body}", body.len()).into_bytes()
}

async fn receive(reader: ReadHalf<DuplexStream>, sender: UnboundedSender<Value>) {
    let mut reader = BufReader::new(reader);
    loop {
        let mut length = 0;
        loop {
            let mut line = String::new();
            if reader.read_line(&mut line).await.unwrap_or(0) == 0 {
                return;
            }
            match line.trim_end().split_once(": ") {
                Some((name, value)) => {
                    assert_eq!(name, "Content-Length");
                    length = value.parse().expect("a length");
                }
                None => break,
            }
        }
        let mut body = vec![0; length];
        if reader.read_exact(&mut body).await.is_err() {
            return;
        }
        let message = serde_json::from_slice(&body).expect("the server writes JSON");
        if sender.send(message).is_err() {
            return;
        }
    }
}
