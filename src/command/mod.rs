//! The command line: one file per verb. Exit codes: 0 where all is well, 1 where findings reach the failing level (or a file
//! is not formatted), 2 where the command line, a file or a configuration cannot be used.

mod check;
mod compare;
mod completions;
mod explain;
mod format;
mod git;
mod git_drivers;
mod init;
mod lookup;
mod paths;
mod progress;
mod serve;
mod show;
mod terminal;

use std::io;
use std::path::Path;

use clap::{ColorChoice as ColorOption, CommandFactory, Parser, Subcommand};

use crate::library;
use terminal::Terminal;

/// Checks the recipes of laboratory solutions: amounts, pH and everything else that a reviewer would work out again.
#[derive(Debug, Parser)]
#[command(
    name = "scruple",
    version = version(),
    arg_required_else_help = true,
    after_help = "Exit codes: 0 all is well; 1 findings at or above the failing level; 2 a command, file or configuration that cannot be used."
)]
struct Arguments {
    /// When to use colours; NO_COLOR and CLICOLOR_FORCE count where it is auto
    #[arg(long, global = true, value_name = "WHEN", default_value_t = ColorOption::Auto)]
    color: ColorOption,
    #[command(subcommand)]
    verb: Verb,
}

#[derive(Debug, Subcommand)]
enum Verb {
    Check(check::Check),
    Compare(compare::Compare),
    Show(show::Show),
    Format(format::Format),
    Lookup(lookup::Lookup),
    Explain(explain::Explain),
    Init(init::Init),
    Git(git_drivers::Git),
    Serve(serve::Serve),
    Completions(completions::Completions),
}

/// How a verb ended that could do its work.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Ending {
    /// All is well.
    Clean,
    /// There is something that fails a check.
    Failing,
    /// It was done as far as it could be; what could not be used has been said.
    Unusable,
    /// The exit code that a server was told.
    Code(i32),
}

/// Why a verb could not do its work: one sentence for the user.
#[derive(Debug)]
struct Trouble(String);

impl Ending {
    fn code(self) -> i32 {
        match self {
            Ending::Clean => 0,
            Ending::Failing => 1,
            Ending::Unusable => 2,
            Ending::Code(code) => code,
        }
    }
}

/// Runs what the command line says and returns the exit code of the process. `server` is what `serve` starts, with the log file
/// that the user asks for; it is handed in because command line and server do not know each other.
pub fn run(server: impl FnOnce(Option<&Path>) -> io::Result<i32>) -> i32 {
    let arguments = match Arguments::try_parse() {
        Ok(arguments) => arguments,
        Err(error) => {
            // A closed output leaves nobody to tell.
            let _ = error.print();
            return error.exit_code();
        }
    };
    let terminal = Terminal::new(arguments.color);
    let ended = match arguments.verb {
        Verb::Check(check) => check.run(&terminal),
        Verb::Compare(compare) => compare.run(&terminal),
        Verb::Show(show) => show.run(&terminal),
        Verb::Format(format) => format.run(&terminal),
        Verb::Lookup(lookup) => lookup.run(&terminal),
        Verb::Explain(explain) => explain.run(&terminal),
        Verb::Init(init) => init.run(&terminal),
        Verb::Git(git) => git.run(&terminal),
        Verb::Serve(serve) => serve.run(server),
        Verb::Completions(completions) => completions.run(&terminal, &mut Arguments::command()),
    };
    match ended {
        Ok(ending) => ending.code(),
        Err(Trouble(sentence)) => {
            terminal.complain(&sentence);
            Ending::Unusable.code()
        }
    }
}

/// The program's version, the commit that it was built from where the build says so, and the version of its constants.
fn version() -> &'static str {
    let commit = option_env!("SCRUPLE_COMMIT").map(|commit| format!(" ({commit})")).unwrap_or_default();
    format!("{}{commit}, built-in library {}", env!("CARGO_PKG_VERSION"), library::VERSION).leak()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_command_line_is_consistent() {
        Arguments::command().debug_assert();
    }
}
