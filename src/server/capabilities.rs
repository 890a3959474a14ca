//! What the client says it can do, and what we offer in return. Whatever a client does not announce it does not have.

use camino::Utf8PathBuf;
use serde_json::{Map, Value, json};
use tower_lsp::lsp_types::*;

use super::from_proto;
use super::library::Pages;
use super::to_proto::token_legend;
use crate::text::Columns;

/// The kind of the action that applies all fixes that need no thought; users name it in their editor's settings for saving.
pub const FIX_ALL: CodeActionKind = CodeActionKind::new("source.fixAll.scruple");

/// The command that tells in words what a lens is about, for clients that cannot list places: address, position.
pub const TELL_COMMAND: &str = "scruple.tell";

/// Characters after which something is worth proposing: after a word or a comma comes the next part of a line, and a path
/// is completed folder by folder.
const TRIGGERS: &[char] = &[' ', ',', '/', '"'];

/// What was agreed with the client when the conversation began.
#[derive(Clone, Debug)]
pub struct Session {
    /// What a column counts.
    pub columns: Columns,
    /// The folders that the client has open. Where it names none there is none: the folder that an editor was started in says
    /// nothing about what the user works on.
    pub folders: Vec<Utf8PathBuf>,
    /// Hovers may be Markdown.
    pub markdown_hover: bool,
    /// Symbols may be nested.
    pub nested_symbols: bool,
    /// The client asks what a renaming would take before it asks the user for the new name.
    pub prepares_rename: bool,
    /// Definitions may say which characters they were asked about.
    pub definition_links: bool,
    /// Findings may name related places.
    pub related_information: bool,
    /// The ways in which findings may be drawn.
    pub finding_tags: Vec<DiagnosticTag>,
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
    /// The client asks for findings, and can be told to ask again. One that cannot be told would not see what a change of
    /// one file does to another; findings are pushed to it.
    pub pulls_findings: bool,
    /// The client can be told to ask for lenses again.
    pub refresh_lenses: bool,
    /// The client can be told to ask for colours again.
    pub refresh_tokens: bool,
    /// The client shows how far a long piece of work has come.
    pub shows_progress: bool,
    /// The client asks for the text about a completion once it is chosen.
    pub resolves_documentation: bool,
    /// Text about a completion may be Markdown.
    pub markdown_completion: bool,
    /// The client tells of changed settings only when asked to.
    pub registers_settings: bool,
    /// The client lists the uses of a recipe when a lens is chosen.
    pub shows_uses: bool,
    /// The client asks what else changes when files are renamed.
    pub asks_before_renaming: bool,
    /// The client can be asked for the user's settings.
    pub gives_settings: bool,
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
        let findings = text.publish_diagnostics.unwrap_or_default();
        let actions = text.code_action.unwrap_or_default();
        let item = text.completion.and_then(|completion| completion.completion_item).unwrap_or_default();
        let window = client.window.clone().unwrap_or_default();
        let refresh_findings = workspace.diagnostic.and_then(|findings| findings.refresh_support).unwrap_or_default();
        Session {
            columns: columns(client),
            folders: folders(params),
            markdown_hover: hover.contains(&MarkupKind::Markdown),
            nested_symbols: text
                .document_symbol
                .and_then(|symbols| symbols.hierarchical_document_symbol_support)
                .unwrap_or_default(),
            prepares_rename: text.rename.and_then(|rename| rename.prepare_support).unwrap_or_default(),
            definition_links: text.definition.and_then(|definition| definition.link_support).unwrap_or_default(),
            related_information: findings.related_information.unwrap_or_default(),
            finding_tags: findings.tag_support.map(|tags| tags.value_set).unwrap_or_default(),
            code_description: findings.code_description_support.unwrap_or_default(),
            code_actions: actions.code_action_literal_support.is_some(),
            preferred_actions: actions.is_preferred_support.unwrap_or_default(),
            versioned_edits: workspace.workspace_edit.and_then(|edit| edit.document_changes).unwrap_or_default(),
            refresh_hints: workspace.inlay_hint.and_then(|hint| hint.refresh_support).unwrap_or_default(),
            watches_files: workspace
                .did_change_watched_files
                .and_then(|watch| watch.dynamic_registration)
                .unwrap_or_default(),
            pulls_findings: text.diagnostic.is_some() && refresh_findings,
            refresh_lenses: workspace.code_lens.and_then(|lens| lens.refresh_support).unwrap_or_default(),
            refresh_tokens: workspace.semantic_tokens.and_then(|tokens| tokens.refresh_support).unwrap_or_default(),
            shows_progress: window.work_done_progress.unwrap_or_default(),
            resolves_documentation: item
                .resolve_support
                .is_some_and(|resolve| resolve.properties.iter().any(|property| property == "documentation")),
            markdown_completion: item.documentation_format.is_some_and(|formats| formats.contains(&MarkupKind::Markdown)),
            registers_settings: workspace
                .did_change_configuration
                .and_then(|change| change.dynamic_registration)
                .unwrap_or_default(),
            shows_uses: announces(client, "scrupleShowUses"),
            asks_before_renaming: workspace.file_operations.and_then(|files| files.will_rename).unwrap_or_default(),
            gives_settings: workspace.configuration.unwrap_or_default(),
            pages: Pages::new(announces(client, "scrupleLibrary")),
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
            hover_provider: Some(HoverProviderCapability::Simple(true)),
            completion_provider: Some(CompletionOptions {
                trigger_characters: Some(TRIGGERS.iter().map(ToString::to_string).collect()),
                resolve_provider: Some(true),
                ..CompletionOptions::default()
            }),
            definition_provider: Some(OneOf::Left(true)),
            references_provider: Some(OneOf::Left(true)),
            document_highlight_provider: Some(OneOf::Left(true)),
            document_symbol_provider: Some(OneOf::Left(true)),
            workspace_symbol_provider: Some(OneOf::Left(true)),
            document_link_provider: Some(DocumentLinkOptions {
                resolve_provider: Some(false),
                work_done_progress_options: WorkDoneProgressOptions::default(),
            }),
            folding_range_provider: Some(FoldingRangeProviderCapability::Simple(true)),
            selection_range_provider: Some(SelectionRangeProviderCapability::Simple(true)),
            semantic_tokens_provider: Some(SemanticTokensServerCapabilities::SemanticTokensOptions(SemanticTokensOptions {
                legend: token_legend(),
                range: Some(true),
                full: Some(SemanticTokensFullOptions::Delta { delta: Some(true) }),
                work_done_progress_options: WorkDoneProgressOptions::default(),
            })),
            inlay_hint_provider: Some(OneOf::Left(true)),
            code_action_provider: Some(CodeActionProviderCapability::Options(CodeActionOptions {
                code_action_kinds: Some(vec![
                    CodeActionKind::QUICKFIX,
                    CodeActionKind::REFACTOR_REWRITE,
                    CodeActionKind::REFACTOR_EXTRACT,
                    CodeActionKind::REFACTOR_INLINE,
                    FIX_ALL,
                ]),
                ..CodeActionOptions::default()
            })),
            rename_provider: Some(OneOf::Right(RenameOptions {
                prepare_provider: Some(self.prepares_rename),
                work_done_progress_options: WorkDoneProgressOptions::default(),
            })),
            document_formatting_provider: Some(OneOf::Left(true)),
            document_range_formatting_provider: Some(OneOf::Left(true)),
            // No characters ask for it: it would open at every word of a line.
            signature_help_provider: Some(SignatureHelpOptions::default()),
            call_hierarchy_provider: Some(CallHierarchyServerCapability::Simple(true)),
            code_lens_provider: Some(CodeLensOptions { resolve_provider: Some(false) }),
            execute_command_provider: Some(ExecuteCommandOptions {
                commands: vec![TELL_COMMAND.to_owned()],
                work_done_progress_options: WorkDoneProgressOptions::default(),
            }),
            diagnostic_provider: self.pulls_findings.then(|| {
                DiagnosticServerCapabilities::Options(DiagnosticOptions {
                    identifier: Some("scruple".to_owned()),
                    inter_file_dependencies: true,
                    workspace_diagnostics: true,
                    work_done_progress_options: WorkDoneProgressOptions::default(),
                })
            }),
            workspace: Some(WorkspaceServerCapabilities {
                workspace_folders: Some(WorkspaceFoldersServerCapabilities {
                    supported: Some(true),
                    change_notifications: Some(OneOf::Left(true)),
                }),
                file_operations: self.asks_before_renaming.then(file_operations),
            }),
            ..ServerCapabilities::default()
        }
    }
}

/// The files and folders whose renaming concerns us.
fn file_operations() -> WorkspaceFileOperationsServerCapabilities {
    let filter = |glob: &str, matches| FileOperationFilter {
        scheme: Some("file".to_owned()),
        pattern: FileOperationPattern { glob: glob.to_owned(), matches: Some(matches), options: None },
    };
    let filters = vec![filter("**/*.prep", FileOperationPatternKind::File), filter("**", FileOperationPatternKind::Folder)];
    let options = Some(FileOperationRegistrationOptions { filters });
    WorkspaceFileOperationsServerCapabilities {
        will_rename: options.clone(),
        did_rename: options,
        ..WorkspaceFileOperationsServerCapabilities::default()
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
    folders
}

/// Whether a client announces something that is ours.
fn announces(client: &ClientCapabilities, name: &str) -> bool {
    let experimental = client.experimental.as_ref();
    experimental.and_then(|all| all.get(name)).and_then(Value::as_bool).unwrap_or_default()
}

/// The parameters of `initialize` without what cannot be read. Editors newer than this server announce things that it has
/// no words for; that must not keep them from being served.
pub fn readable_initialize(mut params: Value) -> Value {
    // The types at hand know this group by an older name.
    if let Some(workspace) = params.pointer_mut("/capabilities/workspace").and_then(Value::as_object_mut)
        && let Some(group) = workspace.remove("diagnostics")
    {
        workspace.insert("diagnostic".to_owned(), group);
    }
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
        assert!(!session.markdown_hover && !session.nested_symbols && !session.watches_files);
        assert!(session.folders.is_empty());
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
    fn findings_are_pulled_only_by_clients_that_can_be_told_to_ask_again() {
        for (refresh, pulled) in [(json!({ "refreshSupport": true }), true), (json!({}), false)] {
            let capabilities = json!({ "textDocument": { "diagnostic": {} }, "workspace": { "diagnostics": refresh } });
            let session = session(json!({ "capabilities": capabilities }));
            assert_eq!((session.pulls_findings, session.offer().diagnostic_provider.is_some()), (pulled, pulled));
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
                    "documentSymbol": { "hierarchicalDocumentSymbolSupport": "perhaps" },
                    "somethingNew": { "deep": [1, 2] },
                },
                "window": 7,
                "experimental": { "scrupleLibrary": true },
            },
        }));
        assert!(session.markdown_hover && !session.nested_symbols);
        assert_eq!(session.pages.uri("x.prep").unwrap().scheme(), "scruple-library");
        assert_eq!(session.columns, Columns::Utf8);
    }
}
