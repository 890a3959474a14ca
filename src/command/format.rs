//! `scruple format`: recipes with their columns aligned; no digit, unit or name changes.

use std::io::{Read, stdin};

use clap::Args;

use super::paths::{absolute, current_folder};
use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::syntax;
use crate::workspace::recipe_files;

/// Align recipes; no digit, unit or name changes
#[derive(Debug, Args)]
pub(super) struct Format {
    /// Recipe files, or folders that hold them; `-` reads standard input and writes standard output
    #[arg(value_name = "PATH", required = true)]
    paths: Vec<String>,
    /// Change nothing; name the files that are not aligned, and fail where there are any
    #[arg(long)]
    check: bool,
}

impl Format {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        if self.paths.iter().any(|path| path == "-") {
            if self.paths.len() > 1 {
                return Err(Trouble("Standard input (-) cannot be formatted together with files.".to_owned()));
            }
            return self.standard_input(terminal);
        }
        let base = current_folder()?;
        let mut files = Vec::new();
        for written in &self.paths {
            let path = absolute(written, &base)?;
            let below = if path.is_dir() { recipe_files(&path) } else { vec![path] };
            if below.is_empty() {
                return Err(Trouble(format!("There are no recipe files (.prep) in {written}.")));
            }
            files.extend(below);
        }
        files.sort();
        files.dedup();
        let mut changed = 0;
        for path in &files {
            let name = path.strip_prefix(&base).unwrap_or(path).as_str().replace('\\', "/");
            let bytes = std::fs::read(path).map_err(|error| Trouble(format!("{name} cannot be read: {error}.")))?;
            let text = String::from_utf8(bytes).map_err(|_| Trouble(format!("{name} is not UTF-8 text.")))?;
            let formatted = syntax::format(&text);
            if formatted == text {
                continue;
            }
            changed += 1;
            if self.check {
                terminal.print_raw(&format!("{name}\n"))?;
            } else {
                std::fs::write(path, formatted).map_err(|error| Trouble(format!("{name} cannot be written: {error}.")))?;
            }
        }
        Ok(self.ending(changed))
    }

    fn standard_input(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        let mut bytes = Vec::new();
        stdin().lock().read_to_end(&mut bytes).map_err(|error| Trouble(format!("Standard input cannot be read: {error}.")))?;
        let text = String::from_utf8(bytes).map_err(|_| Trouble("Standard input is not UTF-8 text.".to_owned()))?;
        let formatted = syntax::format(&text);
        if !self.check {
            terminal.print_raw(&formatted)?;
        }
        Ok(self.ending(usize::from(formatted != text)))
    }

    fn ending(&self, changed: usize) -> Ending {
        if self.check && changed > 0 { Ending::Failing } else { Ending::Clean }
    }
}
