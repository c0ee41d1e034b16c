//! The protocol's requests, each a thin adapter: wait for the analysis of the text that
//! the request was sent about, then let the feature's file make the answer.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;

use serde::Serialize;
use serde_json::value::to_raw_value;
use serde_json::{Value, to_value};
use tokio::task::spawn_blocking;
use tower_lsp::jsonrpc::{Error, ErrorCode, Result};
use tower_lsp::lsp_types::*;
use tower_lsp::{LanguageServer, async_trait};

use super::documents::Missing;
use super::generation::Checked;
use super::session::Session;
use super::settings::Settings;
use super::{actions, diagnostics, hints, hover, order, pictures, symbols};

pub struct Backend {
    session: Arc<Session>,
}

impl Backend {
    pub fn new(session: Arc<Session>) -> Self {
        Self { session }
    }

    pub fn session(&self) -> &Arc<Session> {
        &self.session
    }

    /// Answers about the document as it was when the request came in; with null where it
    /// is not open. Never about another text: where that has changed, the request ends.
    ///
    /// The answer is written at once, so handlers have nothing left to return.
    async fn answer<T: Serialize>(&self, make: impl FnOnce(&Checked) -> T) -> Result<()> {
        let Some(snapshot) = order::snapshot() else { return Ok(()) };
        let checked = self.session.documents.checked(snapshot).await.map_err(missing)?;
        // Caught here as well as around the whole request, so that the library forgets
        // the request's id.
        let written = catch_unwind(AssertUnwindSafe(|| to_raw_value(&make(&checked))));
        order::write(written.map_err(drop).and_then(|written| written.map_err(drop)))
    }

    /// The same for an answer that takes long to make. Meanwhile others are served.
    async fn answer_aside<T: Serialize>(
        &self,
        make: impl FnOnce(&Checked, &Settings) -> T + Send + 'static,
    ) -> Result<()> {
        let Some(snapshot) = order::snapshot() else { return Ok(()) };
        let documents = &self.session.documents;
        let checked = documents.checked(snapshot.clone()).await.map_err(missing)?;
        let session = self.session.clone();
        let written = spawn_blocking(move || to_raw_value(&make(&checked, session.settings())));
        let written = written.await.map_err(drop).and_then(|written| written.map_err(drop));
        if !documents.is_current(&snapshot) {
            return Err(missing(Missing::Superseded));
        }
        order::write(written)
    }
}

fn missing(why: Missing) -> Error {
    match why {
        Missing::Superseded => Error::content_modified(),
        Missing::Failed => Error::internal_error(),
    }
}

#[async_trait]
impl LanguageServer for Backend {
    async fn initialize(&self, _: InitializeParams) -> Result<InitializeResult> {
        Ok(InitializeResult {
            capabilities: self.session.settings().capabilities(),
            server_info: Some(ServerInfo {
                name: env!("CARGO_PKG_NAME").into(),
                version: Some(env!("CARGO_PKG_VERSION").into()),
            }),
        })
    }

    async fn initialized(&self, _: InitializedParams) {
        if let Some(watches) = self.session.settings().watches() {
            // A client that says no has no watches; there is nothing to do about it.
            let _ = self.session.client.register_capability(vec![watches]).await;
        }
    }

    async fn shutdown(&self) -> Result<()> {
        Ok(())
    }

    async fn hover(&self, params: HoverParams) -> Result<Option<Hover>> {
        let position = params.text_document_position_params.position;
        let (analyser, settings) = (&*self.session.analyser, self.session.settings());
        self.answer(|checked| hover::hover(checked, position, analyser, settings)).await?;
        Ok(None)
    }

    async fn inlay_hint(&self, params: InlayHintParams) -> Result<Option<Vec<InlayHint>>> {
        let settings = self.session.settings();
        self.answer(|checked| hints::hints(checked, params.range, settings)).await?;
        Ok(None)
    }

    async fn document_symbol(
        &self,
        _: DocumentSymbolParams,
    ) -> Result<Option<DocumentSymbolResponse>> {
        self.answer_aside(symbols::symbols).await?;
        Ok(None)
    }

    async fn code_action(&self, params: CodeActionParams) -> Result<Option<CodeActionResponse>> {
        let settings = self.session.settings();
        self.answer(|checked| actions::actions(checked, &params, settings)).await?;
        Ok(None)
    }

    async fn execute_command(&self, params: ExecuteCommandParams) -> Result<Option<Value>> {
        let wish = pictures::read(params)?;
        let Some(snapshot) = order::snapshot() else {
            return Err(pictures::refusal("the file is not open in the editor".into()));
        };
        let documents = &self.session.documents;
        let checked = documents.checked(snapshot).await.map_err(missing)?;
        let uri = checked.uri.clone();
        let drawn = spawn_blocking(move || pictures::draw(&checked, &wish)).await;
        let picture = drawn.map_err(|_| Error::internal_error())?.map_err(pictures::refusal)?;
        if self.session.settings().show_document {
            pictures::show(&self.session, &uri, &picture);
        }
        order::write(to_raw_value(&picture).map_err(drop))?;
        Ok(None)
    }

    async fn diagnostic(
        &self,
        params: DocumentDiagnosticParams,
    ) -> Result<DocumentDiagnosticReportResult> {
        if !self.session.settings().pull {
            return Err(Error::method_not_found());
        }
        let known = params.previous_result_id.as_deref();
        let answered =
            self.answer(|checked| diagnostics::Answer::new(checked.report.as_deref(), known)).await;
        answered.map_err(|error| match error.code {
            ErrorCode::ContentModified => server_cancelled(),
            _ => error,
        })?;
        // For a document that is not open.
        Ok(DocumentDiagnosticReport::from(RelatedFullDocumentDiagnosticReport::default()).into())
    }
}

/// Invites the client to ask for the diagnostics of the text as it is now.
fn server_cancelled() -> Error {
    let data = DiagnosticServerCancellationData { retrigger_request: true };
    Error {
        code: ErrorCode::ServerError(-32802),
        message: "Server cancelled".into(),
        data: to_value(data).ok(),
    }
}
