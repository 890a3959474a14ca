//! The protocol's methods: convert in, ask the world, convert out.

use std::sync::OnceLock;

use camino::Utf8Path;
use serde_json::{Value, json};
use tower_lsp::jsonrpc::{Error, ErrorCode, Result};
use tower_lsp::lsp_types::*;
use tower_lsp::{Client, LanguageServer, async_trait};

use super::capabilities::{Session, TELL_COMMAND};
use super::library::{LibraryText, LibraryTextParams};
use super::settings::{SECTION, Settings};
use super::token_memory::TokenMemory;
use super::view::View;
use super::world::{Kind, World};
use super::{from_proto, library, log, to_proto};
use crate::editor;
use crate::text::Span;
use crate::workspace::FileState;

/// The protocol's code for a request that is understood and cannot be done, with a sentence that says why.
const REQUEST_FAILED: i64 = -32803;

/// The server behind the protocol's methods. Its state is the world's; what a handler changes it pushes there before it
/// waits for anything.
pub struct Server {
    client: Client,
    world: OnceLock<World>,
    tokens: TokenMemory,
}

impl Server {
    /// A server that waits for `initialize`.
    pub fn new(client: Client) -> Server {
        Server { client, world: OnceLock::new(), tokens: TokenMemory::default() }
    }

    /// `scruple/libraryText`: the text of a page of the built-in library or of a finding.
    ///
    /// # Errors
    /// Where there is no such page.
    pub async fn library_text(&self, params: LibraryTextParams) -> Result<LibraryText> {
        let name = params.uri.path().trim_start_matches('/');
        let text = library::text(name).filter(|_| params.uri.scheme() == library::SCHEME);
        let text = text.ok_or_else(|| Error::invalid_params(format!("There is no page {}.", params.uri)))?;
        Ok(LibraryText { text: text.to_owned() })
    }

    /// `scruple/sheet`: the sheet of the solution at a position, nothing outside solutions.
    ///
    /// # Errors
    /// As those of any question: the text was changed meanwhile, or a fault of our own.
    pub async fn sheet(&self, params: TextDocumentPositionParams) -> Result<Option<to_proto::RecipeSheet>> {
        self.ask_at(params, Kind::Typing, to_proto::recipe_sheet).await
    }

    fn world(&self) -> Result<&World> {
        self.world.get().ok_or_else(Error::internal_error)
    }

    /// Asks something about a file; nothing is known of a file that is neither open nor part of a library of recipes.
    async fn ask<T: Default + Send + 'static>(
        &self,
        document: &TextDocumentIdentifier,
        kind: Kind,
        compute: impl FnOnce(&View, &FileState) -> T + Send + 'static,
    ) -> Result<T> {
        let answer = |view: &View, path: &Utf8Path| view.file(path).map(|file| compute(view, file)).unwrap_or_default();
        self.world()?.ask(&document.uri, kind, answer).await
    }

    /// Asks something about a position.
    async fn ask_at<T: Default + Send + 'static>(
        &self,
        at: TextDocumentPositionParams,
        kind: Kind,
        compute: impl FnOnce(&View, &FileState, usize) -> T + Send + 'static,
    ) -> Result<T> {
        let position = at.position;
        self.ask(&at.text_document, kind, move |view, file| compute(view, file, view.offset(file, position))).await
    }

    /// Asks the client for the user's settings. The client may take its time; nothing waits for its answer.
    fn fetch_settings(&self) {
        let (client, Ok(world)) = (self.client.clone(), self.world().cloned()) else { return };
        tokio::spawn(async move {
            let section = ConfigurationItem { scope_uri: None, section: Some(SECTION.to_owned()) };
            match client.configuration(vec![section]).await {
                Ok(values) => world.settings(Settings::read(values.first().unwrap_or(&Value::Null))),
                Err(error) => log::write(format_args!("no settings: {error}")),
            }
        });
    }

    /// Asks the client to tell us of changes: of a recipe or a configuration on disk, of the user's settings.
    fn register(&self, session: &Session) {
        let watcher = |pattern: &str| json!({ "globPattern": pattern });
        let registration = |id: &str, method: &str, options: Value| Registration {
            id: id.to_owned(),
            method: method.to_owned(),
            register_options: Some(options),
        };
        let files = || {
            let options = json!({ "watchers": [watcher("**/*.prep"), watcher("**/scruple.toml")] });
            registration("files", "workspace/didChangeWatchedFiles", options)
        };
        let settings = || registration("settings", "workspace/didChangeConfiguration", json!({ "section": SECTION }));
        let wanted = session.watches_files.then(files).into_iter().chain(session.registers_settings.then(settings));
        let wanted: Vec<Registration> = wanted.collect();
        let client = self.client.clone();
        if wanted.is_empty() {
            return;
        }
        tokio::spawn(async move {
            if let Err(error) = client.register_capability(wanted).await {
                log::write(format_args!("changes are not told: {error}"));
            }
        });
    }
}

#[async_trait]
impl LanguageServer for Server {
    async fn initialize(&self, params: InitializeParams) -> Result<InitializeResult> {
        if let Some(client) = &params.client_info {
            log::write(format_args!("client: {} {}", client.name, client.version.as_deref().unwrap_or_default()));
        }
        let session = Session::new(&params);
        let capabilities = session.offer();
        let settings = Settings::read(params.initialization_options.as_ref().unwrap_or(&Value::Null));
        let _ = self.world.set(World::start(session, settings, self.client.clone()));
        let version = Some(env!("CARGO_PKG_VERSION").to_owned());
        Ok(InitializeResult { capabilities, server_info: Some(ServerInfo { name: "scruple".to_owned(), version }) })
    }

    async fn initialized(&self, _: InitializedParams) {
        let Ok(world) = self.world() else { return };
        self.register(world.session());
        if world.session().gives_settings {
            self.fetch_settings();
        }
    }

    async fn shutdown(&self) -> Result<()> {
        Ok(())
    }

    async fn did_open(&self, params: DidOpenTextDocumentParams) {
        if let Ok(world) = self.world() {
            world.open(params.text_document);
        }
    }

    async fn did_change(&self, params: DidChangeTextDocumentParams) {
        if let Ok(world) = self.world() {
            let document = params.text_document;
            world.change(&document.uri, document.version, params.content_changes);
        }
    }

    async fn did_save(&self, _: DidSaveTextDocumentParams) {
        if let Ok(world) = self.world() {
            world.save();
        }
    }

    async fn did_close(&self, params: DidCloseTextDocumentParams) {
        if let Ok(world) = self.world() {
            self.tokens.forget(&params.text_document.uri);
            world.close(&params.text_document.uri);
        }
    }

    async fn did_change_watched_files(&self, params: DidChangeWatchedFilesParams) {
        if let Ok(world) = self.world() {
            world.disk(params.changes.into_iter().map(|change| change.uri));
        }
    }

    async fn did_change_workspace_folders(&self, params: DidChangeWorkspaceFoldersParams) {
        if let Ok(world) = self.world() {
            let uris = |folders: Vec<WorkspaceFolder>| folders.into_iter().map(|folder| folder.uri);
            world.folders(uris(params.event.added), uris(params.event.removed));
        }
    }

    async fn did_change_configuration(&self, params: DidChangeConfigurationParams) {
        match self.world() {
            // Clients that can be asked send nothing of use here, or only what changed.
            Ok(world) if world.session().gives_settings => self.fetch_settings(),
            Ok(world) => world.settings(Settings::read(&params.settings)),
            Err(_) => (),
        }
    }

    async fn hover(&self, params: HoverParams) -> Result<Option<Hover>> {
        self.ask_at(params.text_document_position_params, Kind::Places, to_proto::hover).await
    }

    async fn completion(&self, params: CompletionParams) -> Result<Option<CompletionResponse>> {
        self.ask_at(params.text_document_position, Kind::Typing, to_proto::completions).await
    }

    async fn completion_resolve(&self, item: CompletionItem) -> Result<CompletionItem> {
        let Some(uri) = item.data.as_ref().and_then(Value::as_str).and_then(|uri| Url::parse(uri).ok()) else { return Ok(item) };
        let unresolved = item.clone();
        let resolved = move |view: &View, file: &FileState| Some(to_proto::resolved(view, file, item));
        Ok(self.ask(&TextDocumentIdentifier::new(uri), Kind::Typing, resolved).await?.unwrap_or(unresolved))
    }

    async fn signature_help(&self, params: SignatureHelpParams) -> Result<Option<SignatureHelp>> {
        self.ask_at(params.text_document_position_params, Kind::Places, to_proto::signature_help).await
    }

    async fn prepare_call_hierarchy(&self, params: CallHierarchyPrepareParams) -> Result<Option<Vec<CallHierarchyItem>>> {
        self.ask_at(params.text_document_position_params, Kind::Places, to_proto::prepare_call_hierarchy).await
    }

    async fn incoming_calls(&self, params: CallHierarchyIncomingCallsParams) -> Result<Option<Vec<CallHierarchyIncomingCall>>> {
        self.ask_at(place_of(params.item), Kind::Places, to_proto::incoming_calls).await
    }

    async fn outgoing_calls(&self, params: CallHierarchyOutgoingCallsParams) -> Result<Option<Vec<CallHierarchyOutgoingCall>>> {
        self.ask_at(place_of(params.item), Kind::Places, to_proto::outgoing_calls).await
    }

    async fn code_lens(&self, params: CodeLensParams) -> Result<Option<Vec<CodeLens>>> {
        self.ask(&params.text_document, Kind::Places, to_proto::code_lenses).await
    }

    async fn execute_command(&self, params: ExecuteCommandParams) -> Result<Option<Value>> {
        let mut arguments = params.arguments.into_iter();
        let uri = arguments.next().and_then(|uri| serde_json::from_value::<Url>(uri).ok());
        let position = arguments.next().and_then(|position| serde_json::from_value::<Position>(position).ok());
        let Some((uri, position)) = uri.zip(position).filter(|_| params.command == TELL_COMMAND) else {
            return Err(Error::invalid_params(format!("There is no command {} with these arguments.", params.command)));
        };
        let at = TextDocumentPositionParams::new(TextDocumentIdentifier::new(uri), position);
        if let Some(text) = self.ask_at(at, Kind::Places, to_proto::told).await? {
            self.client.show_message(MessageType::INFO, text).await;
        }
        Ok(None)
    }

    async fn diagnostic(&self, params: DocumentDiagnosticParams) -> Result<DocumentDiagnosticReportResult> {
        let known = params.previous_result_id;
        let report = move |view: &View, path: &Utf8Path| {
            to_proto::document_report(view, view.file(path).map(|file| file.as_ref()), known.as_deref())
        };
        let report = self.world()?.ask(&params.text_document.uri, Kind::Places, report).await?;
        Ok(DocumentDiagnosticReportResult::Report(report))
    }

    async fn workspace_diagnostic(&self, params: WorkspaceDiagnosticParams) -> Result<WorkspaceDiagnosticReportResult> {
        let known = params.previous_result_ids;
        let report = self.world()?.ask_all(move |view| to_proto::workspace_report(view, known)).await?;
        Ok(WorkspaceDiagnosticReportResult::Report(report))
    }

    async fn will_rename_files(&self, params: RenameFilesParams) -> Result<Option<WorkspaceEdit>> {
        let path = |uri: &str| from_proto::file_path(&Url::parse(uri).ok()?);
        let renames: Vec<_> = params.files.iter().filter_map(|file| Some((path(&file.old_uri)?, path(&file.new_uri)?))).collect();
        let edits = move |view: &View| {
            let edits = editor::file_renames(&view.snapshot, &renames);
            if edits.is_empty() { None } else { to_proto::workspace_edit(view, edits) }
        };
        self.world()?.ask_all(edits).await
    }

    async fn did_rename_files(&self, params: RenameFilesParams) {
        if let Ok(world) = self.world() {
            let uris = params.files.iter().flat_map(|file| [&file.old_uri, &file.new_uri]);
            world.disk(uris.filter_map(|uri| Url::parse(uri).ok()));
        }
    }

    async fn goto_definition(&self, params: GotoDefinitionParams) -> Result<Option<GotoDefinitionResponse>> {
        self.ask_at(params.text_document_position_params, Kind::Places, to_proto::definitions).await
    }

    async fn references(&self, params: ReferenceParams) -> Result<Option<Vec<Location>>> {
        let with_definition = params.context.include_declaration;
        let found = move |view: &View, file: &FileState, offset| to_proto::references(view, file, offset, with_definition);
        self.ask_at(params.text_document_position, Kind::Places, found).await.map(Some)
    }

    async fn document_highlight(&self, params: DocumentHighlightParams) -> Result<Option<Vec<DocumentHighlight>>> {
        self.ask_at(params.text_document_position_params, Kind::Places, to_proto::highlights).await.map(Some)
    }

    async fn prepare_rename(&self, params: TextDocumentPositionParams) -> Result<Option<PrepareRenameResponse>> {
        let prepared = |view: &View, file: &FileState, offset| {
            Some(editor::prepare_rename(&view.snapshot, file.id, offset).map(|rename| {
                let range = view.range(file, rename.span);
                PrepareRenameResponse::RangeWithPlaceholder { range, placeholder: rename.name }
            }))
        };
        self.ask_at(params, Kind::Places, prepared).await?.transpose().map_err(|refusal| refused(refusal.0))
    }

    async fn rename(&self, params: RenameParams) -> Result<Option<WorkspaceEdit>> {
        let renamed = move |view: &View, file: &FileState, offset| {
            let edits = editor::rename(&view.snapshot, file.id, offset, &params.new_name);
            Some(edits.map(|edits| to_proto::workspace_edit(view, edits)))
        };
        let edits = self.ask_at(params.text_document_position, Kind::Places, renamed).await?;
        edits.transpose().map(Option::flatten).map_err(|refusal| refused(refusal.0))
    }

    async fn document_symbol(&self, params: DocumentSymbolParams) -> Result<Option<DocumentSymbolResponse>> {
        self.ask(&params.text_document, Kind::Places, to_proto::document_symbols).await
    }

    async fn symbol(&self, params: WorkspaceSymbolParams) -> Result<Option<Vec<SymbolInformation>>> {
        self.world()?.ask_all(move |view| Some(to_proto::workspace_symbols(view, &params.query))).await
    }

    async fn document_link(&self, params: DocumentLinkParams) -> Result<Option<Vec<DocumentLink>>> {
        self.ask(&params.text_document, Kind::Places, to_proto::links).await.map(Some)
    }

    async fn folding_range(&self, params: FoldingRangeParams) -> Result<Option<Vec<FoldingRange>>> {
        self.ask(&params.text_document, Kind::Places, to_proto::folding_ranges).await.map(Some)
    }

    async fn selection_range(&self, params: SelectionRangeParams) -> Result<Option<Vec<SelectionRange>>> {
        let positions = params.positions;
        let grown = move |view: &View, file: &FileState| {
            let range = |position: &Position| to_proto::selection_range(view, file, view.offset(file, *position));
            Some(positions.iter().map(range).collect())
        };
        self.ask(&params.text_document, Kind::Places, grown).await
    }

    async fn semantic_tokens_full(&self, params: SemanticTokensParams) -> Result<Option<SemanticTokensResult>> {
        let all = |view: &View, file: &FileState| to_proto::semantic_tokens(view, file, whole(file));
        let data = self.ask(&params.text_document, Kind::Places, all).await?;
        Ok(Some(SemanticTokensResult::Tokens(self.tokens.whole(&params.text_document.uri, data))))
    }

    async fn semantic_tokens_full_delta(
        &self,
        params: SemanticTokensDeltaParams,
    ) -> Result<Option<SemanticTokensFullDeltaResult>> {
        let all = |view: &View, file: &FileState| to_proto::semantic_tokens(view, file, whole(file));
        let data = self.ask(&params.text_document, Kind::Places, all).await?;
        Ok(Some(self.tokens.difference(&params.text_document.uri, &params.previous_result_id, data)))
    }

    async fn semantic_tokens_range(&self, params: SemanticTokensRangeParams) -> Result<Option<SemanticTokensRangeResult>> {
        let range = params.range;
        let some = move |view: &View, file: &FileState| to_proto::semantic_tokens(view, file, view.span(file, range));
        let data = self.ask(&params.text_document, Kind::Places, some).await?;
        Ok(Some(SemanticTokensRangeResult::Tokens(SemanticTokens { result_id: None, data })))
    }

    async fn inlay_hint(&self, params: InlayHintParams) -> Result<Option<Vec<InlayHint>>> {
        let range = params.range;
        let hints = move |view: &View, file: &FileState| to_proto::inlay_hints(view, file, view.span(file, range));
        self.ask(&params.text_document, Kind::Places, hints).await.map(Some)
    }

    async fn code_action(&self, params: CodeActionParams) -> Result<Option<CodeActionResponse>> {
        let CodeActionParams { range, context, .. } = params;
        let actions = move |view: &View, file: &FileState| to_proto::code_actions(view, file, view.span(file, range), &context);
        self.ask(&params.text_document, Kind::Places, actions).await.map(Some)
    }

    async fn formatting(&self, params: DocumentFormattingParams) -> Result<Option<Vec<TextEdit>>> {
        let formatted = |view: &View, file: &FileState| {
            let edits = editor::formatting(&view.snapshot, file.id)?;
            Some(to_proto::text_edits(view, file, edits))
        };
        self.ask(&params.text_document, Kind::Places, formatted).await
    }

    async fn range_formatting(&self, params: DocumentRangeFormattingParams) -> Result<Option<Vec<TextEdit>>> {
        let range = params.range;
        let formatted = move |view: &View, file: &FileState| {
            let lines = view.whole_lines(file, range);
            let mut edits = editor::formatting(&view.snapshot, file.id)?;
            edits.retain(|(span, _)| lines.start <= span.start && span.end <= lines.end);
            Some(to_proto::text_edits(view, file, edits))
        };
        self.ask(&params.text_document, Kind::Places, formatted).await
    }
}

/// Where a thing of the hierarchy is named.
fn place_of(item: CallHierarchyItem) -> TextDocumentPositionParams {
    TextDocumentPositionParams::new(TextDocumentIdentifier::new(item.uri), item.selection_range.start)
}

fn whole(file: &FileState) -> Span {
    Span::new(0, file.source.len())
}

fn refused(message: String) -> Error {
    Error { code: ErrorCode::ServerError(REQUEST_FAILED), message: message.into(), data: None }
}

#[cfg(test)]
mod tests;
