//! Keeps the order of messages. The protocol library runs handlers at the same time as
//! each other, so what changes a document is applied here, before the next message is
//! looked at, and each request is given the document as it was when it came in.

use std::borrow::Cow;
use std::cell::RefCell;
use std::future::Future;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::pin::Pin;
use std::sync::Arc;
use std::sync::atomic::Ordering;
use std::task::{Context, Poll};

use serde::de::DeserializeOwned;
use serde_json::value::RawValue;
use serde_json::{Value, json};
use tower::Service;
use tower_lsp::LspService;
use tower_lsp::jsonrpc::{Error, Id, Request};
use tower_lsp::lsp_types::*;

use super::backend::Backend;
use super::documents::{Changed, Snapshot};
use super::outbox::Reply;
use super::session::Session;
use super::settings::{Settings, roots};

/// What a running request has beside its parameters.
#[derive(Default)]
struct Desk {
    snapshot: Option<Snapshot>,
    written: RefCell<Option<Box<RawValue>>>,
}

tokio::task_local! {
    static DESK: Desk;
}

/// The document that the running request is about, as it was when the request came in;
/// none where it is not open.
pub fn snapshot() -> Option<Snapshot> {
    DESK.try_with(|desk| desk.snapshot.clone()).ok().flatten()
}

/// Puts down the running request's result as text, to be sent in place of what its
/// handler returns; see [`super::outbox`].
pub fn write(result: Result<Box<RawValue>, ()>) -> Result<(), Error> {
    let text = result.map_err(|()| Error::internal_error())?;
    // Outside a request there is nobody to send it to.
    let _ = DESK.try_with(|desk| desk.written.replace(Some(text)));
    Ok(())
}

/// The library's service, with documents kept in order around it.
pub struct InOrder {
    inner: LspService<Backend>,
    session: Arc<Session>,
}

/// What became of a message.
pub enum Taken {
    /// It is dealt with; requests have their answer.
    Done(Option<Reply>),
    /// The next message may only be taken once this is answered.
    First(Answer),
    Going(Answer),
    /// The session is over.
    Exit,
}

impl InOrder {
    pub fn new(inner: LspService<Backend>, session: Arc<Session>) -> Self {
        Self { inner, session }
    }

    /// Takes a request or notification.
    pub fn take(&mut self, request: Request) -> Taken {
        let id = request.id().cloned();
        catch_unwind(AssertUnwindSafe(|| self.receive(request)))
            .unwrap_or_else(|_| Taken::Done(panicked(id)))
    }

    fn receive(&mut self, request: Request) -> Taken {
        let (method, id, mut params) = request.into_parts();
        let mut first = false;
        match (method.as_ref(), &id) {
            ("initialize", Some(_)) => {
                // The library reads only an empty value, so that nothing odd in a
                // client's capabilities can keep it from starting.
                let said = params.unwrap_or_default();
                self.session.start(Settings::read(&said), roots(&said));
                params = Some(json!({ "capabilities": {} }));
                first = true;
            }
            ("initialized", _) => params = Some(json!({})),
            ("shutdown", Some(_)) => {
                // Many clients send null or {} here, which the library would refuse.
                params = None;
                if self.session.is_open() {
                    self.session.shut_down.store(true, Ordering::Relaxed);
                }
            }
            ("exit", None) => {
                self.session.documents.end();
                return Taken::Exit;
            }
            (other, None) if self.session.is_open() => {
                if let Some(changed) = self.apply(other, &mut params) {
                    match changed {
                        Ok(changed) => self.session.work_on(changed),
                        Err(error) => super::log(&format!("{method} cannot be read: {error}")),
                    }
                    return Taken::Done(None);
                }
            }
            // The library would leave these requests without any answer.
            (other, Some(id)) if other.starts_with("$/") => {
                return Taken::Done(Some(Reply::error(id.clone(), Error::method_not_found())));
            }
            _ => {}
        }
        let snapshot = params.as_ref().and_then(|params| self.snapshot(params));
        let answering = self.inner.call(rebuild(method, id.clone(), params));
        let desk = Desk { snapshot, written: RefCell::default() };
        let answering = DESK.scope(desk, async move {
            // Fails only after `exit`, when nothing comes here any more.
            let response = answering.await.ok().flatten()?;
            let written = DESK.with(|desk| desk.written.take());
            Some(match written {
                Some(written) if response.is_ok() => Reply::Written(response.id().clone(), written),
                _ => Reply::Library(response),
            })
        });
        let answer = Answer { id, answering: Box::pin(answering) };
        if first { Taken::First(answer) } else { Taken::Going(answer) }
    }

    fn snapshot(&self, params: &Value) -> Option<Snapshot> {
        let of_command = || params.pointer("/arguments/0/uri");
        let uri = params.pointer("/textDocument/uri").or_else(of_command)?.as_str()?;
        self.session.documents.snapshot(&Url::parse(uri).ok()?)
    }

    /// Applies a notification that changes documents; none where it is another.
    fn apply(
        &self,
        method: &str,
        params: &mut Option<Value>,
    ) -> Option<serde_json::Result<Changed>> {
        let documents = &self.session.documents;
        let mut params = || params.take().unwrap_or_default();
        Some(match method {
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
        })
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

fn panicked(id: Option<Id>) -> Option<Reply> {
    id.map(|id| Reply::error(id, Error::internal_error()))
}

/// The answer to come; an error where the request panics.
pub struct Answer {
    id: Option<Id>,
    answering: Pin<Box<dyn Future<Output = Option<Reply>> + Send>>,
}

impl Future for Answer {
    type Output = Option<Reply>;

    fn poll(mut self: Pin<&mut Self>, context: &mut Context<'_>) -> Poll<Option<Reply>> {
        let polled = catch_unwind(AssertUnwindSafe(|| self.answering.as_mut().poll(context)));
        polled.unwrap_or_else(|_| Poll::Ready(panicked(self.id.take())))
    }
}
