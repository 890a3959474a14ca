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
