//! The protocol's methods: convert in, ask the world, convert out.

use std::sync::OnceLock;

use serde_json::json;
use tower_lsp::jsonrpc::{Error, Result};
use tower_lsp::lsp_types::{
    DidChangeTextDocumentParams, DidChangeWatchedFilesParams, DidChangeWorkspaceFoldersParams, DidCloseTextDocumentParams,
    DidOpenTextDocumentParams, DidSaveTextDocumentParams, InitializeParams, InitializeResult, InitializedParams, Registration,
    ServerInfo,
};
use tower_lsp::{Client, LanguageServer, async_trait};

use super::capabilities::Session;
use super::library::{LibraryText, LibraryTextParams};
use super::{library, log};
use super::world::World;

/// The server behind the protocol's methods. Its state is the world's; what a handler changes it pushes there before it
/// waits for anything.
pub struct Server {
    client: Client,
    world: OnceLock<World>,
}

impl Server {
    /// A server that waits for `initialize`.
    pub fn new(client: Client) -> Server {
        Server { client, world: OnceLock::new() }
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

    fn world(&self) -> Option<&World> {
        self.world.get()
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
        let _ = self.world.set(World::start(session, self.client.clone()));
        let version = Some(env!("CARGO_PKG_VERSION").to_owned());
        Ok(InitializeResult { capabilities, server_info: Some(ServerInfo { name: "scruple".to_owned(), version }) })
    }

    async fn initialized(&self, _: InitializedParams) {
        if self.world().is_some_and(|world| world.session().watches_files) {
            let client = self.client.clone();
            // The client may take its time; nothing waits for its answer.
            tokio::spawn(async move {
                if let Err(error) = client.register_capability(vec![watch_files()]).await {
                    log::write(format_args!("files are not watched: {error}"));
                }
            });
        }
    }

    async fn shutdown(&self) -> Result<()> {
        Ok(())
    }

    async fn did_open(&self, params: DidOpenTextDocumentParams) {
        if let Some(world) = self.world() {
            world.open(params.text_document);
        }
    }

    async fn did_change(&self, params: DidChangeTextDocumentParams) {
        if let Some(world) = self.world() {
            let document = params.text_document;
            world.change(&document.uri, document.version, params.content_changes);
        }
    }

    async fn did_save(&self, _: DidSaveTextDocumentParams) {
        if let Some(world) = self.world() {
            world.save();
        }
    }

    async fn did_close(&self, params: DidCloseTextDocumentParams) {
        if let Some(world) = self.world() {
            world.close(&params.text_document.uri);
        }
    }
    async fn did_change_watched_files(&self, params: DidChangeWatchedFilesParams) {
        if let Some(world) = self.world() {
            world.disk(params.changes.into_iter().map(|change| change.uri));
        }
    }

    async fn did_change_workspace_folders(&self, params: DidChangeWorkspaceFoldersParams) {
        if let Some(world) = self.world() {
            world.folders(params.event.added.into_iter().map(|folder| folder.uri));
        }
    }
}

/// Asks the client to tell us when a recipe or a configuration changes on disk.
fn watch_files() -> Registration {
    let watcher = |pattern: &str| json!({ "globPattern": pattern });
    let options = json!({ "watchers": [watcher("**/*.prep"), watcher("**/scruple.toml")] });
    let method = "workspace/didChangeWatchedFiles".to_owned();
    Registration { id: "files".to_owned(), method, register_options: Some(options) }
}
