//! The editor's protocol: the only room that knows lines, UTF-16 and its types.
//!
//! Bytes come in through [`stdio`], are cut into messages by [`framing`] and read by
//! [`envelope`], in the loop of [`connection`]. [`order`] applies edits to [`documents`]
//! in the order received and hands every request its snapshot; [`session`] analyses
//! documents on blocking threads through the seam in [`analysis`]; [`backend`] answers
//! requests, one file per feature, and [`outbox`] sends the answers.

pub mod actions;
pub mod analysis;
mod backend;
pub mod checker;
mod connection;
pub mod convert;
pub mod diagnostics;
mod documents;
mod envelope;
mod framing;
mod generation;
mod hints;
mod hover;
mod order;
mod outbox;
mod pictures;
mod place;
mod session;
mod settings;
mod stdio;
mod symbols;

use std::io::Write;
use std::process::ExitCode;
use std::sync::atomic::Ordering;
use std::sync::{Arc, PoisonError};
use std::time::Duration;

use tokio::io::{AsyncRead, AsyncWrite};
use tokio::runtime::Builder;
use tower_lsp::LspService;

use analysis::Analyser;
use backend::Backend;
use session::Session;
use stdio::{Input, Output};

/// Idle workers are kept this long, so that a pause in typing costs no new thread.
const IDLE_WORKER: Duration = Duration::from_secs(300);
const WORKERS: usize = 16;

/// How a session ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ending {
    /// The client asked to shut down first.
    Orderly,
    Abrupt,
}

impl From<Ending> for ExitCode {
    fn from(ending: Ending) -> Self {
        match ending {
            Ending::Orderly => ExitCode::SUCCESS,
            Ending::Abrupt => ExitCode::FAILURE,
        }
    }
}

/// Serves one client on standard input and output, until `exit` or the input's end.
pub fn run(analyser: Arc<dyn Analyser>) -> ExitCode {
    std::panic::set_hook(Box::new(|panic| {
        log(&format!("a defect was met: {}", panic.to_string().replace('\n', " ")));
    }));
    // One thread for the protocol, and blocking ones for the work: an edit then passes
    // through as few hands as it can.
    let runtime = Builder::new_current_thread()
        .enable_time()
        .max_blocking_threads(WORKERS)
        .thread_keep_alive(IDLE_WORKER)
        .build();
    let served = runtime.and_then(|runtime| {
        let (input, output) = (Input::start()?, Output::new()?);
        let ending = runtime.block_on(serve(analyser, input, output));
        runtime.shutdown_background();
        Ok(ending)
    });
    match served {
        Ok(ending) => ending.into(),
        Err(error) => {
            log(&format!("the server cannot start: {error}"));
            ExitCode::FAILURE
        }
    }
}

/// Serves one client on any pair of streams, inside a runtime with timers.
pub async fn serve(
    analyser: Arc<dyn Analyser>,
    reader: impl AsyncRead + Unpin,
    writer: impl AsyncWrite + Unpin + Send + 'static,
) -> Ending {
    let (outbox, outgoing) = outbox::channel();
    let (service, socket) =
        LspService::new(|client| Backend::new(Session::new(analyser, client, outbox)));
    let session = service.inner().session().clone();
    connection::serve(&session, service, socket, outgoing, reader, writer).await;
    // Workers may hold the session a little longer.
    drop(session.pictures.lock().unwrap_or_else(PoisonError::into_inner).take());
    if session.shut_down.load(Ordering::Relaxed) { Ending::Orderly } else { Ending::Abrupt }
}

/// One line for whoever reads the server's log. A lost log is no reason to stop.
fn log(line: &str) {
    let _ = writeln!(std::io::stderr(), "lyate: {line}");
}
