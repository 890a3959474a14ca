//! The server's own log: a file that the user asks for (`scruple serve --log FILE`), and nothing otherwise. Standard output
//! belongs to the protocol, and standard error is shown to users by some editors.

use std::fmt::Arguments;
use std::fs::File;
use std::io::{self, Write};
use std::path::Path;
use std::sync::{Mutex, OnceLock};
use std::time::Instant;

static LOG: OnceLock<(Mutex<File>, Instant)> = OnceLock::new();

/// Opens the log file, once; lines are appended.
///
/// # Errors
/// What opening reports.
pub fn open(path: &Path) -> io::Result<()> {
    let file = File::options().create(true).append(true).open(path)?;
    let _ = LOG.set((Mutex::new(file), Instant::now()));
    Ok(())
}

/// Appends a line with the time since the start, in seconds. Without a log file, nothing.
pub fn write(line: Arguments<'_>) {
    let Some((file, start)) = LOG.get() else { return };
    if let Ok(mut file) = file.lock() {
        // A full disk must not end the server, and there is nowhere else to say so.
        let _ = writeln!(file, "{:10.3} {line}", start.elapsed().as_secs_f64());
    }
}
