//! `scruple completions`: what a shell needs to complete this program's words.

use clap::{Args, Command};
use clap_complete::{Shell, generate};

use super::terminal::Terminal;
use super::{Ending, Trouble};

/// Print a completion script for a shell
#[derive(Debug, Args)]
pub(super) struct Completions {
    /// The shell
    #[arg(value_name = "SHELL")]
    shell: Shell,
}

impl Completions {
    pub fn run(&self, terminal: &Terminal, command: &mut Command) -> Result<Ending, Trouble> {
        let mut script = Vec::new();
        generate(self.shell, command, "scruple", &mut script);
        terminal.print_raw(&String::from_utf8_lossy(&script))?;
        Ok(Ending::Clean)
    }
}
