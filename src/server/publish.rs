//! What the client has been told of each open text. Findings are pushed, never offered for pulling: every client takes
//! pushed ones, and a client that got both would show each finding twice.

use std::collections::HashMap;

use futures::executor::block_on;
use tower_lsp::Client;
use tower_lsp::lsp_types::{Diagnostic, Url};

/// What was published last, by address.
pub struct Published {
    client: Client,
    last: HashMap<Url, (i32, Vec<Diagnostic>)>,
}

impl Published {
    /// Nothing so far.
    pub fn new(client: Client) -> Published {
        Published { client, last: HashMap::new() }
    }

    /// Tells the client the findings of a version, unless it knows them already. Each version is told, clean ones too: some
    /// clients wait for it, and findings of an earlier conversation must vanish.
    pub fn publish(&mut self, uri: &Url, version: i32, findings: Vec<Diagnostic>) {
        let told = (version, findings);
        if self.last.get(uri) == Some(&told) {
            return;
        }
        let findings = told.1.clone();
        self.last.insert(uri.clone(), told);
        // The channel to the client is drained whatever the client does, so this waits for nobody outside.
        block_on(self.client.publish_diagnostics(uri.clone(), findings, Some(version)));
    }

    /// A closed text has no findings any more.
    pub fn clear(&mut self, uri: &Url) {
        self.last.remove(uri);
        block_on(self.client.publish_diagnostics(uri.clone(), Vec::new(), None));
    }
}
