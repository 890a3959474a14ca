//! `scruple compare`: what a change does to the chemistry.

use std::sync::Arc;

use camino::{Utf8Path, Utf8PathBuf};
use clap::{Args, ValueEnum};

use super::git::Repository;
use super::paths::{absolute, current_folder};
use super::progress::watched;
use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::report::{COMPARE_SCHEMA, ComparisonReport, Selection, comparison};
use crate::review::review;
use crate::text::{FileId, SourceText};
use crate::workspace::{Disk, Progress, Reader, Snapshot, Workspace, version_control_top};

/// Compare two states of a library: what changes for each solution, and which line does it
#[derive(Debug, Args)]
pub(super) struct Compare {
    /// The old revision; `A..B` names both, `A...B` starts where their histories parted
    #[arg(value_name = "OLD", default_value = "HEAD")]
    old: String,
    /// The new revision; the working tree where it is not named
    #[arg(value_name = "NEW")]
    new: Option<String>,
    /// OLD and NEW are two files; what they use is read from the disk for both
    #[arg(long, requires = "new")]
    files: bool,
    /// How the comparison is written
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Fail where an expectation breaks
    #[arg(long)]
    fail_on_break: bool,
    /// Print the JSON schema of `--format json`
    #[arg(long, exclusive = true)]
    schema: bool,
    /// Only these files or folders
    #[arg(value_name = "PATH", last = true, conflicts_with = "files")]
    paths: Vec<String>,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For people
    Text,
    /// For programs
    Json,
    /// For a comment on a pull request
    Markdown,
    /// A page of its own
    Html,
    /// Commands that a runner turns into annotations on the edited lines
    WorkflowCommands,
}

impl Compare {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        if self.schema {
            terminal.print_raw(COMPARE_SCHEMA)?;
            return Ok(Ending::Clean);
        }
        let here = current_folder()?;
        let base = match self.format {
            Format::WorkflowCommands => version_control_top(&here).unwrap_or(&here).to_owned(),
            _ => here.clone(),
        };
        let report = match (self.files, &self.new) {
            (true, Some(new)) => {
                let old = absolute(&self.old, &here)?;
                let text = Disk.read(&old).and_then(|text| text.ok_or_else(|| "it is no file".to_owned()));
                let text = text.map_err(|why| Trouble(format!("{} cannot be compared: {why}.", self.old)))?;
                of_file(&text, &absolute(new, &here)?, &base, (&self.old, new))?
            }
            _ => self.of_revisions(&here, &base)?,
        };
        let written = match self.format {
            Format::Text => comparison::text(&report),
            Format::Json => {
                terminal.print_json(&report)?;
                String::new()
            }
            Format::Markdown => comparison::markdown(&report),
            Format::Html => comparison::html(&report),
            Format::WorkflowCommands => comparison::annotations(&report),
        };
        terminal.print_raw(&written)?;
        Ok(if self.fail_on_break && report.breaks() { Ending::Failing } else { Ending::Clean })
    }

    fn of_revisions(&self, here: &Utf8Path, base: &Utf8Path) -> Result<ComparisonReport, Trouble> {
        let repository = Repository::around(here)?;
        let (old, new) = match (self.old.split_once("..."), self.old.split_once(".."), &self.new) {
            (Some((one, other)), _, None) if !other.is_empty() => (repository.parting(one, other, &self.old)?, Some(repository.commit(other)?)),
            (Some(_), _, None) => (repository.commit(&self.old)?, None),
            (None, Some((one, other)), None) => (repository.commit(one)?, Some(repository.commit(other)?)),
            (_, _, new) => (repository.commit(&self.old)?, new.as_ref().map(|new| repository.commit(new)).transpose()?),
        };
        let paths = match self.paths.is_empty() {
            true => vec![repository.top.clone()],
            // A path may be there in one state only.
            false => self.paths.iter().map(|path| here.join(path).components().collect()).collect::<Vec<Utf8PathBuf>>(),
        };
        let new_name = new.as_ref().map_or("working tree".to_owned(), |commit| commit.name.clone());
        let before: Arc<dyn Reader> = Arc::new(repository.files(&old)?);
        let now: Arc<dyn Reader> = match &new {
            Some(commit) => Arc::new(repository.files(commit)?),
            None => Arc::new(Disk),
        };
        let progress = Progress::default();
        let of_paths = |snapshot: &Snapshot| -> Vec<FileId> {
            let files = snapshot.files.values().filter(|file| paths.iter().any(|path| file.path.starts_with(path)));
            files.map(|file| file.id).collect()
        };
        Ok(watched(&progress, || {
            let mut workspace = Workspace::reading(before);
            paths.iter().for_each(|path| workspace.open(path));
            let old_state = workspace.snapshot_watched(&progress);
            let trial = workspace.clone();
            workspace.read_from(now);
            paths.iter().for_each(|path| workspace.open(path));
            let new_state = workspace.snapshot_watched(&progress);
            report(trial, &old_state, &new_state, of_paths, base, (&old.name, &new_name))
        }))
    }
}

/// Compares the text that a file had with what stands in it; what it uses is read from the disk for both.
pub(super) fn of_file(old: &str, path: &Utf8Path, base: &Utf8Path, names: (&str, &str)) -> Result<ComparisonReport, Trouble> {
    let new = Disk.read(path).map_err(|why| Trouble(format!("{path} cannot be compared: {why}.")))?.unwrap_or_default();
    Ok(of_texts(old, &new, path, base, names))
}

/// Compares two texts that a file can have.
pub(super) fn of_texts(old: &str, new: &str, path: &Utf8Path, base: &Utf8Path, names: (&str, &str)) -> ComparisonReport {
    let mut workspace = Workspace::new();
    workspace.open(path);
    workspace.set_open_text(path, Arc::new(SourceText::from(old)));
    let old_state = workspace.snapshot();
    let trial = workspace.clone();
    workspace.set_open_text(path, Arc::new(SourceText::from(new)));
    let new_state = workspace.snapshot();
    let this = |snapshot: &Snapshot| snapshot.file_by_path(path).map(|file| file.id).into_iter().collect();
    report(trial, &old_state, &new_state, this, base, names)
}

fn report(
    trial: Workspace,
    old: &Arc<Snapshot>,
    new: &Arc<Snapshot>,
    files: impl Fn(&Snapshot) -> Vec<FileId>,
    base: &Utf8Path,
    names: (&str, &str),
) -> ComparisonReport {
    let (of_old, of_new) = (files(old), files(new));
    let mut found = review(trial, old, new);
    // Of a file that only lent its stocks nothing is told.
    found.changes.retain(|change| match (&change.new, &change.old) {
        (Some(place), _) => of_new.contains(&place.file),
        (None, Some(place)) => of_old.contains(&place.file),
        (None, None) => false,
    });
    let select = |snapshot: &Arc<Snapshot>, files: Vec<FileId>| Selection::new(snapshot.clone(), files, base.to_owned());
    comparison::comparison(&found, &select(old, of_old), &select(new, of_new), names.0, names.1)
}
