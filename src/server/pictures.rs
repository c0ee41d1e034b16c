//! The command that draws a problem: it answers with the picture, and shows it where the
//! client shows files.

use std::path::Path;
use std::sync::{Arc, PoisonError};

use serde::Deserialize;
use serde_json::json;
use tower_lsp::jsonrpc::{Error, ErrorCode, Result};
use tower_lsp::lsp_types::*;

use super::analysis::{Offer, Picture, PictureWish};
use super::generation::Checked;
use super::session::Session;
use super::settings::DRAW;

/// Characters of a file's name that come from the title.
const LONGEST_NAME: usize = 60;

/// Reads the command's one argument: `uri`, and what the picture is to show.
pub fn read(params: ExecuteCommandParams) -> Result<PictureWish> {
    if params.command != DRAW {
        let words = format!("there is no command `{}`; there is `{DRAW}`", params.command);
        return Err(Error::invalid_params(words));
    }
    let Some(argument) = params.arguments.first().filter(|argument| argument["uri"].is_string())
    else {
        return Err(Error::invalid_params(format!("`{DRAW}` takes `{{\"uri\": …}}`")));
    };
    PictureWish::deserialize(argument)
        .map_err(|error| Error::invalid_params(format!("`{DRAW}` cannot be read: {error}")))
}

/// The command of an offer.
pub fn command(offer: Offer, uri: &Url) -> Command {
    let mut argument = json!(offer.wish);
    argument["uri"] = json!(uri);
    Command { title: offer.title, command: DRAW.into(), arguments: Some(vec![argument]) }
}

pub fn draw(checked: &Checked, wish: &PictureWish) -> std::result::Result<Picture, String> {
    checked.view.picture(&stem(&checked.uri), wish)
}

/// The file's name without what stands after its dot.
fn stem(uri: &Url) -> String {
    let path = uri.to_file_path().unwrap_or_else(|()| uri.path().into());
    Path::new(&path).file_stem().map_or("problem".into(), |stem| stem.display().to_string())
}

/// Why a request that was understood is not met.
pub fn refusal(words: String) -> Error {
    // `RequestFailed` of the protocol.
    Error { code: ErrorCode::ServerError(-32803), message: words.into(), data: None }
}

/// Writes the picture into the session's own folder and asks the client to show it, outside
/// the editor if need be: most editors would show an SVG as text.
pub fn show(session: &Arc<Session>, source: &Url, picture: &Picture) {
    let uri = match write(session, source, picture) {
        Ok(uri) => uri,
        Err(error) => return super::log(&format!("the picture cannot be shown: {error}")),
    };
    let session = session.clone();
    // The client may not answer before it has the answer to its own request.
    tokio::spawn(async move {
        let params = ShowDocumentParams {
            uri,
            external: Some(true),
            take_focus: Some(true),
            selection: None,
        };
        if !matches!(session.client.show_document(params).await, Ok(true)) {
            super::log("the editor did not show the picture");
        }
    });
}

fn write(session: &Session, source: &Url, picture: &Picture) -> std::io::Result<Url> {
    let mut folder = session.pictures.lock().unwrap_or_else(PoisonError::into_inner);
    let folder = match &mut *folder {
        Some(folder) => folder,
        none => none.insert(tempfile::Builder::new().prefix("lyate-").tempdir()?),
    };
    let plain = |c: char| if c.is_alphanumeric() { c } else { '-' };
    let name: String = format!("{} {}", stem(source), picture.title)
        .chars()
        .map(plain)
        .take(LONGEST_NAME)
        .collect();
    let path = folder.path().join(format!("{name}.svg"));
    std::fs::write(&path, &picture.svg)?;
    Url::from_file_path(&path).map_err(|()| std::io::ErrorKind::InvalidInput.into())
}
