//! `scruple show`: what comes out of recipes, as a sheet or as data.

use clap::{Args, ValueEnum};

use super::paths::open;
use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::model::NameKey;
use crate::report::{
    SHOW_SCHEMA, Sheet, SolutionReport, Subject, reasons_sheet, settled_sheet, sheet, solution_report, solution_report_with_reasons, solution_sheet,
    with_settled,
};
use crate::workspace::Origin;

/// Show what comes out of recipes: what to weigh, pH, states, verdicts
#[derive(Debug, Args)]
pub(super) struct Show {
    /// Recipe files, or folders that hold them
    #[arg(value_name = "PATH", required_unless_present = "schema")]
    paths: Vec<String>,
    /// Only the solution of this name; may be given several times
    #[arg(long, value_name = "NAME")]
    solution: Vec<String>,
    /// Also say how the numbers came about: constants and their sources, activity coefficients, balances
    #[arg(long)]
    reasons: bool,
    /// How solutions are written
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Also what is left when every solid that forms in practice has settled
    #[arg(long)]
    settled: bool,
    /// Print the JSON schema of `--format json`
    #[arg(long, exclusive = true)]
    schema: bool,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Format {
    /// Sheets for people
    Text,
    /// Sheets for a review or a document
    Markdown,
    /// An array of solutions, for programs
    Json,
}

impl Show {
    /// The sheets of a solution, in the order in which they are read.
    fn sheets(&self, subject: &Subject) -> Vec<Sheet> {
        let mut sheets = vec![if self.settled { settled_sheet(subject) } else { solution_sheet(subject) }];
        if self.reasons {
            sheets.push(reasons_sheet(subject));
        }
        sheets
    }

    fn report(&self, subject: &Subject) -> SolutionReport {
        let report = if self.reasons { solution_report_with_reasons(subject) } else { solution_report(subject) };
        if self.settled { with_settled(subject, report) } else { report }
    }

    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        if self.schema {
            terminal.print_raw(SHOW_SCHEMA)?;
            return Ok(Ending::Clean);
        }
        let opened = open(&self.paths)?;
        let all: Vec<Subject> = opened.selection.solutions().collect();
        let wanted: Vec<NameKey> = self.solution.iter().map(|name| NameKey::new(name)).collect();
        for (key, written) in wanted.iter().zip(&self.solution) {
            if !all.iter().any(|subject| subject.is_called(key)) {
                return Err(Trouble(format!("No solution in these files is called {written}.")));
            }
        }
        let subjects = all.iter().filter(|subject| wanted.is_empty() || wanted.iter().any(|key| subject.is_called(key)));
        match self.format {
            Format::Json => {
                terminal.print_json(&subjects.map(|subject| self.report(subject)).collect::<Vec<_>>())?;
            }
            Format::Text => {
                let width = terminal.width();
                let sheets: Vec<String> = subjects.flat_map(|subject| self.sheets(subject)).map(|written| sheet::text(&written, width)).collect();
                terminal.print_raw(&sheets.join("\n\n"))?;
            }
            Format::Markdown => {
                let sheets: Vec<String> = subjects.flat_map(|subject| self.sheets(subject)).map(|written| sheet::markdown(&written)).collect();
                terminal.print_raw(&sheets.join("\n"))?;
            }
        }
        let mut ending = Ending::Clean;
        for file in opened.selection.files() {
            if let Origin::Unreadable(problem) = &file.origin {
                terminal.complain(&format!("{} is not shown: {problem}.", opened.selection.name(&file.path)));
                ending = Ending::Unusable;
            }
        }
        for (file, errors) in &opened.configuration {
            for error in errors {
                terminal.complain(&format!("{}: {}", opened.selection.name(file), error.message));
                ending = Ending::Unusable;
            }
        }
        Ok(ending)
    }
}
