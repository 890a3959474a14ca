//! `scruple lookup`: what the built-in library says of a name, with its sources.

use clap::{Args, ValueEnum};

use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::report::{all, found, library_sheets, sheet};

/// Look up a substance or ion of the built-in library, with constants and sources
#[derive(Debug, Args)]
pub(super) struct Lookup {
    /// A name, another name or a formula
    #[arg(value_name = "NAME", required_unless_present = "all", num_args = 1..)]
    name: Vec<String>,
    /// Everything in the library
    #[arg(long, conflicts_with = "name")]
    all: bool,
    /// How it is written
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For people
    Text,
    /// For a review or a document
    Markdown,
    /// For programs
    Json,
}

impl Lookup {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        // A name of several words needs no quotes.
        let name = self.name.join(" ");
        let report = if self.all { all() } else { found(&name).map_err(|near| unknown(&name, &near))? };
        match self.format {
            Format::Json => terminal.print_json(&report)?,
            Format::Text => {
                let sheets: Vec<String> = library_sheets(&report).iter().map(|page| sheet::text(page, terminal.width())).collect();
                terminal.print_raw(&sheets.join("\n\n"))?;
            }
            Format::Markdown => {
                let sheets: Vec<String> = library_sheets(&report).iter().map(sheet::markdown).collect();
                terminal.print_raw(&sheets.join("\n"))?;
            }
        }
        Ok(Ending::Clean)
    }
}

fn unknown(name: &str, near: &[String]) -> Trouble {
    let offered = match near {
        [] => String::new(),
        near => format!(" Names like it: {}.", near.join("; ")),
    };
    Trouble(format!("The built-in library has nothing called {name}.{offered}"))
}
