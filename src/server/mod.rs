//! The language server over stdio: the only room that names tower_lsp, lsp_types and tokio.
