//! Standard output and standard error: colours where they are wanted, quiet where nobody reads any more.

use std::io::{self, ErrorKind, Write};

use anstream::{AutoStream, ColorChoice};
use clap::ColorChoice as ColorOption;

use super::Trouble;

/// Wider lines are hard to read.
const MOST_WIDTH: usize = 140;

/// Where output goes.
#[derive(Clone, Copy, Debug)]
pub(super) struct Terminal {
    choice: ColorChoice,
}

impl Terminal {
    /// The width of the page where there is no terminal to ask.
    pub const PAGE_WIDTH: usize = 100;

    /// With colours as the option says; `auto` asks NO_COLOR, CLICOLOR, CLICOLOR_FORCE, TERM and whether it is a terminal.
    pub fn new(color: ColorOption) -> Self {
        let choice = match color {
            ColorOption::Auto => ColorChoice::Auto,
            ColorOption::Always => ColorChoice::Always,
            ColorOption::Never => ColorChoice::Never,
        };
        Terminal { choice }
    }

    /// How many columns there are.
    pub fn width(&self) -> usize {
        let asked = terminal_size::terminal_size_of(io::stdout()).map(|(width, _)| usize::from(width.0));
        asked.unwrap_or(Self::PAGE_WIDTH).clamp(40, MOST_WIDTH)
    }

    /// Prints text that may hold colours.
    pub fn print(&self, text: &str) -> Result<(), Trouble> {
        written(AutoStream::new(io::stdout().lock(), self.choice).write_all(text.as_bytes()))
    }

    /// Prints bytes as they are, for machines.
    pub fn print_raw(&self, text: &str) -> Result<(), Trouble> {
        let mut output = io::stdout().lock();
        written(output.write_all(text.as_bytes()).and_then(|()| output.flush()))
    }

    /// Prints a value as JSON.
    pub fn print_json(&self, value: &impl serde::Serialize) -> Result<(), Trouble> {
        let text = serde_json::to_string_pretty(value).map_err(|error| Trouble(format!("The report cannot be written: {error}.")))?;
        self.print_raw(&format!("{text}\n"))
    }

    /// Says a sentence beside the output.
    pub fn say(&self, sentence: &str) {
        // With standard error closed too there is nowhere left to say it.
        let _ = writeln!(AutoStream::new(io::stderr().lock(), self.choice), "{sentence}");
    }

    /// Says what is wrong with the command, a file or the machine.
    pub fn complain(&self, sentence: &str) {
        self.say(&format!("scruple: {sentence}"));
    }
}

/// A reader that has gone (`| head`) has read enough; that is no trouble.
fn written(result: io::Result<()>) -> Result<(), Trouble> {
    match result {
        Err(error) if error.kind() != ErrorKind::BrokenPipe => Err(Trouble(format!("The output cannot be written: {error}."))),
        _ => Ok(()),
    }
}
