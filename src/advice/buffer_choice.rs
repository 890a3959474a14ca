//! Which buffers suit a pH, in the solution at hand and at its temperatures.

use std::collections::BTreeSet;

use crate::chemistry::{Chemistry, ComponentId, SpeciesId, debye_hueckel};
use crate::library::{Buffer, buffers};
use crate::model::{Constituents, GoalKind, Action, Property, Recipe};

/// A pKa further away than this holds a pH badly: the capacity has fallen to a third (common practice, no source).
const FURTHEST: f64 = 1.0;

/// What a constituent that the buffer must not meet counts, in units of pH away from the pKa.
const CONFLICT: f64 = 2.0;

/// Costs that differ by less are equal.
const EQUAL: f64 = 0.2;

/// Ionic strength that is assumed where the recipe does not tell yet, mol/kg.
const USUAL_IONIC_STRENGTH: f64 = 0.1;

/// What a buffer is wanted for.
#[derive(Clone, Debug)]
pub struct Wanted {
    /// The pH to hold.
    pub pH: f64,
    /// The temperature at which that pH is to hold, K.
    pub temperature_K: f64,
    /// Other temperatures at which the solution is made or used, K.
    pub others_K: Vec<f64>,
    /// Ionic strength, mol/kg.
    pub ionic_strength_mol_per_kg: f64,
    /// What else is in the solution.
    pub present: BTreeSet<ComponentId>,
}

/// A buffer that suits.
#[derive(Clone, Debug, PartialEq)]
pub struct BufferChoice {
    /// What it is counted by.
    pub component: ComponentId,
    /// The name of its ion.
    pub name: String,
    /// The acid whose pKa is near.
    pub acid: String,
    /// Its pKa at the temperature and ionic strength of the solution.
    pub pKa: f64,
    /// By how much that moves for a kelvin.
    pub slope_per_K: f64,
    /// What is in the solution that it binds or precipitates with.
    pub conflicts: Vec<String>,
    /// What else to mind.
    pub note: &'static str,
    /// How well it suits: the distance in pH, with what its way over the temperature and conflicts cost.
    cost: f64,
}

impl Wanted {
    /// What a recipe wants of its buffer: the last pH that it sets, else the one that it expects. None where it speaks of none.
    pub fn of(recipe: &Recipe, made_at_K: f64, ionic_strength_mol_per_kg: Option<f64>, present: BTreeSet<ComponentId>) -> Option<Self> {
        let goals = recipe.entries.iter().rev().flat_map(|entry| match &entry.action {
            Action::MakeUp(make_up) => make_up.goals.as_slice(),
            Action::Pair(pair) => pair.goals.as_slice(),
            _ => &[],
        });
        let set = goals.filter_map(|goal| match goal.kind {
            GoalKind::Property { property: Property::Ph, aim, .. } if aim.is_finite() => Some((aim, goal.temperature.map(|stated| stated.value))),
            _ => None,
        });
        let expected = recipe.expectations.iter().filter(|expectation| expectation.property == Property::Ph).filter_map(|expectation| {
            let middle = match (expectation.low, expectation.high) {
                (Some(low), Some(high)) => 0.5 * (low + high),
                (low, high) => low.or(high)?,
            };
            Some((middle, expectation.temperature))
        });
        let (pH, at_K) = set.chain(expected).next()?;
        let temperature_K = at_K.unwrap_or(made_at_K);
        let others_K = std::iter::once(made_at_K).chain(recipe.used_at.iter().map(|stated| stated.value)).collect();
        let ionic_strength_mol_per_kg = ionic_strength_mol_per_kg.unwrap_or(USUAL_IONIC_STRENGTH);
        Some(Wanted { pH, temperature_K, others_K, ionic_strength_mol_per_kg, present })
    }
}

/// The buffers that suit, the best first.
pub fn buffer_choices(constituents: &Constituents, wanted: &Wanted) -> Vec<BufferChoice> {
    let mut choices: Vec<BufferChoice> = buffers().iter().filter_map(|buffer| choice(constituents, wanted, buffer)).collect();
    // Of those that suit equally well the more usual one, which stands first in the table, comes first.
    choices.sort_by_key(|choice| (choice.cost / EQUAL).round() as u64);
    choices
}

fn choice(constituents: &Constituents, wanted: &Wanted, buffer: &Buffer) -> Option<BufferChoice> {
    let constituent = constituents.named(&buffer.ion)?;
    let component = constituent.component?;
    let (acid, pKa, slope_per_K) = nearest_pKa(&constituents.chemistry, component, wanted)?;
    let conflicts: Vec<String> = (buffer.not_with.iter())
        .filter_map(|name| constituents.named(name))
        .filter(|other| other.component.is_some_and(|other| other != component && wanted.present.contains(&other)))
        .map(|other| other.name.clone())
        .collect();
    let widest = wanted.others_K.iter().map(|other| (other - wanted.temperature_K).abs()).fold(0.0, f64::max);
    let cost = (pKa - wanted.pH).abs() + slope_per_K.abs() * widest + CONFLICT * conflicts.len().min(1) as f64;
    Some(BufferChoice { component, name: constituent.name.clone(), acid, pKa, slope_per_K, conflicts, note: buffer.note, cost })
}

/// The acid of a component whose pKa lies nearest to the pH, its pKa in the solution, and how that moves with temperature.
fn nearest_pKa(chemistry: &Chemistry, component: ComponentId, wanted: &Wanted) -> Option<(String, f64, f64)> {
    let mut forms: Vec<(SpeciesId, i32)> = (chemistry.all_species())
        .filter(|(_, species)| species.parts.as_slice() == [(component, 1)] && species.hydrogen >= 0)
        .map(|(id, species)| (id, species.hydrogen))
        .collect();
    forms.sort_by_key(|(_, hydrogen)| *hydrogen);
    let steps = forms.windows(2).filter_map(|pair| {
        let &[(base, fewer), (acid, more)] = pair else { return None };
        (more == fewer + 1).then(|| step(chemistry, base, acid, wanted)).flatten()
    });
    let near = steps.filter(|(_, pKa, _)| (pKa - wanted.pH).abs() <= FURTHEST);
    near.min_by(|one, other| (one.1 - wanted.pH).abs().total_cmp(&(other.1 - wanted.pH).abs()))
}

/// The pKa of an acid in the solution: the pH at which it and its base are equally there.
fn step(chemistry: &Chemistry, base: SpeciesId, acid: SpeciesId, wanted: &Wanted) -> Option<(String, f64, f64)> {
    let (base, acid) = (chemistry.species(base)?, chemistry.species(acid)?);
    let sum = |log_beta: &[(f64, crate::chemistry::ConstantId)], of: fn(&crate::chemistry::Constant, f64) -> f64| -> f64 {
        let terms = log_beta.iter();
        terms.map(|(factor, id)| factor * chemistry.constant(*id).map_or(0.0, |constant| of(constant, wanted.temperature_K))).sum()
    };
    let difference = |of| sum(&acid.log_beta, of) - sum(&base.log_beta, of);
    let root = wanted.ionic_strength_mol_per_kg.sqrt();
    let unit = debye_hueckel::slope(wanted.temperature_K) * root / (1.0 + 1.5 * root);
    let shift = unit * f64::from(acid.charge * acid.charge - base.charge * base.charge);
    Some((acid.name.clone(), difference(crate::chemistry::Constant::log10_k) + shift, difference(crate::chemistry::Constant::slope_per_K)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::library::built_in;
    use crate::model::NameKey;

    fn choices(pH: f64, others_K: &[f64], present: &[&str]) -> Vec<BufferChoice> {
        let constituents = &built_in().constituents;
        let present = present.iter().filter_map(|name| constituents.named(&NameKey::new(name))?.component).collect();
        let wanted =
            Wanted { pH, temperature_K: 298.15, others_K: others_K.to_vec(), ionic_strength_mol_per_kg: 0.1, present };
        buffer_choices(constituents, &wanted)
    }

    /// Apparent pKa at 25 °C and 0.1 mol/L (Good et al. 1966; Perrin & Dempsey 1974): phosphate 6.8, HEPES 7.5, Tris 8.1 to 8.2.
    #[test]
    fn apparent_constants_are_those_of_the_bench() {
        let found = choices(7.4, &[], &[]);
        let of = |name: &str| found.iter().find(|choice| choice.name == name).unwrap().pKa;
        assert!((of("phosphate") - 6.8).abs() < 0.1, "{}", of("phosphate"));
        assert!((of("HEPES") - 7.5).abs() < 0.1, "{}", of("HEPES"));
        assert!((of("Tris") - 8.15).abs() < 0.1, "{}", of("Tris"));
    }

    #[test]
    fn temperature_and_company_change_the_order() {
        let place = |found: &[BufferChoice], name: &str| found.iter().position(|choice| choice.name == name).unwrap();
        // Tris moves by 0.03 for a kelvin, phosphate by a tenth of that: in the cold room phosphate is ahead.
        let warm = choices(7.6, &[], &[]);
        assert!(place(&warm, "Tris") < place(&warm, "phosphate"));
        let cold = choices(7.6, &[277.15], &[]);
        assert!(place(&cold, "phosphate") < place(&cold, "Tris"));
        // With calcium phosphate falls out.
        let with_calcium = choices(7.4, &[], &["calcium"]);
        let phosphate = &with_calcium[place(&with_calcium, "phosphate")];
        assert_eq!(phosphate.conflicts, ["calcium"]);
        assert!(place(&with_calcium, "phosphate") > place(&with_calcium, "Tris"));
    }
}
