//! `scruple serve`: the language server, for editors.

use std::io;
use std::path::{Path, PathBuf};

use clap::Args;

use super::{Ending, Trouble};

/// Serve an editor over standard input and output (Language Server Protocol)
#[derive(Debug, Args)]
pub(super) struct Serve {
    /// Append what the server does to this file
    #[arg(long, value_name = "FILE")]
    log: Option<PathBuf>,
    /// Accepted because editors pass it; standard input and output are used anyway
    #[arg(long, hide = true)]
    stdio: bool,
    /// Accepted because editors pass it; the process of `initialize` is watched
    #[arg(long = "clientProcessId", value_name = "ID", hide = true)]
    client_process_id: Option<u32>,
}

impl Serve {
    pub fn run(&self, server: impl FnOnce(Option<&Path>) -> io::Result<i32>) -> Result<Ending, Trouble> {
        match server(self.log.as_deref()) {
            Ok(code) => Ok(Ending::Code(code)),
            Err(error) => Err(Trouble(format!("The server cannot start: {error}."))),
        }
    }
}
