//! What the client says it can do, and what we offer in return. Whatever a client does not announce it does not have.

use camino::Utf8PathBuf;
use serde_json::{Map, Value, json};
use tower_lsp::lsp_types::{
    ClientCapabilities, InitializeParams, MarkupKind, OneOf, PositionEncodingKind, SaveOptions, ServerCapabilities,
    TextDocumentSyncCapability, TextDocumentSyncKind, TextDocumentSyncOptions, TextDocumentSyncSaveOptions,
    WorkspaceFoldersServerCapabilities, WorkspaceServerCapabilities,
};

use super::from_proto;
use super::library::Pages;
use crate::text::Columns;

/// What was agreed with the client when the conversation began.
#[derive(Clone, Debug)]
pub struct Session {
    /// What a column counts.
    pub columns: Columns,
    /// The folders that the client has open; where it names none, the current folder.
    pub folders: Vec<Utf8PathBuf>,
    /// Hovers may be Markdown.
    pub markdown_hover: bool,
    /// Documentation of completions may be Markdown.
    pub markdown_completion: bool,
    /// Completions may hold placeholders.
    pub snippets: bool,
    /// Symbols may be nested.
    pub nested_symbols: bool,
    /// Definitions may say which characters they were asked about.
    pub definition_links: bool,
    /// Findings may name related places.
    pub related_information: bool,
    /// Findings may link to the page of their code.
    pub code_description: bool,
    /// Code actions may be sent as such, not only as commands.
    pub code_actions: bool,
    /// Code actions may be marked as the likeliest.
    pub preferred_actions: bool,
    /// Edits may name the version of the text that they are for.
    pub versioned_edits: bool,
    /// The client can be told to ask for inlay hints again.
    pub refresh_hints: bool,
    /// The client watches files for us when asked to.
    pub watches_files: bool,
    /// The pages of the built-in library and of the findings, as this client opens them.
    pub pages: Pages,
}

impl Session {
    /// Reads what the client announces.
    pub fn new(params: &InitializeParams) -> Session {
        let client = &params.capabilities;
        let text = client.text_document.clone().unwrap_or_default();
        let workspace = client.workspace.clone().unwrap_or_default();
        let hover = text.hover.and_then(|hover| hover.content_format).unwrap_or_default();
        let completion = text.completion.and_then(|completion| completion.completion_item).unwrap_or_default();
        let findings = text.publish_diagnostics.unwrap_or_default();
        let actions = text.code_action.unwrap_or_default();
        let is_markdown = |kinds: &[MarkupKind]| kinds.contains(&MarkupKind::Markdown);
        Session {
            columns: columns(client),
            folders: folders(params),
            markdown_hover: is_markdown(&hover),
            markdown_completion: is_markdown(&completion.documentation_format.unwrap_or_default()),
            snippets: completion.snippet_support.unwrap_or_default(),
            nested_symbols: text
                .document_symbol
                .and_then(|symbols| symbols.hierarchical_document_symbol_support)
                .unwrap_or_default(),
            definition_links: text.definition.and_then(|definition| definition.link_support).unwrap_or_default(),
            related_information: findings.related_information.unwrap_or_default(),
            code_description: findings.code_description_support.unwrap_or_default(),
            code_actions: actions.code_action_literal_support.is_some(),
            preferred_actions: actions.is_preferred_support.unwrap_or_default(),
            versioned_edits: workspace.workspace_edit.and_then(|edit| edit.document_changes).unwrap_or_default(),
            refresh_hints: workspace.inlay_hint.and_then(|hint| hint.refresh_support).unwrap_or_default(),
            watches_files: workspace
                .did_change_watched_files
                .and_then(|watch| watch.dynamic_registration)
                .unwrap_or_default(),
            pages: Pages::new(announces_library(client)),
        }
    }

    /// What we offer: only what is served.
    pub fn offer(&self) -> ServerCapabilities {
        ServerCapabilities {
            position_encoding: Some(match self.columns {
                Columns::Utf8 => PositionEncodingKind::UTF8,
                _ => PositionEncodingKind::UTF16,
            }),
            text_document_sync: Some(TextDocumentSyncCapability::Options(TextDocumentSyncOptions {
                open_close: Some(true),
                change: Some(TextDocumentSyncKind::INCREMENTAL),
                save: Some(TextDocumentSyncSaveOptions::SaveOptions(SaveOptions { include_text: Some(false) })),
                ..TextDocumentSyncOptions::default()
            })),
            workspace: Some(WorkspaceServerCapabilities {
                workspace_folders: Some(WorkspaceFoldersServerCapabilities {
                    supported: Some(true),
                    change_notifications: Some(OneOf::Left(true)),
                }),
                file_operations: None,
            }),
            ..ServerCapabilities::default()
        }
    }
}

/// UTF-8 where the client offers it, since that is how texts are kept; otherwise UTF-16, which every client must know.
fn columns(client: &ClientCapabilities) -> Columns {
    let offered = client.general.as_ref().and_then(|general| general.position_encodings.as_ref());
    match offered {
        Some(offered) if offered.contains(&PositionEncodingKind::UTF8) => Columns::Utf8,
        _ => Columns::Utf16,
    }
}

#[expect(deprecated, reason = "some editors still send only the older fields")]
fn folders(params: &InitializeParams) -> Vec<Utf8PathBuf> {
    let named = params.workspace_folders.iter().flatten().map(|folder| &folder.uri);
    let mut folders: Vec<Utf8PathBuf> = named.filter_map(from_proto::file_path).collect();
    if folders.is_empty() {
        folders.extend(params.root_uri.as_ref().and_then(from_proto::file_path));
    }
    if folders.is_empty() {
        folders.extend(params.root_path.as_ref().map(Utf8PathBuf::from));
    }
    if folders.is_empty() {
        folders.extend(std::env::current_dir().ok().and_then(|folder| Utf8PathBuf::from_path_buf(folder).ok()));
    }
    folders
}

fn announces_library(client: &ClientCapabilities) -> bool {
    let experimental = client.experimental.as_ref();
    experimental.and_then(|all| all.get("scrupleLibrary")).and_then(Value::as_bool).unwrap_or_default()
}

/// The parameters of `initialize` without what cannot be read. Editors newer than this server announce things that it has
/// no words for; that must not keep them from being served.
pub fn readable_initialize(params: Value) -> Value {
    let reads = |params: &Value| serde_json::from_value::<InitializeParams>(params.clone()).is_ok();
    if reads(&params) {
        return params;
    }
    let Value::Object(params) = params else { return json!({ "capabilities": {} }) };
    let mut readable = Map::new();
    for (name, value) in params {
        let value = if name == "capabilities" { readable_capabilities(value, &reads) } else { value };
        let mut alone = Map::from_iter([("capabilities".to_owned(), json!({}))]);
        alone.insert(name.clone(), value.clone());
        if reads(&Value::Object(alone)) {
            readable.insert(name, value);
        }
    }
    readable.entry("capabilities").or_insert_with(|| json!({}));
    Value::Object(readable)
}

/// The capabilities without each group, and within the groups without each member, that cannot be read alone.
fn readable_capabilities(capabilities: Value, reads: &impl Fn(&Value) -> bool) -> Value {
    let Value::Object(groups) = capabilities else { return json!({}) };
    let kept = groups.into_iter().filter_map(|(name, group)| {
        let alone = |group: &Value| json!({ "capabilities": { name.as_str(): group } });
        if reads(&alone(&group)) {
            return Some((name, group));
        }
        let Value::Object(members) = group else { return None };
        let members = members.into_iter().filter(|(member, value)| reads(&alone(&json!({ member.as_str(): value }))));
        let group = Value::Object(members.collect());
        Some((name, group))
    });
    Value::Object(kept.collect())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn session(params: Value) -> Session {
        Session::new(&serde_json::from_value(readable_initialize(params)).unwrap())
    }

    #[test]
    fn a_client_that_announces_nothing_gets_the_plain_protocol() {
        let session = session(json!({ "capabilities": {} }));
        assert_eq!(session.columns, Columns::Utf16);
        assert!(!session.markdown_hover && !session.snippets && !session.watches_files);
        assert_eq!(session.folders.len(), 1, "the current folder");
    }

    #[test]
    fn utf_8_is_taken_where_offered() {
        for (offered, columns) in [
            (json!(["utf-16"]), Columns::Utf16),
            (json!(["utf-16", "utf-8"]), Columns::Utf8),
            (json!(["utf-32"]), Columns::Utf16),
            (json!([]), Columns::Utf16),
        ] {
            let session = session(json!({ "capabilities": { "general": { "positionEncodings": offered } } }));
            assert_eq!(session.columns, columns);
            let answered = serde_json::to_value(session.offer()).unwrap()["positionEncoding"].clone();
            assert_eq!(answered, if columns == Columns::Utf8 { "utf-8" } else { "utf-16" });
        }
    }

    #[test]
    fn folders_come_from_the_newest_field_that_is_filled() {
        let folders = |params: Value| session(params).folders;
        let (a, b) = (json!("file:///a"), json!("file:///b"));
        let listed = json!({ "capabilities": {}, "rootUri": b, "workspaceFolders": [{ "uri": a, "name": "a" }] });
        assert_eq!(folders(listed), ["/a"]);
        assert_eq!(folders(json!({ "capabilities": {}, "rootUri": b, "workspaceFolders": null })), ["/b"]);
        assert_eq!(folders(json!({ "capabilities": {}, "rootPath": "/c" })), ["/c"]);
    }

    #[test]
    fn what_cannot_be_read_is_left_out_and_the_rest_kept() {
        let session = session(json!({
            "processId": "many",
            "trace": "compact",
            "capabilities": {
                "general": { "positionEncodings": ["utf-8"] },
                "textDocument": {
                    "hover": { "contentFormat": ["markdown"] },
                    "completion": { "completionItem": { "snippetSupport": "perhaps" } },
                    "somethingNew": { "deep": [1, 2] },
                },
                "window": 7,
                "experimental": { "scrupleLibrary": true },
            },
        }));
        assert!(session.markdown_hover && !session.snippets);
        assert_eq!(session.pages.uri("x.prep").unwrap().scheme(), "scruple-library");
        assert_eq!(session.columns, Columns::Utf8);
    }
}
