//! `scruple init`: the files that a library of recipes begins with. Nothing that is there is overwritten.

use std::fs::{self, OpenOptions};
use std::io::{ErrorKind, Write};

use camino::Utf8Path;
use clap::{Args, ValueEnum};

use super::git_drivers::ATTRIBUTES;
use super::paths::current_folder;
use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::library;

/// Begin a library of recipes: settings, starter recipes, what git and a CI service need
#[derive(Debug, Args)]
pub(super) struct Init {
    /// The folder; made where it is missing
    #[arg(value_name = "FOLDER", default_value = ".")]
    folder: String,
    /// The service that checks every change
    #[arg(long, value_enum, default_value_t = Service::None)]
    ci: Service,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Service {
    /// A workflow in .github/workflows
    Github,
    /// A pipeline in .gitlab-ci.yml
    Gitlab,
    /// No file
    None,
}

const CONFIGURATION: &str = include_str!("init/scruple.toml");
const STOCKS: &str = include_str!("init/stocks.prep");
const BUFFERS: &str = include_str!("init/buffers.prep");
const GITHUB: &str = include_str!("init/github.yml");
const GITLAB: &str = include_str!("init/gitlab.yml");

impl Init {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        let folder = current_folder()?.join(&self.folder);
        let attributes = format!("{ATTRIBUTES}\n");
        let filled = |template: &str| template.replace("{program}", env!("CARGO_PKG_VERSION")).replace("{library}", library::VERSION);
        let mut files = vec![
            ("scruple.toml", filled(CONFIGURATION)),
            ("stocks.prep", STOCKS.to_owned()),
            ("buffers.prep", BUFFERS.to_owned()),
            (".gitattributes", attributes),
        ];
        match self.ci {
            Service::Github => files.push((".github/workflows/recipes.yml", filled(GITHUB))),
            Service::Gitlab => files.push((".gitlab-ci.yml", filled(GITLAB))),
            Service::None => {}
        }
        for (name, text) in files {
            let path = folder.join(name);
            if write_new(&path, &text)? {
                terminal.print(&format!("wrote {name}\n"))?;
                continue;
            }
            terminal.print(&format!("kept {name} as it is\n"))?;
            let has_attribute = || fs::read_to_string(&path).is_ok_and(|text| text.lines().any(|line| line.contains("diff=scruple")));
            if name == ".gitattributes" && !has_attribute() {
                terminal.print(&format!("it lacks this line, which lets git show chemistry: {ATTRIBUTES}\n"))?;
            }
        }
        terminal.print("Next: scruple check . and, in a git repository, scruple git install\n")?;
        Ok(Ending::Clean)
    }
}

/// Writes a file with the folders above it; says whether it was not there before.
fn write_new(path: &Utf8Path, text: &str) -> Result<bool, Trouble> {
    let trouble = |error: std::io::Error| Trouble(format!("{path} cannot be written: {error}."));
    if let Some(folder) = path.parent() {
        fs::create_dir_all(folder).map_err(trouble)?;
    }
    match OpenOptions::new().write(true).create_new(true).open(path) {
        Ok(mut file) => file.write_all(text.as_bytes()).map(|()| true).map_err(trouble),
        Err(error) if error.kind() == ErrorKind::AlreadyExists => Ok(false),
        Err(error) => Err(trouble(error)),
    }
}
