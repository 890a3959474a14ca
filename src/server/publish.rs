//! What the client has been told of each text, where findings are pushed. A client that pulls them is pushed none: it would
//! show each finding twice.

use std::collections::{BTreeSet, HashMap};

use futures::executor::block_on;
use tower_lsp::Client;
use tower_lsp::lsp_types::{Diagnostic, Url};

/// What was published last, by address.
pub struct Published {
    client: Client,
    last: HashMap<Url, (Option<i32>, Vec<Diagnostic>)>,
}

impl Published {
    /// Nothing so far.
    pub fn new(client: Client) -> Published {
        Published { client, last: HashMap::new() }
    }

    /// Tells the client the findings of a version, unless it knows them already. Each version is told, clean ones too: some
    /// clients wait for it, and findings of an earlier conversation must vanish.
    pub fn publish(&mut self, uri: &Url, version: i32, findings: Vec<Diagnostic>) {
        let told = (Some(version), findings);
        if self.last.get(uri) != Some(&told) {
            self.last.insert(uri.clone(), told.clone());
            self.send(uri, told);
        }
    }

    /// Tells the client the findings of a file that it need not have open; a file that never had any is not mentioned.
    pub fn publish_file(&mut self, uri: &Url, findings: Vec<Diagnostic>) {
        let told = (None, findings);
        let known = self.last.get(uri).map_or(told.1.is_empty(), |last| *last == told);
        if !known {
            self.last.insert(uri.clone(), told.clone());
            self.send(uri, told);
        }
    }

    /// Clears the findings of files that it need not have open, except of those that are still there.
    pub fn keep_files(&mut self, there: &BTreeSet<Url>) {
        let is_gone = |(uri, (version, _)): (&Url, &(Option<i32>, Vec<Diagnostic>))| version.is_none() && !there.contains(uri);
        let gone: Vec<Url> = self.last.iter().filter(|one| is_gone(*one)).map(|(uri, _)| uri.clone()).collect();
        for uri in gone {
            self.clear(&uri);
        }
    }

    /// A closed text has no findings any more.
    pub fn clear(&mut self, uri: &Url) {
        self.last.remove(uri);
        self.send(uri, (None, Vec::new()));
    }

    fn send(&self, uri: &Url, (version, findings): (Option<i32>, Vec<Diagnostic>)) {
        // The channel to the client is drained whatever the client does, so this waits for nobody outside.
        block_on(self.client.publish_diagnostics(uri.clone(), findings, version));
    }
}
