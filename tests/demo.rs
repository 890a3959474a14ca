//! The demo library is what a good library looks like: it reads without an error or an open warning and gives values.

use camino::Utf8Path;
use scruple::finding::Level;
use scruple::workspace::Workspace;

#[test]
fn the_demo_library_is_clean_and_complete() {
    let folder = Utf8Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/library");
    let mut workspace = Workspace::new();
    workspace.open_root(&folder, &folder);
    let snapshot = workspace.snapshot();
    let mut complaints = Vec::new();
    for file in snapshot.files.values() {
        for located in snapshot.findings(file.id) {
            let line = 1 + file.source.line_of(located.span.start);
            let finding = &located.finding;
            println!("{}:{line}: {}: {}: {}", file.shown_path(), finding.level.word(), finding.code.name(), finding.message);
            if finding.level > Level::Hint {
                complaints.push(format!("{}:{line}: {}", file.shown_path(), finding.message));
            }
        }
    }
    assert!(complaints.is_empty(), "{}", complaints.join("\n"));
    let mut solutions = 0;
    for (file, index, block) in snapshot.solutions() {
        solutions += 1;
        let name = block.name.as_ref().map(|name| name.text.clone()).unwrap_or_default();
        let members = &snapshot.checked(file.id, index).expect("every solution is checked").evaluation.members;
        for member in members {
            let outcome = member.outcome.as_ref().unwrap_or_else(|| panic!("{name} has no values"));
            let ph = outcome.finished.as_ref().map(|state| state.pH());
            println!("{:32} pH {ph:.3?}, {:.4} L", member.name, outcome.volume_L);
            assert!(ph.is_ok_and(|ph| (0.0..14.5).contains(&ph)), "{name}");
            assert!(outcome.verdicts.iter().all(|verdict| verdict.holds == Some(true)), "{name}: {:?}", outcome.verdicts);
        }
    }
    assert!(solutions >= 30, "{solutions} solutions");
}
