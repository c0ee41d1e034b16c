//! Keeps the order of messages. The protocol library runs handlers at the same time as
//! each other, so what changes a document is applied here, before the library sees the
//! next message, and each request is given the document as it was when it came in.

use std::borrow::Cow;
use std::future::{Future, ready};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::pin::Pin;
use std::sync::Arc;
use std::sync::atomic::Ordering;
use std::task::{Context, Poll};

use serde::de::DeserializeOwned;
use serde_json::{Value, json};
use tower::Service;
use tower_lsp::jsonrpc::{Error, ErrorCode, Id, Request, Response};
use tower_lsp::lsp_types::*;
use tower_lsp::{ExitedError, LspService};

use super::backend::Backend;
use super::documents::Snapshot;
use super::session::Session;
use super::settings::{Settings, roots};
use super::transport::MALFORMED;

tokio::task_local! {
    static SNAPSHOT: Option<Snapshot>;
}

/// The document that the running request is about, as it was when the request came in;
/// none where it is not open.
pub fn snapshot() -> Option<Snapshot> {
    SNAPSHOT.try_with(Clone::clone).ok().flatten()
}

/// The library's service, with documents kept in order around it.
pub struct InOrder {
    inner: LspService<Backend>,
    session: Arc<Session>,
}

impl InOrder {
    pub fn new(inner: LspService<Backend>, session: Arc<Session>) -> Self {
        Self { inner, session }
    }
}

type Answer = Result<Option<Response>, ExitedError>;
type Answering = Pin<Box<dyn Future<Output = Answer> + Send>>;

impl Service<Request> for InOrder {
    type Response = Option<Response>;
    type Error = ExitedError;
    type Future = Answering;

    fn poll_ready(&mut self, context: &mut Context<'_>) -> Poll<Result<(), ExitedError>> {
        self.inner.poll_ready(context)
    }

    fn call(&mut self, request: Request) -> Answering {
        let id = request.id().cloned();
        let answering = catch_unwind(AssertUnwindSafe(|| self.receive(request)));
        Box::pin(Guarded {
            id: id.clone(),
            answering: answering.unwrap_or_else(|_| Box::pin(ready(panicked(id)))),
        })
    }
}

impl InOrder {
    fn receive(&mut self, request: Request) -> Answering {
        let (method, id, mut params) = request.into_parts();
        match method.as_ref() {
            MALFORMED => return Box::pin(ready(Ok(id.map(|id| malformed(id, params))))),
            "initialize" if id.is_some() => {
                // The library reads only an empty value, so that nothing odd in a
                // client's capabilities can keep it from starting.
                let said = params.unwrap_or_default();
                self.session.start(Settings::read(&said), roots(&said));
                params = Some(json!({ "capabilities": {} }));
            }
            "initialized" => params = Some(json!({})),
            // Many clients send null or {} here, which the library would refuse.
            "shutdown" | "exit" => {
                params = None;
                match (method.as_ref(), &id) {
                    ("shutdown", Some(_)) if self.session.is_open() => {
                        self.session.shut_down.store(true, Ordering::Relaxed);
                    }
                    ("exit", None) => self.session.documents.end(),
                    _ => {}
                }
            }
            _ if id.is_none() && self.session.is_open() => {
                if let Some(said) = self.apply(&method, &mut params) {
                    if let Err(error) = said {
                        super::log(&format!("{method} cannot be read: {error}"));
                    }
                    return Box::pin(ready(Ok(None)));
                }
            }
            // The library would leave these requests without any answer.
            other if other.starts_with("$/") => {
                if let Some(id) = id {
                    let error = Error::method_not_found();
                    return Box::pin(ready(Ok(Some(Response::from_error(id, error)))));
                }
            }
            _ => {}
        }
        let snapshot = params.as_ref().and_then(|params| self.snapshot(params));
        let call = self.inner.call(rebuild(method, id, params));
        Box::pin(SNAPSHOT.scope(snapshot, call))
    }

    fn snapshot(&self, params: &Value) -> Option<Snapshot> {
        let uri = params.get("textDocument")?.get("uri")?.as_str()?;
        self.session.documents.snapshot(&Url::parse(uri).ok()?)
    }

    /// Applies a notification that changes documents; none where it is another.
    fn apply(&self, method: &str, params: &mut Option<Value>) -> Option<serde_json::Result<()>> {
        let documents = &self.session.documents;
        let mut params = || params.take().unwrap_or_default();
        let changed = match method {
            "textDocument/didOpen" => read(params()).map(|said: DidOpenTextDocumentParams| {
                let document = said.text_document;
                documents.open(document.uri, document.version, document.text)
            }),
            "textDocument/didChange" => read(params()).map(|said: DidChangeTextDocumentParams| {
                let VersionedTextDocumentIdentifier { uri, version } = said.text_document;
                let encoding = self.session.settings().encoding;
                documents.change(&uri, version, said.content_changes, encoding)
            }),
            "textDocument/didClose" => read(params())
                .map(|said: DidCloseTextDocumentParams| documents.close(&said.text_document.uri)),
            "workspace/didChangeWatchedFiles" => {
                read(params()).map(|said: DidChangeWatchedFilesParams| {
                    let paths = said.changes.iter().filter_map(|file| file.uri.to_file_path().ok());
                    documents.changed_on_disk(paths.collect())
                })
            }
            "workspace/didChangeWorkspaceFolders" => {
                read(params()).map(|said: DidChangeWorkspaceFoldersParams| {
                    self.change_folders(said.event);
                    documents.recheck_all()
                })
            }
            _ => return None,
        };
        Some(changed.map(|changed| {
            if changed.others {
                self.session.refresh();
            }
            self.session.work_on(changed.workers);
        }))
    }

    fn change_folders(&self, event: WorkspaceFoldersChangeEvent) {
        let paths = |folders: Vec<WorkspaceFolder>| -> Vec<_> {
            folders.into_iter().filter_map(|folder| folder.uri.to_file_path().ok()).collect()
        };
        let (removed, added) = (paths(event.removed), paths(event.added));
        self.session.set_roots(|roots| {
            let kept = roots.iter().filter(|root| !removed.contains(root)).cloned();
            kept.chain(added).collect()
        });
    }
}

fn read<T: DeserializeOwned>(params: Value) -> serde_json::Result<T> {
    serde_json::from_value(params)
}

fn rebuild(method: Cow<'static, str>, id: Option<Id>, params: Option<Value>) -> Request {
    let mut request = Request::build(method);
    if let Some(params) = params {
        request = request.params(params);
    }
    if let Some(id) = id {
        request = request.id(id);
    }
    request.finish()
}

/// The error that the framing filter found.
fn malformed(id: Id, params: Option<Value>) -> Response {
    let params = params.unwrap_or_default();
    let code = params["code"].as_i64().map_or(ErrorCode::ParseError, ErrorCode::from);
    let message = params["message"].as_str().unwrap_or("the message cannot be read").to_owned();
    Response::from_error(id, Error { code, message: message.into(), data: None })
}

fn panicked(id: Option<Id>) -> Answer {
    Ok(id.map(|id| Response::from_error(id, Error::internal_error())))
}

/// A request that answers with an error where it panics.
struct Guarded {
    id: Option<Id>,
    answering: Answering,
}

impl Future for Guarded {
    type Output = Answer;

    fn poll(mut self: Pin<&mut Self>, context: &mut Context<'_>) -> Poll<Answer> {
        let polled = catch_unwind(AssertUnwindSafe(|| self.answering.as_mut().poll(context)));
        polled.unwrap_or_else(|_| Poll::Ready(panicked(self.id.take())))
    }
}
