//! Bottles: what a kilogram of what stands on the shelf holds, from its label.

use super::goods::{INERT_LITRES_PER_KG, volume_of};
use super::strength::{mass_fraction, table_density};
use super::names::ingredient;
use super::{Context, Outcome, Refusal, Solute};
use crate::chemistry::Mixture;
use crate::finding::{Code, Finding};
use crate::model::{Action, Block, CompositionRefusal, Recipe, is_water};

/// Evaluates a bottle as a kilogram of its contents.
pub(super) fn evaluate(block: &Block, recipe: &Recipe, context: &Context) -> Result<Outcome, Refusal> {
    let (temperature_K, made_at_half_width_K) = context.made_at_K(recipe);
    let stated_density = recipe.density.map(|density| density.value);
    let mut mixture = Mixture::default();
    let mut solutes = Vec::new();
    let mut shares = 0.0;
    let mut density = stated_density;
    let mut water_kg = 0.0;
    for entry in &recipe.entries {
        let Action::Add(addition) = &entry.action else {
            return Err(Finding::new(
                Code::MisplacedStatement,
                entry.at,
                "A bottle is described by what it holds, not by how it is made.",
            )
            .help("State each substance with its strength.")
            .into());
        };
        let Some(amount) = addition.amounts.first() else { return Err(Refusal::reported()) };
        let found = ingredient(&addition.what, false, context)?;
        let Some(substance) = found.substance() else {
            return Err(Finding::new(
                Code::BadDefinition,
                addition.what.at,
                format!("{} is no substance; a bottle holds substances.", addition.what.text),
            )
            .help("Name the substance that the label names.")
            .into());
        };
        let share = if amount.dimension() == crate::units::Dimension::Percent {
            // A bare per cent has been reported where it stands.
            return Err(Refusal::reported());
        } else {
            mass_fraction(&addition.what, &found, substance, amount, density, temperature_K, context)?
        };
        if is_water(substance) {
            mixture.water_kg += share;
            water_kg += share;
            shares += share;
            continue;
        }
        shares += share;
        density = density.or_else(|| table_density(substance, share)).or(match (share > 0.97, substance.density) {
            (true, Some(pure)) => Some(pure),
            _ => None,
        });
        let amount_mol = match (context.constituents.per_mole(&found.definition.key, substance), substance.molar_mass) {
            (Ok((mole, crystal_water)), Some(molar_mass)) => {
                mixture.add(&mole, share / molar_mass);
                water_kg += crystal_water * share / molar_mass;
                Some(share / molar_mass)
            }
            (Err(CompositionRefusal::Inert | CompositionRefusal::NoMolarMass), molar_mass) => {
                mixture.inert_mass_kg += share;
                mixture.inert_volume_L +=
                    share * substance.density.map_or(INERT_LITRES_PER_KG, |density| 1000.0 / density);
                molar_mass.map(|molar_mass| share / molar_mass)
            }
            _ => {
                return Err(Finding::new(
                    Code::BadDefinition,
                    addition.what.at,
                    format!("What {} gives in water is not known.", addition.what.text),
                )
                .help("Mend the substance's block.")
                .into());
            }
        };
        solutes.push(Solute {
            definition: found.definition.key.clone(),
            name: found.definition.name().to_string(),
            amount_mol,
            mass_kg: share,
        });
    }
    if recipe.entries.is_empty() {
        return Err(Finding::new(Code::NoExtent, block.header_anchor(), "The bottle does not say what it holds.")
            .help("Add a line with its strength, such as `37 % w/w hydrochloric acid`.")
            .into());
    }
    if shares > 1.0 + 1e-6 {
        return Err(Finding::new(
            Code::BadNumber,
            block.header_anchor(),
            format!("The bottle's contents come to {:.1} % of its mass.", 100.0 * shares),
        )
        .help("Check the strengths and the density.")
        .into());
    }
    // What the label does not name is water.
    mixture.water_kg += (1.0 - shares).max(0.0);
    water_kg += (1.0 - shares).max(0.0);
    let volume_L = match density {
        Some(density) => 1000.0 / density,
        None => volume_of(&mixture, temperature_K, context).ok_or_else(|| {
            Refusal::from(
                Finding::new(Code::NoExtent, block.header_anchor(), "The bottle's density is not known.")
                    .help("Add its `density` from the label."),
            )
        })?,
    };
    Ok(Outcome {
        made_at_K: temperature_K,
        made_at_half_width_K,
        finished: context.constituents.chemistry.solve(&mixture, temperature_K, context.settings),
        mass_kg: 1.0,
        water_kg,
        mixture,
        volume_L,
        lines: Vec::new(),
        set_points: Vec::new(),
        parts: Vec::new(),
        stages: Vec::new(),
        removed: Vec::new(),
        above: None,
        drift: None,
        uses: Vec::new(),
        verdicts: Vec::new(),
        solutes,
        found: None,
        made_up: true,
    })
}
