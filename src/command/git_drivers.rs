//! `scruple git`: what git calls to show recipes with their chemistry, and what makes git call it.

use std::sync::Arc;

use camino::{Utf8Path, Utf8PathBuf};
use clap::{Args, Subcommand};

use super::compare::of_texts;
use super::git::Repository;
use super::paths::current_folder;
use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::report::{Selection, annotated, comparison};
use crate::text::SourceText;
use crate::workspace::{Disk, Reader, RevisionFiles, Workspace};

/// The attribute that makes git use the driver.
pub(super) const ATTRIBUTES: &str = "*.prep text eol=lf diff=scruple";

/// The line that git shows above a hunk: the header of the block. Its whole first group is shown.
const FUNCTION_NAME: &str = "^((solution|bottle|substance|ion|solid|lab)[ \t].*)$";

/// What `git diff --word-diff` takes for one word: a number, or what stands between numbers and spaces.
const WORD: &str = "[0-9]+([.][0-9]+)?([eE][-+]?[0-9]+)?|[^[:space:]0-9]+";

/// Show chemistry in git: install the drivers, or be one
#[derive(Debug, Args)]
pub(super) struct Git {
    #[command(subcommand)]
    verb: Verb,
}

#[derive(Debug, Subcommand)]
enum Verb {
    /// Make git show recipes with their values in diffs and logs
    Install {
        /// For all repositories of this user, not only this one
        #[arg(long)]
        global: bool,
        /// Show in `git diff` what each edited line does, in the place of values beside the text
        #[arg(long)]
        shares: bool,
    },
    /// Print a file with what comes out of its solutions (git calls this)
    Textconv {
        /// The file that git wrote out
        #[arg(value_name = "FILE")]
        file: String,
    },
    /// Print what changed in a file and what that does (git calls this)
    Diff {
        /// Path, old file, its number and mode, new file, its number and mode
        #[arg(value_name = "ARGUMENT", num_args = 1..=9, allow_hyphen_values = true)]
        arguments: Vec<String>,
    },
}

impl Git {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        match &self.verb {
            Verb::Install { global, shares } => install(*global, *shares, terminal),
            Verb::Textconv { file } => textconv(file, terminal),
            Verb::Diff { arguments } => diff(arguments, terminal),
        }
    }
}

fn install(global: bool, shares: bool, terminal: &Terminal) -> Result<Ending, Trouble> {
    let here = current_folder()?;
    let repository = Repository::around(&here)?;
    let scope = if global { "--global" } else { "--local" };
    let set = |name: &str, value: &str| repository.run(&["config", scope, "--replace-all", &format!("diff.scruple.{name}"), value]);
    set("xfuncname", FUNCTION_NAME)?;
    set("wordRegex", WORD)?;
    set("textconv", "scruple git textconv")?;
    if shares {
        set("command", "scruple git diff")?;
    } else {
        // It is no trouble that there was none.
        let _ = repository.line(&["config", scope, "--unset-all", "diff.scruple.command"])?;
    }
    terminal.say(&format!("git shows recipes with their values {}", if global { "in all your repositories" } else { "here" }));
    let attribute = repository.line(&["check-attr", "diff", "--", "recipe.prep"])?.unwrap_or_default();
    if !attribute.ends_with(": scruple") {
        terminal.say(&format!("where .gitattributes has the line `{ATTRIBUTES}`, which is missing here"));
    }
    Ok(Ending::Clean)
}

fn textconv(written: &str, terminal: &Terminal) -> Result<Ending, Trouble> {
    let text = read(Utf8Path::new(written))?;
    // The file stands alone, whatever lies beside it: git does not say to which revision it belongs, and the same file must
    // give the same text wherever it is asked for.
    let path = Utf8PathBuf::from("/recipe.prep");
    let mut workspace = Workspace::reading(Arc::new(RevisionFiles::new("/".into())));
    let id = workspace.set_open_text(&path, Arc::new(SourceText::from(text.as_str())));
    let snapshot = workspace.snapshot();
    let selection = Selection::new(snapshot, [id], "/".into());
    let shown = selection.files().map(|file| annotated(&selection, file)).collect::<String>();
    terminal.print_raw(&shown)?;
    Ok(Ending::Clean)
}

/// git calls an external driver with `path old-file old-hex old-mode new-file new-hex new-mode`, and with the other path and a
/// similarity where the file was renamed; with the path alone where it is unmerged. It must not fail.
fn diff(arguments: &[String], terminal: &Terminal) -> Result<Ending, Trouble> {
    let argument = |index: usize| arguments.get(index).map(String::as_str);
    let (Some(path), Some(old), Some(new)) = (argument(0), argument(1), argument(4)) else {
        terminal.print_raw(&format!("* Unmerged path {}\n", argument(0).unwrap_or_default()))?;
        return Ok(Ending::Clean);
    };
    let now = argument(7).unwrap_or(path);
    let top = current_folder()?;
    let repository = Repository::around(&top)?;
    let (before, after) = (read(Utf8Path::new(old))?, read(Utf8Path::new(new))?);
    let hunks = repository.difference(&top.join(old), &top.join(new))?;
    let mut out = format!("diff --git a/{path} b/{now}\n--- a/{path}\n+++ b/{now}\n{hunks}");
    let place = top.join(now);
    let report = of_texts(&before, &after, &place, &top, ("old", "new"));
    out.push_str(&format!("\n{}\n", comparison::text(&report)));
    terminal.print_raw(&out)?;
    Ok(Ending::Clean)
}

/// A file that git names; `/dev/null` stands for none.
fn read(path: &Utf8Path) -> Result<String, Trouble> {
    if path == "/dev/null" || path == "nul" {
        return Ok(String::new());
    }
    let text = Disk.read(path).map_err(|why| Trouble(format!("{path} is not shown: {why}.")))?;
    text.ok_or_else(|| Trouble(format!("There is no file {path}.")))
}
