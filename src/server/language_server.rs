//! The protocol's methods: convert in, ask the world, convert out.

use std::sync::OnceLock;

use tower_lsp::jsonrpc::Result;
use tower_lsp::lsp_types::{
    DidChangeTextDocumentParams, DidCloseTextDocumentParams, DidOpenTextDocumentParams, DidSaveTextDocumentParams,
    InitializeParams, InitializeResult, InitializedParams, ServerInfo,
};
use tower_lsp::{Client, LanguageServer, async_trait};

use super::capabilities::Session;
use super::log;
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

    async fn initialized(&self, _: InitializedParams) {}

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

    async fn did_save(&self, _: DidSaveTextDocumentParams) {}

    async fn did_close(&self, params: DidCloseTextDocumentParams) {
        if let Some(world) = self.world() {
            world.close(&params.text_document.uri);
        }
    }
}
