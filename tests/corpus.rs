//! Recipes that are right must have no fault: the built-in library and the fixtures of findings that are not about writing.

use std::path::Path;

use scruple::syntax::parse;
use scruple::syntax::tree::FaultKind;

fn faults_in(path: &Path) -> Vec<String> {
    let text = std::fs::read_to_string(path).expect("a readable file");
    let tree = parse(&text);
    assert_eq!(tree.len(), text.len(), "{}", path.display());
    tree.lines
        .iter()
        .flat_map(|placed| {
            placed.line.faults.iter().map(|fault| {
                let number = text[..placed.start].lines().count() + 1;
                format!(
                    "{}:{number}: {:?} at {:?} in {:?}",
                    path.file_name().unwrap_or_default().display(),
                    fault.kind,
                    fault.span.of(&placed.line.text),
                    placed.line.text.trim_end()
                )
            })
        })
        .collect()
}

fn recipes(folder: &str) -> Vec<std::path::PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join(folder);
    let Ok(entries) = std::fs::read_dir(&folder) else { return Vec::new() };
    let mut paths: Vec<_> =
        entries.flatten().map(|entry| entry.path()).filter(|path| path.extension().is_some_and(|end| end == "prep")).collect();
    paths.sort();
    paths
}

#[test]
fn the_built_in_library_is_written_without_fault() {
    let paths = recipes("src/library/data");
    assert!(!paths.is_empty());
    let faults: Vec<String> = paths.iter().flat_map(|path| faults_in(path)).collect();
    assert!(faults.is_empty(), "{} faults:\n{}", faults.len(), faults.join("\n"));
}

#[test]
fn published_recipes_are_written_without_fault() {
    let faults: Vec<String> =
        recipes("tests/published").iter().chain(&recipes("tests/library")).flat_map(|path| faults_in(path)).collect();
    assert!(faults.is_empty(), "{} faults:\n{}", faults.len(), faults.join("\n"));
}

#[test]
fn recipes_stand_in_the_columns_of_the_formatter() {
    for path in ["src/library/data", "tests/published", "tests/library"].into_iter().flat_map(recipes) {
        let text = std::fs::read_to_string(&path).expect("a readable file");
        let formatted = scruple::syntax::format(&text);
        let moved = text.lines().zip(formatted.lines()).find(|(written, laid_out)| written != laid_out);
        assert_eq!(moved, None, "{}", path.display());
        assert_eq!(text, formatted, "{}", path.display());
    }
}

#[test]
fn a_change_of_one_quantity_changes_one_line() {
    for path in recipes("tests/library") {
        let text = std::fs::read_to_string(&path).expect("a readable file");
        for (number, line) in text.lines().enumerate().filter(|(_, line)| line.starts_with("    ") && line[4..].starts_with(|c: char| c.is_ascii_digit())) {
            let changed: Vec<String> = text
                .lines()
                .enumerate()
                .map(|(index, other)| if index == number { line.replacen(|c: char| c.is_ascii_digit(), "12345", 1) } else { other.to_owned() })
                .collect();
            let formatted = scruple::syntax::format(&(changed.join("\n") + "\n"));
            let differing = text.lines().zip(formatted.lines()).filter(|(one, other)| one != other).count();
            assert_eq!(differing, 1, "{}:{}", path.display(), number + 1);
        }
    }
}

#[test]
fn recipes_that_must_stay_silent_are_written_without_fault() {
    let near = recipes("tests/fixtures/findings");
    let near = near.iter().filter(|path| path.to_string_lossy().contains(".near"));
    let faults: Vec<String> = near.flat_map(|path| faults_in(path)).collect();
    assert!(faults.is_empty(), "{} faults:\n{}", faults.len(), faults.join("\n"));
}

#[test]
fn findings_of_writing_are_raised_by_their_fixtures() {
    let kinds = |name: &str| {
        let path = format!("{}/tests/fixtures/findings/{name}", env!("CARGO_MANIFEST_DIR"));
        let text = std::fs::read_to_string(path).expect("a fixture");
        parse(&text).lines.iter().flat_map(|placed| placed.line.faults.clone()).map(|fault| fault.kind).collect::<Vec<_>>()
    };
    assert_eq!(kinds("decimal-comma.raise.prep"), [FaultKind::DecimalComma]);
    assert_eq!(kinds("ppm.raise.prep"), [FaultKind::Ppm]);
}
