//! Damaged lines: a line of the demo library cut anywhere, or with a character left out, never changes what other lines mean.
//!
//! Every run damages each line at a few places. All of them: `cargo test --test mutation -- --ignored`.

use camino::{Utf8Path, Utf8PathBuf};
use scruple::syntax::parse;
use scruple::syntax::tree::{Content, Line, Statement};

fn recipes() -> Vec<(String, String)> {
    let folder = Utf8Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/library");
    let mut paths: Vec<Utf8PathBuf> =
        folder.read_dir_utf8().expect("the demo library").flatten().map(|entry| entry.path().to_owned()).filter(|path| path.extension() == Some("prep")).collect();
    paths.sort();
    paths.into_iter().map(|path| (path.file_name().unwrap_or_default().to_owned(), std::fs::read_to_string(&path).expect("a readable file"))).collect()
}

/// What the other lines of a text mean: their statements, without the damaged line.
fn others(text: &str, first: usize, after: usize) -> Vec<Line> {
    let tree = parse(text);
    let end = text.len() - after;
    let outside = tree.lines.iter().filter(|placed| placed.start + placed.line.text.len() <= first || placed.start >= end);
    outside.map(|placed| (*placed.line).clone()).collect()
}

/// Damages every line at the places that `takes` accepts, by number of the character, and compares the others.
fn damage(takes: impl Fn(usize, usize) -> bool) -> usize {
    let mut damaged = 0;
    for (name, text) in recipes() {
        let mut start = 0;
        for line in text.split_inclusive('\n') {
            let content = line.trim_end_matches(['\n', '\r']);
            let ending = &line[content.len()..];
            let (before, after) = (&text[..start], &text[start + line.len()..]);
            let expected = others(&text, start, after.len());
            let is_header = matches!(parse(content).lines.first().map(|placed| &placed.line.content), Some(Content::Statement(Statement::Header(_))));
            let mut check = |mutant: &str| {
                damaged += 1;
                // A line that begins with a comma, and a comment, belong to what stands above them: they are no damage.
                if mutant.trim_start().starts_with(',') {
                    return;
                }
                let whole = format!("{before}{mutant}{ending}{after}");
                let found = others(&whole, start, after.len());
                assert!(found == expected, "{name}: {mutant:?} for {content:?}{}", if is_header { " (a header)" } else { "" });
            };
            let places: Vec<(usize, char)> = content.char_indices().collect();
            for (_, (at, character)) in places.iter().enumerate().filter(|(number, _)| takes(*number, places.len())) {
                check(&content[..*at]);
                check(&format!("{}{}", &content[..*at], &content[at + character.len_utf8()..]));
            }
            start += line.len();
        }
    }
    damaged
}

#[test]
fn damage_to_a_line_stays_in_the_line() {
    let damaged = damage(|number, length| number == 0 || number + 1 == length || number % 11 == 5);
    assert!(damaged > 1000, "{damaged} damages");
}

#[test]
#[ignore = "every place of every line takes some minutes"]
fn damage_anywhere_to_a_line_stays_in_the_line() {
    let damaged = damage(|_, _| true);
    assert!(damaged > 10_000, "{damaged} damages");
}
