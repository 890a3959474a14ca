//! `scruple check`: every finding of the recipes, with its line, and whether they pass.

use clap::{Args, ValueEnum};

use super::git::Repository;
use super::paths::{Opened, current_folder, open, open_since};
use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::finding::Level;
use crate::report::{
    Baseline, CHECK_SCHEMA, FindingReport, Selection, code_quality, configuration_excerpt, configuration_findings, excerpt, finding_reports,
    junit, rdjson, sarif, workflow_commands,
};
use crate::text::Columns;
use crate::workspace::version_control_top;

/// Check recipes: report every finding, and fail on those that matter
#[derive(Debug, Args)]
pub(super) struct Check {
    /// Recipe files, or folders that hold them
    #[arg(value_name = "PATH", required_unless_present = "schema")]
    paths: Vec<String>,
    /// The lowest level of finding that fails the check
    #[arg(long, value_name = "LEVEL", value_enum, default_value_t = FailOn::Error)]
    fail_on: FailOn,
    /// Never fail because of findings
    #[arg(long)]
    exit_zero: bool,
    /// How findings are written
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Write findings to a file as well; may be given several times
    #[arg(long, value_name = "FORMAT=FILE", value_parser = output)]
    output: Vec<(Format, String)>,
    /// Speak only of what changed since a revision (`REV...`: since the histories parted), and of what depends on it
    #[arg(long, value_name = "REV")]
    changed_since: Option<String>,
    /// A file of known findings, which are counted and not told
    #[arg(long, value_name = "FILE")]
    baseline: Option<String>,
    /// Write the findings to a file of known findings, and pass
    #[arg(long, value_name = "FILE", conflicts_with_all = ["baseline", "changed_since"])]
    write_baseline: Option<String>,
    /// Print the JSON schema of `--format json`
    #[arg(long, exclusive = true)]
    schema: bool,
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
    /// SARIF 2.1.0, for code scanning; exits with 0 unless something cannot be used
    Sarif,
    /// Commands that a runner turns into annotations on the lines
    WorkflowCommands,
    /// The report that merge requests read
    CodeQuality,
    /// Diagnostics for review robots
    Rdjson,
    /// JUnit XML, a suite for each file
    Junit,
}

/// `FORMAT=FILE`.
fn output(written: &str) -> Result<(Format, String), String> {
    match written.split_once('=') {
        Some((format, file)) if !file.is_empty() => Ok((Format::from_str(format, false)?, file.to_owned())),
        _ => Err("write a format, an equals sign and the name of a file".to_owned()),
    }
}

impl FailOn {
    fn level(self) -> Level {
        match self {
            FailOn::Error => Level::Error,
            FailOn::Warning => Level::Warning,
            FailOn::Hint => Level::Hint,
        }
    }

    fn reached_by(self, finding: &FindingReport) -> bool {
        let levels = [Level::Hint, Level::Warning, Level::Error];
        levels.iter().any(|level| *level >= self.level() && level.word() == finding.level)
    }
}

/// What a run has to say: the selection, and which of its findings are told.
struct Said {
    opened: Opened,
    /// For each finding of the selection, whether the baseline holds it.
    known: Vec<bool>,
    /// How many findings of the baseline are gone.
    gone: usize,
}

impl Check {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        if self.schema {
            terminal.print_raw(CHECK_SCHEMA)?;
            return Ok(Ending::Clean);
        }
        let opened = match &self.changed_since {
            None => open(&self.paths)?,
            Some(revision) => {
                let repository = Repository::around(&current_folder()?)?;
                open_since(&self.paths, &repository, &repository.commit(revision)?)?
            }
        };
        let all = finding_reports(&opened.selection, Columns::Characters);
        if let Some(file) = &self.write_baseline {
            std::fs::write(file, Baseline::of(&all).text()).map_err(|error| Trouble(format!("{file} cannot be written: {error}.")))?;
            terminal.say(&format!("{} in {file} are known from now on", counted(all.len(), "finding")));
            return Ok(if opened.configuration.is_empty() { Ending::Clean } else { Ending::Unusable });
        }
        let (known, gone) = match &self.baseline {
            None => (vec![false; all.len()], 0),
            Some(file) => {
                let text = std::fs::read_to_string(file).map_err(|error| Trouble(format!("{file} cannot be read: {error}.")))?;
                Baseline::parse(&text).map_err(|why| Trouble(format!("{file} cannot be used: {why}.")))?.known(&all)
            }
        };
        // Of what did not change nothing can be said, so nothing of it is gone.
        let said = Said { opened, known, gone: if self.changed_since.is_some() { 0 } else { gone } };
        for (format, file) in &self.output {
            std::fs::write(file, self.written(*format, &said)?).map_err(|error| Trouble(format!("{file} cannot be written: {error}.")))?;
        }
        match self.format {
            Format::Text => print_text(&said, terminal)?,
            format => terminal.print_raw(&self.written(format, &said)?)?,
        }
        self.ending(&said, &all)
    }

    fn ending(&self, said: &Said, all: &[FindingReport]) -> Result<Ending, Trouble> {
        if !said.opened.configuration.is_empty() {
            return Ok(Ending::Unusable);
        }
        let fails = all.iter().zip(&said.known).any(|(finding, known)| !known && self.fail_on.reached_by(finding));
        // Who reads SARIF takes the findings from the file, and takes a failure for one of the program.
        let passes = self.exit_zero || self.format == Format::Sarif;
        Ok(if fails && !passes { Ending::Failing } else { Ending::Clean })
    }

    /// The findings in a format, named and counted as its readers do.
    fn written(&self, format: Format, said: &Said) -> Result<String, Trouble> {
        let columns = match format {
            Format::Sarif => Columns::Utf16,
            Format::Rdjson => Columns::Utf8,
            Format::Text | Format::Json | Format::WorkflowCommands | Format::CodeQuality | Format::Junit => Columns::Characters,
        };
        // Services name files from the top of what is checked out.
        let selection = match format {
            Format::Sarif | Format::WorkflowCommands | Format::CodeQuality => {
                let here = current_folder()?;
                said.opened.selection.named_from(version_control_top(&here).unwrap_or(&here))
            }
            Format::Text | Format::Json | Format::Rdjson | Format::Junit => said.opened.selection.clone(),
        };
        let findings = told(said, &selection, columns);
        Ok(match format {
            Format::Text => plain_text(said),
            Format::Json => json_text(&findings)?,
            Format::Sarif => json_text(&sarif(&findings, said.opened.configuration.is_empty()))?,
            Format::WorkflowCommands => workflow_commands(&findings),
            Format::CodeQuality => json_text(&code_quality(&findings))?,
            Format::Rdjson => json_text(&rdjson(&findings))?,
            Format::Junit => {
                let files: Vec<String> = selection.files().map(|file| selection.file_name(file)).collect();
                junit(&findings, &files, |finding| finding.code.is_none() || self.fail_on.reached_by(finding))
            }
        })
    }
}

/// What is wrong with configurations, and every finding that is not known.
fn told(said: &Said, selection: &Selection, columns: Columns) -> Vec<FindingReport> {
    let broken = said.opened.configuration.iter().flat_map(|(path, errors)| configuration_findings(&selection.name(path), errors));
    let new = finding_reports(selection, columns).into_iter().zip(&said.known).filter(|(_, known)| !**known);
    broken.chain(new.map(|(finding, _)| finding)).collect()
}

fn json_text(value: &impl serde::Serialize) -> Result<String, Trouble> {
    serde_json::to_string_pretty(value).map(|text| text + "\n").map_err(|error| Trouble(format!("The report cannot be written: {error}.")))
}

fn print_text(said: &Said, terminal: &Terminal) -> Result<(), Trouble> {
    for part in text_parts(said, terminal.width()) {
        terminal.print(&part)?;
    }
    Ok(())
}

fn plain_text(said: &Said) -> String {
    let coloured: String = text_parts(said, Terminal::PAGE_WIDTH).collect();
    anstream::adapter::strip_str(&coloured).to_string()
}

fn text_parts(said: &Said, width: usize) -> impl Iterator<Item = String> {
    let selection = &said.opened.selection;
    let broken = said.opened.configuration.iter().flat_map(move |(path, errors)| {
        errors.iter().map(move |error| format!("{}\n\n", configuration_excerpt(&selection.name(path), error, width)))
    });
    let new = selection.findings().zip(&said.known).filter(|(_, known)| !**known);
    let findings = new.map(move |((file, located), _)| format!("{}\n\n", excerpt(selection, file, located, width)));
    broken.chain(findings).chain(std::iter::once(format!("{}\n", summary(said))))
}

/// `3 errors, 2 warnings in 14 files, 41 solutions`.
fn summary(said: &Said) -> String {
    let selection = &said.opened.selection;
    let configuration: usize = said.opened.configuration.iter().map(|(_, errors)| errors.len()).sum();
    let new: Vec<Level> =
        selection.findings().zip(&said.known).filter(|(_, known)| !**known).map(|((_, located), _)| located.finding.level).collect();
    let count = |level: Level| new.iter().filter(|own| **own == level).count();
    let counts = [(count(Level::Error) + configuration, "error"), (count(Level::Warning), "warning"), (count(Level::Hint), "hint")];
    let words: Vec<String> = counts.iter().filter(|(count, _)| *count > 0).map(|(count, word)| counted(*count, word)).collect();
    let findings = if words.is_empty() { "no findings".to_owned() } else { words.join(", ") };
    let mut line =
        format!("{findings} in {}, {}", counted(selection.files().count(), "file"), counted(selection.solution_count(), "solution"));
    let known = said.known.iter().filter(|known| **known).count();
    if known > 0 {
        line.push_str(&format!("; {} of the baseline not told", counted(known, "finding")));
    }
    if said.gone > 0 {
        line.push_str(&format!("; {} of the baseline gone, write it again", counted(said.gone, "finding")));
    }
    line
}

fn counted(count: usize, word: &str) -> String {
    format!("{count} {word}{}", if count == 1 { "" } else { "s" })
}
