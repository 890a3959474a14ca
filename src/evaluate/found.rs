//! `found`: a titrant's strength as it was measured takes the place of the computed one.

use super::goods::state_of;
use super::names::ingredient;
use super::{Context, Outcome, Refusal};
use crate::finding::{Code, Finding};
use crate::model::{Amount, Reference};
use crate::units::Dimension;

/// Takes the found strength over: the solution holds as much of the substance as was found.
///
/// # Errors
/// The solution holds none of it, or the strength is no amount concentration.
pub(super) fn take_over(outcome: &mut Outcome, what: &Reference, strength: &Amount, context: &Context) -> Result<(), Refusal> {
    let found = ingredient(what, false, context)?;
    let key = &found.definition.key;
    let nothing = || {
        Refusal::from(
            Finding::new(Code::UnknownName, what.at, format!("This solution holds no {} whose strength could be found.", what.text))
                .help("Name the substance that was standardised."),
        )
    };
    let solute = outcome.solutes.iter_mut().find(|solute| solute.definition == *key).ok_or_else(nothing)?;
    let computed = solute.amount_mol.filter(|amount| *amount > 0.0).ok_or_else(nothing)? / outcome.volume_L;
    if strength.dimension() != Dimension::AmountConcentration {
        return Err(Finding::new(Code::UnitOfWrongKind, what.at, "A found strength is an amount concentration.")
            .help("Write it in mol/L.")
            .into());
    }
    let more_mol = (strength.value - computed) * outcome.volume_L;
    if let Some(substance) = found.substance()
        && let (Ok((mole, _)), Some(molar_mass)) = (context.constituents.per_mole(key, substance), substance.molar_mass)
    {
        outcome.mixture.add(&mole, more_mol);
        solute.mass_kg += more_mol * molar_mass;
        outcome.mass_kg += more_mol * molar_mass;
    }
    solute.amount_mol = Some(strength.value * outcome.volume_L);
    outcome.found = Some((computed, strength.value));
    outcome.finished = state_of(&outcome.mixture, outcome.made_at_K, context);
    Ok(())
}
