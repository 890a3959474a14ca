//! Every example of the language reference and of its summary is read without a fault and worked out.

use std::sync::Arc;

use camino::Utf8Path;
use scruple::finding::{Code, Level};
use scruple::text::SourceText;
use scruple::workspace::Workspace;

/// The fenced examples of a page that are marked as recipes.
fn examples(page: &str) -> Vec<&str> {
    page.split("```prep\n").skip(1).filter_map(|rest| rest.split("```").next()).collect()
}

/// The summary is an example to follow: it has no open warning either.
fn is_summary(number: usize, examples: &[&str]) -> bool {
    number + 1 == examples.len()
}

#[test]
fn every_example_of_the_reference_is_worked_out() {
    let reference = examples(include_str!("../grammar/README.md"));
    let summary = examples(include_str!("../grammar/SUMMARY.md"));
    assert!(reference.len() >= 6 && summary.len() == 1);
    let examples: Vec<&str> = reference.into_iter().chain(summary).collect();
    for (number, text) in examples.iter().enumerate() {
        let mut workspace = Workspace::new();
        let path = format!("/reference/example-{number}.prep");
        let id = workspace.set_open_text(Utf8Path::new(&path), Arc::new(SourceText::from(*text)));
        let snapshot = workspace.snapshot();
        for located in snapshot.findings(id) {
            let finding = &located.finding;
            assert!(finding.level < Level::Error, "{}: {}\n{text}", finding.code.name(), finding.message);
            assert!(finding.code != Code::WrittenForm, "{}\n{text}", finding.message);
            assert!(finding.level < Level::Warning || !is_summary(number, &examples), "{}: {}", finding.code.name(), finding.message);
        }
        for (file, index, block) in snapshot.solutions() {
            let checked = snapshot.checked(file.id, index).expect("every solution is checked");
            let name = &block.name.as_ref().expect("a solution has a name").text;
            assert!(checked.evaluation.members.iter().all(|member| member.outcome.is_some()), "{name} has no values");
        }
    }
}
