//! The `scruple` program: argument dispatch, nothing else.

use std::io::{Write, stderr};
use std::path::PathBuf;
use std::process::exit;

use clap::{Parser, Subcommand};

/// Checks the recipes of laboratory solutions, and serves editors in which they are written.
#[derive(Parser)]
#[command(version, arg_required_else_help = true)]
struct Arguments {
    #[command(subcommand)]
    verb: Verb,
}

#[derive(Subcommand)]
enum Verb {
    /// Serve an editor over standard input and output (Language Server Protocol)
    Serve {
        /// Append what the server does to this file
        #[arg(long, value_name = "FILE")]
        log: Option<PathBuf>,
        /// Accepted because editors pass it; standard input and output are used anyway
        #[arg(long, hide = true)]
        stdio: bool,
        /// Accepted because editors pass it; the process of `initialize` is watched
        #[arg(long = "clientProcessId", value_name = "ID", hide = true)]
        client_process_id: Option<u32>,
    },
}

fn main() {
    let code = match Arguments::parse().verb {
        Verb::Serve { log, .. } => scruple::server::run(log.as_deref()),
    };
    let code = code.unwrap_or_else(|error| {
        // With standard error closed too there is nowhere left to say it.
        let _ = writeln!(stderr(), "scruple: {error}");
        2
    });
    exit(code);
}
