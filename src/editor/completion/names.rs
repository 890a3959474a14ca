//! Names of substances, bottles, solutions, ions, solids and labs.

use std::collections::BTreeSet;

use super::items::{Draft, Items};
use super::suited_buffers::SuitedBuffers;
use super::CompletionKind;
use crate::editor::cursor::Cursor;
use crate::editor::describe;
use crate::editor::names::{NameUse, names};
use crate::editor::target::locate;
use crate::evaluate::written_form;
use crate::model::{Block, Body, Definition, Namespace};
use crate::syntax::tree::{BlockKind, Expected, Statement};
use crate::text::Span;

/// Which definitions can stand at a place.
#[derive(Clone, Copy)]
struct Wanted {
    namespace: Namespace,
    solutions_only: bool,
    /// Only names that are written in quotes.
    quoted_only: bool,
}

/// Offers the names that can stand where one has been begun.
pub fn at(items: &mut Items, cursor: &Cursor, statement: &Statement, span: Span) {
    let here = |name: &NameUse| cursor.absolute(name.name.span).start == span.start;
    let Some(name) = names(statement, cursor.block.kind()).into_iter().find(here) else { return };
    let wanted = Wanted { namespace: name.namespace, solutions_only: name.takes_solutions, quoted_only: false };
    offer(items, cursor, wanted, span);
    if let Some(namespace) = name.fallback {
        offer(items, cursor, Wanted { namespace, solutions_only: false, quoted_only: false }, span);
    }
}

/// Offers names such as `10x salt`, which are read as a quantity until they are written in quotes.
pub fn begun_with_a_number(items: &mut Items, cursor: &Cursor, span: Span) {
    offer(items, cursor, Wanted { namespace: Namespace::Ingredient, solutions_only: false, quoted_only: true }, span);
}

/// Offers the names that belong into a gap.
pub fn of_kind(items: &mut Items, cursor: &Cursor, expected: Expected, span: Span) {
    let (namespace, solutions_only) = match expected {
        Expected::IngredientName => (Namespace::Ingredient, false),
        Expected::SolutionName => (Namespace::Ingredient, true),
        Expected::ConstituentName => (Namespace::Constituent, false),
        Expected::LabName => (Namespace::Lab, false),
        _ => return,
    };
    let is_phase = matches!(cursor.statement(), Some(Statement::Expect(expect)) if matches!(
        expect.property.given().map(|property| &property.kind),
        Some(crate::syntax::tree::PropertyKind::SaturationIndex(_))
    ));
    let namespace = if is_phase { Namespace::Phase } else { namespace };
    offer(items, cursor, Wanted { namespace, solutions_only, quoted_only: false }, span);
}

fn offer(items: &mut Items, cursor: &Cursor, wanted: Wanted, span: Span) {
    if wanted.namespace == Namespace::Constituent {
        return constituents(items, cursor, span);
    }
    let scope = items.snapshot.scope(items.file);
    let suited = if wanted.namespace == Namespace::Ingredient { SuitedBuffers::at(items, cursor) } else { None };
    let mut seen = BTreeSet::new();
    for (names, is_own) in [(&scope.own, true), (&scope.built_in, false)] {
        for (namespace, _, definitions) in names.all().filter(|(namespace, ..)| *namespace == wanted.namespace) {
            for definition in definitions {
                if !is_wanted(definition, cursor.block, wanted) || !items.is_begun(span, spellings(&definition.block)) || !seen.insert((definition.key.clone(), definition.block.kind())) {
                    continue;
                }
                let rank = match (namespace, is_own) {
                    (_, true) if definition.key.file == items.file => 10,
                    (_, true) => 20,
                    (_, false) => 30,
                };
                let mut draft = draft(items, definition, rank);
                if let Some(suited) = &suited {
                    suited.recommend(&mut draft, &definition.block);
                }
                items.add(span, draft);
            }
        }
    }
}

fn is_wanted(definition: &Definition, own_block: &std::sync::Arc<Block>, wanted: Wanted) -> bool {
    let kind = definition.block.kind();
    let fits = !wanted.solutions_only || matches!(kind, Some(BlockKind::Solution | BlockKind::Bottle));
    let fits = fits && (!wanted.quoted_only || written_form(definition.name()).starts_with('"'));
    // Nothing is made from itself.
    fits && !std::sync::Arc::ptr_eq(&definition.block, own_block)
}

fn draft(items: &Items, definition: &Definition, rank: u32) -> Draft {
    let name = definition.name();
    let block = &definition.block;
    let detail = match locate(items.snapshot, definition) {
        Some((file, index)) => describe::detail(items.snapshot, file.id, index, block),
        None => String::new(),
    };
    let kind = match &block.body {
        Body::Substance(_) => CompletionKind::Substance,
        Body::Bottle(_) => CompletionKind::Bottle,
        Body::Solid(_) => CompletionKind::Solid,
        Body::Lab(_) => CompletionKind::Lab,
        Body::Ion(_) => CompletionKind::Constituent,
        Body::Danger(_) | Body::Group(_) => CompletionKind::Constituent,
        Body::Solution(_) | Body::None => CompletionKind::Solution,
    };
    Draft {
        label: name.to_owned(),
        insert: written_form(name),
        documentation: documentation(items, definition),
        spellings: spellings(block).skip(1).map(str::to_owned).collect(),
        kind,
        detail,
        rank,
    }
}

/// Every way in which a thing is spelled: its name, its other names, its formula.
fn spellings(block: &Block) -> impl Iterator<Item = &str> {
    let formula = match &block.body {
        Body::Substance(substance) => substance.formula.as_ref().map(|(formula, _)| formula.as_str()),
        _ => None,
    };
    block.name.iter().chain(&block.also).map(|name| name.text.as_str()).chain(formula)
}

/// The pKa values of a substance, and what must be kept in mind with it.
fn documentation(items: &Items, definition: &Definition) -> String {
    match &definition.block.body {
        Body::Substance(substance) => {
            let pka = crate::editor::hover::pka_of(items.snapshot, items.file, substance).map(|values| format!("pKa {values}."));
            let caution = describe::caution(definition.name(), &substance.hazards);
            pka.into_iter().chain(caution).collect::<Vec<_>>().join("\n")
        }
        Body::Bottle(recipe) => describe::caution(definition.name(), &recipe.hazards).unwrap_or_default(),
        _ => String::new(),
    }
}

/// Ions, their forms, and molecules: those that the solution holds first.
fn constituents(items: &mut Items, cursor: &Cursor, span: Span) {
    let constituents = items.snapshot.constituents(items.file);
    let evaluation = items.snapshot.checked(items.file, cursor.block_index).map(|checked| checked.evaluation.clone());
    let outcome = evaluation.as_ref().and_then(|evaluation| evaluation.outcome());
    for (key, constituent) in constituents.all() {
        let is_held = constituent.component.is_some_and(|component| {
            outcome.is_some_and(|outcome| outcome.mixture.amounts_mol.get(&component).is_some_and(|moles| *moles > 0.0))
        });
        // The key of another spelling is not how anyone would write it.
        let spelled = if crate::model::NameKey::new(&constituent.name) == *key { constituent.name.clone() } else { key.as_str().to_owned() };
        items.add(span, Draft {
            insert: written_form(&spelled),
            detail: constituent.molar_mass.map_or_else(String::new, describe::molar_mass),
            ..Draft::plain(spelled, CompletionKind::Constituent, if is_held { 10 } else { 20 })
        });
    }
}
