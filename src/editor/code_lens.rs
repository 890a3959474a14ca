//! A line above each recipe: its state, and what uses it.

use super::call_hierarchy::{HierarchyItem, goes_into_block};
use super::values::{Values, finished_ph};
use crate::finding::Level;
use crate::syntax::tree::BlockKind;
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// What stands above a recipe.
#[derive(Clone, Debug, PartialEq)]
pub struct CodeLens {
    /// The name in the recipe's header.
    pub span: Span,
    /// What is shown.
    pub title: String,
    /// What it is about.
    pub kind: LensKind,
}

/// What a lens is about.
#[derive(Clone, Debug, PartialEq)]
pub enum LensKind {
    /// Whether the recipe has values and holds what is expected of it.
    State,
    /// Which recipes take it, each with the characters that name it there.
    UsedBy(Vec<(HierarchyItem, Vec<Span>)>),
}

/// The lenses of a file, in the order of its lines: of each solution its state, and of solutions and bottles who uses them.
pub fn code_lens(snapshot: &Snapshot, file: FileId) -> Vec<CodeLens> {
    let Some(state) = snapshot.file(file).filter(|_| snapshot.files.contains_key(&file)) else { return Vec::new() };
    let mut lenses = Vec::new();
    for (index, block) in state.model.blocks.iter().enumerate() {
        let is_recipe = matches!(block.kind(), Some(BlockKind::Solution | BlockKind::Bottle));
        if !is_recipe || block.name.is_none() {
            continue;
        }
        let span = state.absolute(index, block.header_anchor());
        if block.kind() == Some(BlockKind::Solution) {
            lenses.push(CodeLens { span, title: standing(snapshot, file, index), kind: LensKind::State });
        }
        let users = goes_into_block(snapshot, file, index);
        let title = match users.as_slice() {
            [] => continue,
            [(one, _)] => format!("used by {}", one.name),
            several => format!("used by {} recipes", several.len()),
        };
        lenses.push(CodeLens { span, title, kind: LensKind::UsedBy(users) });
    }
    lenses
}

/// How a recipe stands, in a few words: what keeps it from having values, else its pH and what became of its expectations.
fn standing(snapshot: &Snapshot, file: FileId, index: usize) -> String {
    let count = |level| snapshot.findings(file).iter().filter(|one| one.block == index && one.finding.level == level).count();
    let Some(values) = Values::of(snapshot, file, index) else { return "no values".to_owned() };
    let outcomes = values.outcomes();
    if outcomes.is_empty() {
        return format!("no values: {}", counted(count(Level::Error), "error", "errors"));
    }
    let mut parts: Vec<String> = finished_ph(&outcomes).map(|ph| format!("pH {ph}")).into_iter().collect();
    let verdicts: Vec<_> = outcomes.iter().flat_map(|outcome| &outcome.verdicts).collect();
    let expectations = values.recipe.expectations.len();
    let failing = |place: usize| verdicts.iter().any(|verdict| verdict.expectation == place && verdict.holds == Some(false));
    let judged = |place: usize| verdicts.iter().any(|verdict| verdict.expectation == place && verdict.holds.is_some());
    let (failed, held) = (
        (0..expectations).filter(|place| failing(*place)).count(),
        (0..expectations).filter(|place| judged(*place) && !failing(*place)).count(),
    );
    if failed > 0 {
        parts.push(format!("{failed} of {} failed", counted(expectations, "expectation", "expectations")));
    } else if held > 0 && held == expectations {
        parts.push(match held {
            1 => "the expectation holds".to_owned(),
            2 => "both expectations hold".to_owned(),
            _ => format!("all {held} expectations hold"),
        });
    } else if expectations > 0 {
        parts.push(format!("{held} of {} held, the others not judged", counted(expectations, "expectation", "expectations")));
    }
    let warnings = count(Level::Warning);
    if warnings > 0 {
        parts.push(counted(warnings, "warning", "warnings"));
    }
    parts.join(" · ")
}

fn counted(count: usize, one: &str, several: &str) -> String {
    format!("{count} {}", if count == 1 { one } else { several })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    fn check(text: &str) -> Vec<String> {
        let fixture = fixture(text);
        let lenses = code_lens(&fixture.snapshot, fixture.file);
        lenses.into_iter().map(|lens| format!("{}: {}", lens.span.of(&fixture.text), lens.title)).collect()
    }

    #[test]
    fn a_recipe_says_how_it_stands_and_who_uses_it() {
        let shown = check("solution Stock\n    made at    25 °C\n    58.44 g    sodium chloride\n    q.s.       water to 1 L\n\nsolution A\n    made at    25 °C\n    10 mL      Stock\n    q.s.       water to 1 L\n    expect     total chloride 9 to 11 mmol/L\n    expect     total sodium at least 1 mol/L\n//- other.prep\nuse \"main.prep\"\nsolution B\n    made at    25 °C\n    10 mL      Stock\n    q.s.       water to 1 L\n");
        assert!(shown[0].starts_with("Stock: pH about "), "{shown:?}");
        assert_eq!(shown[1], "Stock: used by 2 recipes");
        assert!(shown[2].starts_with("A: pH about ") && shown[2].contains("1 of 2 expectations failed"), "{shown:?}");
        assert_eq!(shown.len(), 3);
    }

    #[test]
    fn a_recipe_with_a_mistake_says_so() {
        let shown = check("solution A\n    1 g        nothing of the kind\n    q.s.       water to 1 L\n");
        assert_eq!(shown, ["A: no values: 1 error"]);
    }
}
