//! What goes out to the client. Messages are written as text here and now, by whichever
//! thread has them: the protocol library would first build a tree of each, which takes
//! ten times as long and as much memory where an answer is large.

use serde::Serialize;
use serde_json::value::RawValue;
use tokio::io::{AsyncWrite, AsyncWriteExt};
use tokio::sync::mpsc::{UnboundedReceiver, UnboundedSender, unbounded_channel};
use tower_lsp::jsonrpc::{Error, Id, Response};

/// The sending end; clones send to the same client.
#[derive(Clone)]
pub struct Outbox(UnboundedSender<Option<Vec<u8>>>);

/// The receiving end.
pub struct Outgoing(UnboundedReceiver<Option<Vec<u8>>>);

/// An answer to a request.
pub enum Reply {
    Library(Response),
    /// A result that is written already.
    Written(Id, Box<RawValue>),
}

impl Reply {
    pub fn error(id: Id, error: Error) -> Self {
        Self::Library(Response::from_error(id, error))
    }
}

#[derive(Serialize)]
struct Written<'a> {
    jsonrpc: &'a str,
    id: &'a Id,
    result: &'a RawValue,
}

#[derive(Serialize)]
struct Notification<'a, T> {
    jsonrpc: &'a str,
    method: &'a str,
    params: T,
}

pub fn channel() -> (Outbox, Outgoing) {
    let (sender, receiver) = unbounded_channel();
    (Outbox(sender), Outgoing(receiver))
}

impl Outbox {
    pub fn reply(&self, reply: &Reply) {
        match reply {
            Reply::Library(response) => self.send(response),
            Reply::Written(id, result) => self.send(&Written { jsonrpc: "2.0", id, result }),
        }
    }

    pub fn notify(&self, method: &str, params: impl Serialize) {
        self.send(&Notification { jsonrpc: "2.0", method, params });
    }

    /// Sends a message. A client that has left gets none, which is nobody's error.
    pub fn send(&self, message: &impl Serialize) {
        // The length comes first, so it is written into room left for it.
        const ROOM: usize = 48;
        let mut bytes = vec![0; ROOM];
        if serde_json::to_writer(&mut bytes, message).is_ok() {
            let header = format!("Content-Length: {}\r\n\r\n", bytes.len() - ROOM);
            let start = ROOM - header.len();
            bytes[start..ROOM].copy_from_slice(header.as_bytes());
            bytes.drain(..start);
            let _ = self.0.send(Some(bytes));
        }
    }

    /// Lets the writing end once what was sent before is written.
    pub fn close(&self) {
        let _ = self.0.send(None);
    }

    /// Waits until nothing can be written any more.
    pub async fn closed(&self) {
        self.0.closed().await;
    }
}

impl Outgoing {
    /// Writes all that is sent, until it is closed or the client has left.
    pub async fn write(mut self, mut writer: impl AsyncWrite + Unpin) {
        while let Some(Some(bytes)) = self.0.recv().await {
            if writer.write_all(&bytes).await.is_err() || writer.flush().await.is_err() {
                return;
            }
        }
    }
}
