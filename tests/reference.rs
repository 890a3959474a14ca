//! Every example of the language reference and of the README is read without a fault and worked out.

use std::sync::Arc;

use camino::Utf8Path;
use scruple::finding::{Code, Level};
use scruple::text::SourceText;
use scruple::workspace::Workspace;

/// The fenced examples of a page that are marked as recipes.
fn examples(page: &str) -> Vec<&str> {
    page.split("```prep\n").skip(1).filter_map(|rest| rest.split("```").next()).collect()
}

#[test]
fn every_example_of_the_reference_is_worked_out() {
    let page = include_str!("../grammar/README.md");
    let examples = examples(page);
    assert!(examples.len() >= 4);
    for (number, text) in examples.iter().enumerate() {
        let mut workspace = Workspace::new();
        let path = format!("/reference/example-{number}.prep");
        let id = workspace.set_open_text(Utf8Path::new(&path), Arc::new(SourceText::from(*text)));
        let snapshot = workspace.snapshot();
        for located in snapshot.findings(id) {
            let finding = &located.finding;
            assert!(finding.level < Level::Error, "{}: {}\n{text}", finding.code.name(), finding.message);
            assert!(finding.code != Code::WrittenForm, "{}\n{text}", finding.message);
        }
        for (file, index, block) in snapshot.solutions() {
            let checked = snapshot.checked(file.id, index).expect("every solution is checked");
            let name = &block.name.as_ref().expect("a solution has a name").text;
            assert!(checked.evaluation.members.iter().all(|member| member.outcome.is_some()), "{name} has no values");
        }
    }
}
