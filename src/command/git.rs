//! git, through the plumbing commands of its own program: what a revision means, and what its recipe files hold. What a user
//! names is never read as an option, and file names come ended by a zero byte, so that no name can pass for another.

use std::io::{BufRead, BufReader, Read, Write};
use std::process::{Command, Stdio};
use std::thread;

use camino::{Utf8Path, Utf8PathBuf};

use super::Trouble;
use crate::workspace::{MOST_BYTES, RevisionFiles, too_large};

/// A repository with a working tree.
#[derive(Clone, Debug)]
pub(super) struct Repository {
    /// The top folder of the working tree.
    pub top: Utf8PathBuf,
}

/// A commit, with the words that the user named it by.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Commit {
    /// As the user wrote it.
    pub name: String,
    /// Its number.
    pub id: String,
}

impl Repository {
    /// The repository that a folder belongs to.
    pub fn around(folder: &Utf8Path) -> Result<Repository, Trouble> {
        let answer = Command::new("git").arg("-C").arg(folder).args(["rev-parse", "--show-toplevel"]).stdin(Stdio::null()).output();
        let answer = answer.map_err(|error| Trouble(format!("git cannot be run: {error}.")))?;
        let top = String::from_utf8(answer.stdout).ok().map(|top| top.trim_end_matches(['\n', '\r']).to_owned());
        match top.filter(|top| answer.status.success() && !top.is_empty()) {
            Some(top) => Ok(Repository { top: Utf8PathBuf::from(top) }),
            None => {
                let said = String::from_utf8_lossy(&answer.stderr).trim().to_owned();
                Err(Trouble(format!("{folder} is in no git repository with a working tree ({said}).")))
            }
        }
    }

    /// The commit that a revision means. `A...` is where the history of A and of the present commit parted.
    pub fn commit(&self, revision: &str) -> Result<Commit, Trouble> {
        match revision.strip_suffix("...") {
            Some(base) => self.parting(base, "HEAD", revision),
            None => self.resolved(revision),
        }
    }

    /// The commit where the histories of two revisions parted.
    pub fn parting(&self, one: &str, other: &str, name: &str) -> Result<Commit, Trouble> {
        let (one, other) = (self.resolved(one)?, self.resolved(other)?);
        match self.line(&["merge-base", &one.id, &other.id])? {
            Some(id) => Ok(Commit { name: name.to_owned(), id }),
            None => Err(Trouble(format!(
                "{} and {} have no common history here. A shallow clone lacks it: fetch it (git fetch --unshallow).",
                one.name, other.name
            ))),
        }
    }

    fn resolved(&self, revision: &str) -> Result<Commit, Trouble> {
        let asked = format!("{revision}^{{commit}}");
        let id = match revision.is_empty() || revision.starts_with('-') {
            true => None,
            false => self.line(&["rev-parse", "--verify", "--quiet", "--end-of-options", &asked])?,
        };
        // Older versions of git repeat the mark.
        let id = id.map(|id| id.trim_start_matches("--end-of-options").trim().to_owned());
        match id.filter(|id| id.len() >= 40 && id.chars().all(|digit| digit.is_ascii_hexdigit())) {
            Some(id) => Ok(Commit { name: revision.to_owned(), id }),
            None => Err(Trouble(format!(
                "{revision} is no revision of this repository. A shallow clone may lack it: fetch it (git fetch --unshallow)."
            ))),
        }
    }

    /// The recipe and configuration files of a commit. Links and modules are not followed.
    pub fn files(&self, commit: &Commit) -> Result<RevisionFiles, Trouble> {
        let listed = self.output(&["ls-tree", "-r", "-z", "--full-tree", &commit.id])?;
        let mut wanted: Vec<(String, String)> = Vec::new();
        for entry in listed.split(|byte| *byte == 0) {
            // A name that is not UTF-8 is left out, as it is on disk.
            let Some((facts, name)) = std::str::from_utf8(entry).ok().and_then(|entry| entry.split_once('\t')) else { continue };
            let mut facts = facts.split(' ');
            if let (Some("100644" | "100755"), Some("blob"), Some(id)) = (facts.next(), facts.next(), facts.next())
                && RevisionFiles::matters(name)
            {
                wanted.push((name.to_owned(), id.to_owned()));
            }
        }
        let mut files = RevisionFiles::new(self.top.clone());
        self.read_blobs(&wanted, &mut files)?;
        Ok(files)
    }

    /// Reads files through one `cat-file`, whose questions are written while its answers are read.
    fn read_blobs(&self, wanted: &[(String, String)], files: &mut RevisionFiles) -> Result<(), Trouble> {
        let trouble = |error: std::io::Error| Trouble(format!("git cat-file cannot be run: {error}."));
        let mut child =
            self.command(&["cat-file", "--batch"]).stdin(Stdio::piped()).stdout(Stdio::piped()).stderr(Stdio::null()).spawn().map_err(trouble)?;
        let questions: String = wanted.iter().map(|(_, id)| format!("{id}\n")).collect();
        let writer = child.stdin.take().map(|mut input| thread::spawn(move || input.write_all(questions.as_bytes())));
        let mut failure = None;
        if let Some(output) = child.stdout.take() {
            let mut answers = BufReader::new(output);
            for (name, _) in wanted {
                match blob(&mut answers) {
                    Ok(contents) => files.add(name, contents),
                    Err(error) => {
                        failure = Some(Trouble(format!("git does not give {name}: {error}.")));
                        break;
                    }
                }
            }
        }
        // A writer whose reader has gone fails, and the failure that matters is known already.
        let _ = writer.map(thread::JoinHandle::join);
        let _ = child.wait();
        failure.map_or(Ok(()), Err)
    }

    /// The standard output of a command; a failure is trouble.
    fn output(&self, arguments: &[&str]) -> Result<Vec<u8>, Trouble> {
        let answer = self.command(arguments).output().map_err(|error| Trouble(format!("git cannot be run: {error}.")))?;
        if !answer.status.success() {
            let said = String::from_utf8_lossy(&answer.stderr).trim().to_owned();
            return Err(Trouble(format!("git {} failed: {said}", arguments.first().unwrap_or(&""))));
        }
        Ok(answer.stdout)
    }

    /// The one line that a command prints; none where it says no.
    pub fn line(&self, arguments: &[&str]) -> Result<Option<String>, Trouble> {
        let answer = self.command(arguments).output().map_err(|error| Trouble(format!("git cannot be run: {error}.")))?;
        let line = String::from_utf8_lossy(&answer.stdout).trim().to_owned();
        Ok((answer.status.success() && !line.is_empty()).then_some(line))
    }

    /// The hunks between two files on disk, as `git diff` writes them.
    pub fn difference(&self, old: &Utf8Path, new: &Utf8Path) -> Result<String, Trouble> {
        let arguments = ["diff", "--no-index", "--no-ext-diff", "--no-textconv", "--no-color", "--", old.as_str(), new.as_str()];
        let answer = self.command(&arguments).output().map_err(|error| Trouble(format!("git cannot be run: {error}.")))?;
        let text = String::from_utf8_lossy(&answer.stdout).into_owned();
        // The heading names the files that git wrote out, which nobody knows.
        Ok(text.find("\n@@").map(|at| text.get(at + 1..).unwrap_or_default().to_owned()).unwrap_or_default())
    }

    /// Runs a command that changes something.
    pub fn run(&self, arguments: &[&str]) -> Result<(), Trouble> {
        self.output(arguments).map(|_| ())
    }

    fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new("git");
        command.arg("-C").arg(&self.top).args(arguments).stdin(Stdio::null());
        command
    }
}

/// One answer of `cat-file --batch`: a line with number, kind and size, the bytes, a line break.
fn blob(answers: &mut impl BufRead) -> std::io::Result<Result<Vec<u8>, String>> {
    let unclear = |what: &str| std::io::Error::other(format!("its answer is `{}`", what.trim_end()));
    let mut heading = String::new();
    answers.read_line(&mut heading)?;
    let mut words = heading.split_whitespace();
    let (Some(_), Some("blob"), Some(size)) = (words.next(), words.next(), words.next()) else { return Err(unclear(&heading)) };
    let size: u64 = size.parse().map_err(|_| unclear(&heading))?;
    let mut contents = Vec::new();
    let is_too_large = size > MOST_BYTES;
    if is_too_large {
        std::io::copy(&mut answers.take(size), &mut std::io::sink())?;
    } else {
        answers.take(size).read_to_end(&mut contents)?;
    }
    let mut end = [0; 1];
    answers.read_exact(&mut end)?;
    Ok(if is_too_large { Err(too_large()) } else { Ok(contents) })
}
