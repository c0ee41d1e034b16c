//! What the client can do, read from its `initialize`, and what we offer in return.

use std::path::PathBuf;

use serde_json::Value;
use tower_lsp::lsp_types::*;

use super::convert::Encoding;

/// The source named beside each diagnostic, and the family of our code actions.
pub const SOURCE: &str = "lyate";
/// The code action that applies every safe fix.
pub const FIX_ALL: CodeActionKind = CodeActionKind::new("source.fixAll.lyate");

/// The command that draws a problem.
pub const DRAW: &str = "lyate.draw";
/// The code action that asks for it.
pub const DRAW_ACTION: CodeActionKind = CodeActionKind::new("source.draw.lyate");

/// What the client can do.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Settings {
    pub encoding: Encoding,
    /// Diagnostics are asked for by the client, and never pushed.
    pub pull: bool,
    pub diagnostic_refresh: bool,
    pub hint_refresh: bool,
    pub related_information: bool,
    pub markdown: bool,
    pub nested_symbols: bool,
    pub document_changes: bool,
    pub code_action_literals: bool,
    pub watch: bool,
    /// The client shows a file that it is told of.
    pub show_document: bool,
}

impl Settings {
    /// Read field by field, so that an odd value in a part that we never look at cannot
    /// fail the whole session.
    pub fn read(initialize: &Value) -> Self {
        let client = |path: &str| initialize.pointer(&format!("/capabilities/{path}"));
        let is = |path: &str| client(path) == Some(&Value::Bool(true));
        let lists = |path: &str, name: &str| {
            client(path)
                .and_then(Value::as_array)
                .is_some_and(|list| list.iter().any(|item| item == name))
        };
        Self {
            encoding: client("general/positionEncodings")
                .and_then(Value::as_array)
                .and_then(|list| list.iter().filter_map(Value::as_str).find_map(Encoding::named))
                .unwrap_or_default(),
            pull: client("textDocument/diagnostic").is_some_and(Value::is_object),
            diagnostic_refresh: is("workspace/diagnostics/refreshSupport")
                || is("workspace/diagnostic/refreshSupport"),
            hint_refresh: is("workspace/inlayHint/refreshSupport"),
            related_information: is("textDocument/publishDiagnostics/relatedInformation")
                || is("textDocument/diagnostic/relatedInformation"),
            markdown: lists("textDocument/hover/contentFormat", "markdown"),
            nested_symbols: is("textDocument/documentSymbol/hierarchicalDocumentSymbolSupport"),
            document_changes: is("workspace/workspaceEdit/documentChanges"),
            code_action_literals: client("textDocument/codeAction/codeActionLiteralSupport")
                .is_some_and(Value::is_object),
            show_document: is("window/showDocument/support"),
            watch: is("workspace/didChangeWatchedFiles/dynamicRegistration"),
        }
    }

    pub fn markup(&self, value: String) -> MarkupContent {
        let kind = if self.markdown { MarkupKind::Markdown } else { MarkupKind::PlainText };
        MarkupContent { kind, value }
    }

    /// What we offer this client.
    pub fn capabilities(&self) -> ServerCapabilities {
        ServerCapabilities {
            position_encoding: Some(self.encoding.kind()),
            text_document_sync: Some(TextDocumentSyncCapability::Options(
                TextDocumentSyncOptions {
                    open_close: Some(true),
                    change: Some(TextDocumentSyncKind::INCREMENTAL),
                    ..Default::default()
                },
            )),
            hover_provider: Some(HoverProviderCapability::Simple(true)),
            document_symbol_provider: Some(OneOf::Left(true)),
            inlay_hint_provider: Some(OneOf::Left(true)),
            code_action_provider: self.code_action_literals.then(|| {
                CodeActionProviderCapability::Options(CodeActionOptions {
                    code_action_kinds: Some(self.action_kinds()),
                    ..Default::default()
                })
            }),
            execute_command_provider: Some(ExecuteCommandOptions {
                commands: vec![DRAW.into()],
                ..Default::default()
            }),
            diagnostic_provider: self.pull.then(|| {
                DiagnosticServerCapabilities::Options(DiagnosticOptions {
                    identifier: Some(SOURCE.into()),
                    inter_file_dependencies: true,
                    workspace_diagnostics: false,
                    ..Default::default()
                })
            }),
            workspace: Some(WorkspaceServerCapabilities {
                workspace_folders: Some(WorkspaceFoldersServerCapabilities {
                    supported: Some(true),
                    change_notifications: Some(OneOf::Left(true)),
                }),
                file_operations: None,
            }),
            ..Default::default()
        }
    }

    fn action_kinds(&self) -> Vec<CodeActionKind> {
        let mut kinds = vec![CodeActionKind::QUICKFIX, FIX_ALL];
        kinds.extend(self.show_document.then_some(DRAW_ACTION));
        kinds
    }

    /// The watch on problem files that a client is asked to keep.
    pub fn watches(&self) -> Option<Registration> {
        self.watch.then(|| Registration {
            id: "lyate-files".into(),
            method: "workspace/didChangeWatchedFiles".into(),
            register_options: Some(serde_json::json!({
                "watchers": [{ "globPattern": "**/*.lyate" }]
            })),
        })
    }
}

/// The workspace's folders, from `initialize`: the list of them, else the older fields.
pub fn roots(initialize: &Value) -> Vec<PathBuf> {
    if let Some(folders) = initialize.get("workspaceFolders").and_then(Value::as_array) {
        return folders.iter().filter_map(|folder| folder_path(folder.get("uri")?)).collect();
    }
    let root = initialize.get("rootUri").and_then(folder_path);
    let older = || Some(PathBuf::from(initialize.get("rootPath")?.as_str()?));
    root.or_else(older).into_iter().collect()
}

fn folder_path(uri: &Value) -> Option<PathBuf> {
    Url::parse(uri.as_str()?).ok()?.to_file_path().ok()
}

#[cfg(test)]
mod tests {
    use serde_json::json;

    use super::*;

    #[test]
    fn the_first_known_encoding_wins_and_utf16_is_the_default() {
        let encoding = |list: Value| {
            Settings::read(&json!({"capabilities": {"general": {"positionEncodings": list}}}))
                .encoding
        };
        assert_eq!(encoding(json!(["utf-7", "utf-8", "utf-16"])), Encoding::Utf8);
        assert_eq!(encoding(json!(["utf-16", "utf-8"])), Encoding::Utf16);
        assert_eq!(encoding(json!(["utf-32"])), Encoding::Utf32);
        assert_eq!(encoding(json!(null)), Encoding::Utf16);
        assert_eq!(Settings::read(&json!({})).encoding, Encoding::Utf16);
    }

    #[test]
    fn roots_come_from_the_folders_or_the_older_fields() {
        let folder = json!({"uri": "file:///plant%20one", "name": "x"});
        assert_eq!(roots(&json!({"workspaceFolders": [folder]})), [PathBuf::from("/plant one")]);
        let old = json!({"workspaceFolders": null, "rootUri": "file:///a", "rootPath": "/b"});
        assert_eq!(roots(&old), [PathBuf::from("/a")]);
        assert_eq!(roots(&json!({"rootUri": null, "rootPath": "/b"})), [PathBuf::from("/b")]);
        assert!(roots(&json!({"rootUri": null})).is_empty());
        assert!(roots(&json!({"rootUri": "untitled:x"})).is_empty());
    }
}
