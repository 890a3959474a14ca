//! What a thing goes into, and what a recipe is made of; asked again of each answer, to any depth.

use std::collections::{BTreeMap, BTreeSet};

use super::cursor::block_span;
use super::describe;
use super::references::{definition_at, references_in};
use super::target::{defined_by, definition_of, locate};
use super::values::Values;
use crate::model::Definition;
use crate::syntax::tree::BlockKind;
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// A thing in the hierarchy.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct HierarchyItem {
    /// The file that defines it.
    pub file: FileId,
    /// Its name's characters there.
    pub name_span: Span,
    /// The whole block.
    pub span: Span,
    /// Its name.
    pub name: String,
    /// What stands beside the name.
    pub detail: String,
    /// What it is.
    pub kind: HierarchyKind,
}

/// What a thing in the hierarchy is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum HierarchyKind {
    /// A solution.
    Solution,
    /// A bottle.
    Bottle,
    /// A substance.
    Substance,
}

/// The thing at an offset: a solution, a bottle or a substance.
pub fn prepare_call_hierarchy(snapshot: &Snapshot, file: FileId, offset: usize) -> Option<HierarchyItem> {
    item(snapshot, &definition_at(snapshot, file, offset)?)
}

/// The recipes that the thing at an offset goes into, each with the characters of its file that say so.
pub fn goes_into(snapshot: &Snapshot, file: FileId, offset: usize) -> Vec<(HierarchyItem, Vec<Span>)> {
    definition_at(snapshot, file, offset).map(|definition| users(snapshot, &definition)).unwrap_or_default()
}

/// The recipes that a block goes into.
pub fn goes_into_block(snapshot: &Snapshot, file: FileId, block: usize) -> Vec<(HierarchyItem, Vec<Span>)> {
    let definition = snapshot.file(file).and_then(|state| defined_by(state, state.model.blocks.get(block)?));
    definition.map(|definition| users(snapshot, &definition)).unwrap_or_default()
}

fn users(snapshot: &Snapshot, definition: &Definition) -> Vec<(HierarchyItem, Vec<Span>)> {
    let mut found: BTreeMap<(FileId, usize), Vec<Span>> =
        snapshot.users_of(&definition.key).iter().map(|user| (*user, Vec::new())).collect();
    // A strength and a name may stand for a stock that the line does not name.
    if definition.block.recipe().is_some() {
        for (state, block, _) in snapshot.solutions() {
            if !lines_that_take(snapshot, state.id, block, definition).is_empty() {
                found.entry((state.id, block)).or_default();
            }
        }
    }
    let files: BTreeSet<FileId> = found.keys().map(|(file, _)| *file).collect();
    for state in files.iter().filter_map(|file| snapshot.file(*file)) {
        for mention in references_in(snapshot, state, definition) {
            let (block, _) = state.block_of_line(state.line_at(mention.span.start));
            found.entry((state.id, block)).or_default().push(mention.span);
        }
    }
    for ((file, block), spans) in found.iter_mut().filter(|(_, spans)| spans.is_empty()) {
        *spans = lines_that_take(snapshot, *file, *block, definition);
    }
    found.retain(|_, spans| !spans.is_empty());
    let mut users: Vec<(HierarchyItem, Vec<Span>)> = found
        .into_iter()
        .filter_map(|((file, block), spans)| {
            let state = snapshot.file(file)?;
            let user = defined_by(state, state.model.blocks.get(block)?)?;
            // What a recipe says of itself, as in `found`, is no use of it.
            (user.key != definition.key || user.block.kind() != definition.block.kind()).then_some(())?;
            let item = item(snapshot, &user)?;
            (item.kind != HierarchyKind::Substance).then_some((item, spans))
        })
        .collect();
    let path = |item: &HierarchyItem| snapshot.file(item.file).map(|file| file.path.clone());
    users.sort_by_key(|(one, _)| (path(one), one.span));
    users
}

/// The lines of a recipe that were found to take a thing.
fn lines_that_take(snapshot: &Snapshot, file: FileId, block: usize, definition: &Definition) -> Vec<Span> {
    let (Some(state), Some(values)) = (snapshot.file(file), Values::of(snapshot, file, block)) else { return Vec::new() };
    let own = values.own_entries().map(|(index, _)| index).collect::<Vec<_>>();
    let outcome = values.outcomes().first().copied();
    let lines = outcome.into_iter().flat_map(|outcome| &outcome.lines);
    let taking = lines.filter(|line| line.definition == definition.key && own.contains(&line.entry));
    taking.map(|line| state.absolute(block, line.at)).collect()
}

/// What the recipe at an offset is made of, each with the characters of the recipe's file that name it.
pub fn made_of(snapshot: &Snapshot, file: FileId, offset: usize) -> Vec<(HierarchyItem, Vec<Span>)> {
    let Some(definition) = definition_at(snapshot, file, offset) else { return Vec::new() };
    let Some((state, block)) = locate(snapshot, &definition) else { return Vec::new() };
    let mut parts: Vec<(HierarchyItem, Vec<Span>)> = Vec::new();
    let mut add = |definition: &Definition, span: Span| {
        let Some(item) = item(snapshot, definition) else { return };
        match parts.iter_mut().find(|(other, _)| *other == item) {
            Some((_, spans)) => spans.push(span),
            None => parts.push((item, vec![span])),
        }
    };
    let first = state.model.first_lines.get(block).copied().unwrap_or(0);
    let kind = definition.block.kind();
    for (index, line) in definition.block.lines.iter().enumerate() {
        let crate::syntax::tree::Content::Statement(statement) = &line.content else { continue };
        for name in super::names::names(statement, kind) {
            if name.namespace != crate::model::Namespace::Ingredient || !goes_in(statement) {
                continue;
            }
            if let [one] = super::target::meanings(snapshot, state.id, &name).as_slice() {
                add(one, name.name.span.shifted(state.line_start(first + index)));
            }
        }
    }
    let taken = Values::of(snapshot, state.id, block).and_then(|values| values.outcomes().first().copied());
    for line in taken.into_iter().flat_map(|outcome| &outcome.lines) {
        let stock = definition_of(snapshot, &line.definition).filter(|stock| stock.block.recipe().is_some());
        if let Some(stock) = stock
            && let Some(item) = item(snapshot, &stock)
            && !parts.iter().any(|(other, _)| *other == item)
        {
            parts.push((item, vec![state.absolute(block, line.at)]));
        }
    }
    parts
}

/// Whether what a statement names goes into the recipe.
fn goes_in(statement: &crate::syntax::tree::Statement) -> bool {
    use crate::syntax::tree::Statement as S;
    matches!(statement, S::Ingredient(_) | S::Or(_) | S::Pair(_) | S::QuantumSatis(_) | S::All(_) | S::Like(_))
}

fn item(snapshot: &Snapshot, definition: &Definition) -> Option<HierarchyItem> {
    let kind = match definition.block.kind()? {
        BlockKind::Solution => HierarchyKind::Solution,
        BlockKind::Bottle => HierarchyKind::Bottle,
        BlockKind::Substance => HierarchyKind::Substance,
        BlockKind::Ion | BlockKind::Solid | BlockKind::Danger | BlockKind::Group | BlockKind::Lab => return None,
    };
    let (state, block) = locate(snapshot, definition)?;
    Some(HierarchyItem {
        file: state.id,
        name_span: state.absolute(block, definition.block.header_anchor()),
        span: block_span(state, block),
        name: definition.name().to_owned(),
        detail: describe::detail(snapshot, state.id, block, &definition.block),
        kind,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    const TEXT: &str = "solution Salt stock\n    made at    25 °C\n    58.44 g    sodium chloride\n    q.s.       water to 1 L\n\nsolution Saline\n    made at    25 °C\n    10 mL      Salt stock\n    5 mL       Salt stock\n    q.s.       water to 100 mL\n//- other.prep\nuse \"main.prep\"\nsolution Rinse\n    made at    25 °C\n    1 mmol/L   sodium chloride, from Salt stock\n    10 mL      Saline\n    q.s.       water to 1 L\n";

    fn names(of: Vec<(HierarchyItem, Vec<Span>)>) -> Vec<String> {
        of.into_iter().map(|(item, spans)| format!("{} ({})", item.name, spans.len())).collect()
    }

    #[test]
    fn a_stock_goes_into_recipes_of_all_files_that_see_it() {
        let fixture = fixture(&TEXT.replacen("Salt stock", "Salt st‸ock", 1));
        let stock = prepare_call_hierarchy(&fixture.snapshot, fixture.file, fixture.offset).unwrap();
        assert_eq!((stock.name.as_str(), stock.kind), ("Salt stock", HierarchyKind::Solution));
        assert_eq!(names(goes_into(&fixture.snapshot, fixture.file, fixture.offset)), ["Saline (2)", "Rinse (1)"]);
    }

    #[test]
    fn a_recipe_is_made_of_stocks_and_substances() {
        let fixture = fixture(&TEXT.replacen("solution Rinse", "solution Rin‸se", 1));
        assert_eq!(
            names(made_of(&fixture.snapshot, fixture.file, fixture.offset)),
            ["sodium chloride (1)", "Salt stock (1)", "Saline (1)", "water (1)"]
        );
    }

    #[test]
    fn a_stock_that_a_strength_stands_for_is_found_both_ways() {
        let text = "solution Lye stock\n    made at    25 °C\n    1 mol/L    sodium hydroxide\n    q.s.       water to 1 L\n\nsolution Buffer\n    made at    25 °C\n    50 mmol/L  sodium dihydrogen phosphate\n    900 mL     water\n    q.s.       1 mol/L sodium hydroxide to pH 7.00\n    q.s.       water to 1 L\n";
        let above = fixture(&text.replacen("Lye stock", "Lye sto‸ck", 1));
        assert_eq!(names(goes_into(&above.snapshot, above.file, above.offset)), ["Buffer (1)"]);
        let below = fixture(&text.replacen("solution Buffer", "solution Buf‸fer", 1));
        assert!(names(made_of(&below.snapshot, below.file, below.offset)).contains(&"Lye stock (1)".to_owned()));
    }

    #[test]
    fn an_ion_is_in_no_hierarchy() {
        let fixture = fixture("solution A\n    1 g        sodium chloride\n    q.s.       water to 1 L\n    expect     total chlor‸ide at most 1 mol/L\n");
        assert_eq!(prepare_call_hierarchy(&fixture.snapshot, fixture.file, fixture.offset), None);
    }
}
