//! The loop that reads messages, hands them to the service and sends the answers. The
//! protocol library has one of its own, which ends at the first malformed message,
//! panics where the client has left, and goes on after `exit`.

use std::sync::Arc;
use std::time::Duration;

use futures_util::{SinkExt, StreamExt};
use tokio::io::{AsyncRead, AsyncReadExt, AsyncWrite};
use tokio::task::JoinSet;
use tokio::time::timeout;
use tower_lsp::jsonrpc::Error;
use tower_lsp::{ClientSocket, LspService};

use super::backend::Backend;
use super::envelope::Incoming;
use super::framing::Filter;
use super::order::{InOrder, Taken};
use super::outbox::{Outgoing, Reply};
use super::session::Session;

/// How long requests may go on once the client has left.
const GRACE: Duration = Duration::from_secs(2);

/// Serves one client, until `exit` or the input's end.
pub async fn serve(
    session: &Arc<Session>,
    service: LspService<Backend>,
    socket: ClientSocket,
    outgoing: Outgoing,
    mut reader: impl AsyncRead + Unpin,
    writer: impl AsyncWrite + Unpin + Send + 'static,
) {
    let outbox = &session.outbox;
    let mut service = InOrder::new(service, session.clone());
    let (mut asking, mut answers) = socket.split();
    let writing = tokio::spawn(outgoing.write(writer));
    let asked = tokio::spawn({
        let outbox = outbox.clone();
        async move {
            while let Some(request) = asking.next().await {
                outbox.send(&request);
            }
        }
    });
    let refreshing = tokio::spawn(session.clone().keep_refreshing());

    let mut requests = JoinSet::new();
    let mut filter = Filter::default();
    let mut chunk = vec![0; 1 << 16];
    let mut incoming = Vec::new();
    'reading: loop {
        let read = tokio::select! {
            read = reader.read(&mut chunk) => read,
            Some(_) = requests.join_next() => continue,
            () = outbox.closed() => break,
        };
        let Ok(1..) = read else { break };
        filter.push(&chunk[..read.unwrap_or(0)], &mut incoming);
        for incoming in incoming.drain(..) {
            match incoming {
                Incoming::Request(request) => match service.take(request) {
                    Taken::Done(reply) => reply.iter().for_each(|reply| outbox.reply(reply)),
                    Taken::First(answer) => {
                        answer.await.iter().for_each(|reply| outbox.reply(reply));
                    }
                    Taken::Going(answer) => {
                        let outbox = outbox.clone();
                        requests.spawn(async move {
                            if let Some(reply) = answer.await {
                                outbox.reply(&reply);
                            }
                        });
                    }
                    Taken::Exit => break 'reading,
                },
                // It cannot fail before `exit`; an answer to nothing is left out.
                Incoming::Response(response) => {
                    let _ = answers.send(response).await;
                }
                Incoming::Refused(refusal) => {
                    let message = refusal.message.into();
                    let error = Error { code: refusal.code, message, data: None };
                    outbox.reply(&Reply::error(refusal.id, error));
                }
            }
        }
    }

    let rest = async { while requests.join_next().await.is_some() {} };
    // What is not done by then is not waited for any longer.
    let _ = timeout(GRACE, rest).await;
    session.documents.end();
    refreshing.abort();
    asked.abort();
    outbox.close();
    let _ = timeout(GRACE, writing).await;
}
