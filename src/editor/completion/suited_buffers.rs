//! Buffers that suit the pH of the recipe, put first where a concentration has been written, with the reason.

use std::sync::Arc;

use super::items::{Draft, Items};
use crate::advice::{BufferChoice, Wanted, buffer_choices};
use crate::chemistry::ComponentId;
use crate::editor::cursor::Cursor;
use crate::evaluate::DEFAULT_TEMPERATURE_K;
use crate::model::{Action, Block, Body, Constituents, NameKey};
use crate::syntax::tree::{Amounts, Statement};
use crate::units::{Dimension, Unit, format};

/// How many places at the head of the list are kept for buffers that suit.
const PLACES: u32 = 9;

/// Counterions that a salt of a buffer may bring.
const COUNTERIONS: &[&str] = &["sodium", "potassium", "chloride"];

/// The buffers that suit, the best first.
pub struct SuitedBuffers {
    constituents: Arc<Constituents>,
    choices: Vec<BufferChoice>,
    wanted: Wanted,
    counterions: Vec<ComponentId>,
}

impl SuitedBuffers {
    /// Those of the recipe under the cursor, where its line begins with a concentration and it says which pH it wants.
    pub fn at(items: &Items, cursor: &Cursor) -> Option<Self> {
        if !matches!(concentration(cursor.statement()?)?.dimension(), Dimension::AmountConcentration | Dimension::Molality) {
            return None;
        }
        let recipe = cursor.block.recipe()?;
        let constituents = items.snapshot.constituents(items.file);
        let checked = items.snapshot.checked(items.file, cursor.block_index);
        let state = checked
            .and_then(|checked| checked.evaluation.outcome())
            .and_then(|outcome| outcome.finished.as_ref().ok());
        let made_at_K = recipe.made_at.as_ref().map_or(DEFAULT_TEMPERATURE_K, |stated| stated.value);
        let present = match state {
            Some(state) => state.mixture().amounts_mol.keys().copied().collect(),
            // While a line is being typed the recipe has no values: what its other lines name is there all the same.
            None => named_elsewhere(items, cursor, &constituents),
        };
        let ionic_strength = state.map(|state| state.ionic_strength_mol_per_kg);
        let wanted = Wanted::of(recipe, made_at_K, ionic_strength, present)?;
        let choices = buffer_choices(&constituents, &wanted);
        let counterions = COUNTERIONS.iter().filter_map(|name| constituents.named(&NameKey::new(name))?.component).collect();
        Some(SuitedBuffers { constituents, choices, wanted, counterions })
    }

    /// Puts a substance forward that is one of the buffers, or a plain salt of one, and says why.
    pub fn recommend(&self, draft: &mut Draft, block: &Block) {
        let Body::Substance(substance) = &block.body else { return };
        let mut gives = substance.gives.iter().filter_map(|(_, reference)| self.constituents.named(&reference.key)?.component);
        let is_own = |component: &ComponentId| !self.counterions.contains(component);
        let Some(component) = gives.clone().find(is_own) else { return };
        if !gives.all(|other| other == component || self.counterions.contains(&other)) {
            return;
        }
        let Some(place) = self.choices.iter().position(|choice| choice.component == component) else { return };
        let Some(choice) = self.choices.get(place) else { return };
        if choice.conflicts.is_empty() {
            draft.rank = u32::try_from(place).map_or(PLACES, |place| place.min(PLACES));
        }
        let pKa = format!("pKa {} here", format::fixed(choice.pKa, 2));
        draft.detail = if draft.detail.is_empty() { pKa } else { format!("{pKa} · {}", draft.detail) };
        draft.documentation = match draft.documentation.as_str() {
            "" => self.reason(choice),
            said => format!("{}\n{said}", self.reason(choice)),
        };
    }

    fn reason(&self, choice: &BufferChoice) -> String {
        let mut said = format!(
            "For pH {}: the pKa of {} is {} at {} and an ionic strength of {}, and moves by {} per kelvin.",
            format::ph(self.wanted.pH),
            choice.acid,
            format::fixed(choice.pKa, 2),
            format::temperature(self.wanted.temperature_K),
            format::molality(self.wanted.ionic_strength_mol_per_kg, 2),
            format::fixed(choice.slope_per_K, 3),
        );
        if !choice.conflicts.is_empty() {
            said.push_str(&format!(" Not beside the {} of this recipe: it binds or precipitates with it.", choice.conflicts.join(" and ")));
        }
        if !choice.note.is_empty() {
            said.push_str(&format!(" Mind: {}.", choice.note));
        }
        said
    }
}

/// The unit of the amount that a line begins with.
fn concentration(statement: &Statement) -> Option<Unit> {
    let quantity = match statement {
        Statement::Ingredient(line) => match line.amounts.given()? {
            Amounts::One(quantity) | Amounts::Range(_, quantity) => quantity,
            Amounts::Series(quantities) => quantities.last()?,
        },
        Statement::Pair(pair) => pair.amount.given()?,
        _ => return None,
    };
    Some(quantity.unit)
}

/// What the substances of the other lines give in water.
fn named_elsewhere(items: &Items, cursor: &Cursor, constituents: &Constituents) -> std::collections::BTreeSet<ComponentId> {
    let scope = items.snapshot.scope(items.file);
    let recipe = cursor.block.recipe();
    let references = recipe.into_iter().flat_map(|recipe| &recipe.entries).filter_map(|entry| match &entry.action {
        Action::Add(addition) => Some(&addition.what),
        Action::MakeUp(make_up) => Some(&make_up.what),
        _ => None,
    });
    references
        .flat_map(|reference| {
            [&scope.own, &scope.built_in].into_iter().flat_map(move |names| names.named(crate::model::Namespace::Ingredient, &reference.key))
        })
        .filter_map(|definition| match &definition.block.body {
            Body::Substance(substance) => Some(substance),
            _ => None,
        })
        .flat_map(|substance| &substance.gives)
        .filter_map(|(_, given)| constituents.named(&given.key)?.component)
        .collect()
}
