//! `scruple explain`: the page of a finding, or the list of all.

use clap::Args;
use strsim::damerau_levenshtein;

use super::terminal::Terminal;
use super::{Ending, Trouble};
use crate::finding::Code;

/// A code with so many letters wrong is still recognised.
const MOST_WRONG: usize = 4;

/// Explain a finding; without a code, list them all
#[derive(Debug, Args)]
pub(super) struct Explain {
    /// The finding's code, for instance temperature-shift
    #[arg(value_name = "CODE")]
    code: Option<String>,
}

impl Explain {
    pub fn run(&self, terminal: &Terminal) -> Result<Ending, Trouble> {
        let text = match &self.code {
            Some(written) => page(Code::from_name(written).ok_or_else(|| unknown(written))?),
            None => list(),
        };
        terminal.print_raw(&text)?;
        Ok(Ending::Clean)
    }
}

fn page(code: Code) -> String {
    let page = code.page().trim_end();
    format!("{page}\n\nLevel: {} (unless the place or scruple.toml says otherwise)\n", code.level().word())
}

fn list() -> String {
    let mut codes: Vec<&Code> = Code::ALL.iter().collect();
    codes.sort_by_key(|code| code.name());
    let width = codes.iter().map(|code| code.name().len()).max().unwrap_or(0);
    let row = |code: &&Code| format!("{:width$}  {:7}  {}\n", code.name(), code.level().word(), code.summary());
    codes.iter().map(row).collect()
}

fn unknown(written: &str) -> Trouble {
    let near = Code::ALL.iter().map(|code| (damerau_levenshtein(code.name(), written), code.name())).min();
    let offered = match near {
        Some((distance, name)) if distance <= MOST_WRONG => format!(" Perhaps {name} is meant."),
        _ => " `scruple explain` lists them all.".to_owned(),
    };
    Trouble(format!("No finding has the code {written}.{offered}"))
}
