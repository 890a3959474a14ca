//! `scruple check`: every finding of the recipes, with its line, and whether they pass.

use clap::{Args, ValueEnum};

use super::paths::{Opened, open};
use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::finding::Level;
use crate::report::{configuration_excerpt, configuration_findings, excerpt, finding_reports};

/// Check recipes: report every finding, and fail on those that matter
#[derive(Debug, Args)]
pub(super) struct Check {
    /// Recipe files, or folders that hold them
    #[arg(value_name = "PATH", required = true)]
    paths: Vec<String>,
    /// The lowest level of finding that fails the check
    #[arg(long, value_name = "LEVEL", value_enum, default_value_t = FailOn::Error)]
    fail_on: FailOn,
    /// How findings are written
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum FailOn {
    Error,
    Warning,
    Hint,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Format {
    /// With source lines, for people
    Text,
    /// An array of findings, for programs
    Json,
}

impl FailOn {
    fn level(self) -> Level {
        match self {
            FailOn::Error => Level::Error,
            FailOn::Warning => Level::Warning,
            FailOn::Hint => Level::Hint,
        }
    }
}

impl Check {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        let opened = open(&self.paths)?;
        match self.format {
            Format::Text => print_text(&opened, terminal)?,
            Format::Json => {
                let broken = opened.configuration.iter().flat_map(|(file, errors)| configuration_findings(file, errors));
                let findings: Vec<_> = broken.chain(finding_reports(&opened.selection)).collect();
                terminal.print_json(&findings)?;
            }
        }
        if !opened.configuration.is_empty() {
            return Ok(Ending::Unusable);
        }
        let fails = opened.selection.findings().any(|(_, located)| located.finding.level >= self.fail_on.level());
        Ok(if fails { Ending::Failing } else { Ending::Clean })
    }
}

fn print_text(opened: &Opened, terminal: &Terminal) -> Result<(), Trouble> {
    let width = terminal.width();
    for (file, errors) in &opened.configuration {
        for error in errors {
            terminal.print(&format!("{}\n\n", configuration_excerpt(file, error, width)))?;
        }
    }
    for (file, located) in opened.selection.findings() {
        terminal.print(&format!("{}\n\n", excerpt(&opened.selection, file, located, width)))?;
    }
    terminal.print(&format!("{}\n", summary(opened)))
}

/// `3 errors, 2 warnings in 14 files, 41 solutions`.
fn summary(opened: &Opened) -> String {
    let selection = &opened.selection;
    let configuration: usize = opened.configuration.iter().map(|(_, errors)| errors.len()).sum();
    let counts = [
        (selection.count(Level::Error) + configuration, "error"),
        (selection.count(Level::Warning), "warning"),
        (selection.count(Level::Hint), "hint"),
    ];
    let said: Vec<String> = counts.iter().filter(|(count, _)| *count > 0).map(|(count, word)| counted(*count, word)).collect();
    let findings = if said.is_empty() { "no findings".to_owned() } else { said.join(", ") };
    format!("{findings} in {}, {}", counted(selection.files().count(), "file"), counted(selection.solution_count(), "solution"))
}

fn counted(count: usize, word: &str) -> String {
    format!("{count} {word}{}", if count == 1 { "" } else { "s" })
}
