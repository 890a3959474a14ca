//! The language server over stdio: the only room that names tower_lsp, lsp_types and tokio.

mod framing;
mod guard;
mod log;
mod serve;
mod watchdog;
