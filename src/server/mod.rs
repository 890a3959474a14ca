//! The language server over stdio: the only room that names tower_lsp, lsp_types and tokio.
//!
//! A message takes this way: `framing` reads it, `serve` runs its first step in order of arrival, `language_server` converts
//! it, `world` owns what it changes or asks a pool to answer it from a snapshot, `to_proto` converts what comes back.

mod capabilities;
mod documents;
mod framing;
mod from_proto;
mod guard;
mod language_server;
mod log;
mod publish;
mod serve;
mod to_proto;
mod watchdog;
mod world;

use std::io;
use std::path::Path;

use tower_lsp::LspService;

/// Serves one editor over standard input and output, and returns the exit code for the process. The caller should end the
/// process with it at once: a thread may still wait for input.
///
/// # Errors
/// Where the log file cannot be opened or the operating system gives no threads.
pub fn run(log: Option<&Path>) -> io::Result<i32> {
    if let Some(path) = log {
        log::open(path)?;
    }
    guard::install_hook();
    let (service, socket) = LspService::build(language_server::Server::new).finish();
    let runtime = tokio::runtime::Builder::new_multi_thread().worker_threads(2).enable_time().build()?;
    let ending = runtime.block_on(serve::serve(service, socket, io::stdin(), io::stdout()));
    runtime.shutdown_background();
    Ok(ending.code())
}
