//! The language server over stdio: the only room that names tower_lsp, lsp_types and tokio.
//!
//! A message takes this way: `framing` reads it, `serve` runs its first step in order of arrival, `language_server` converts
//! it, `world` takes it to the `owner` of all state or to a pool that answers from a snapshot, `to_proto` converts what comes
//! back.

mod capabilities;
mod documents;
mod framing;
mod from_proto;
mod guard;
mod indexing;
mod language_server;
mod library;
mod log;
mod owner;
mod publish;
mod serve;
mod settings;
mod to_proto;
mod token_memory;
mod view;
mod watch;
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
    // The threads that build snapshots are the process's shared ones, which by default have little stack.
    let built = rayon::ThreadPoolBuilder::new().stack_size(world::STACK).build_global();
    if let Err(error) = built {
        log::write(format_args!("the threads that compute stay as they are: {error}"));
    }
    let service = LspService::build(language_server::Server::new);
    let service = service.custom_method("scruple/libraryText", language_server::Server::library_text);
    let (service, socket) = service.custom_method("scruple/sheet", language_server::Server::sheet).finish();
    let runtime = tokio::runtime::Builder::new_multi_thread().worker_threads(2).enable_time().build()?;
    let ending = runtime.block_on(serve::serve(service, socket, io::stdin(), io::stdout()));
    runtime.shutdown_background();
    Ok(ending.code())
}
