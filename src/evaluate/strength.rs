//! How strong a solution of one substance is: from any unit of strength to the mass fraction, by density tables where
//! there are some.

use super::goods::{INERT_LITRES_PER_KG, density_of, per_mole};
use super::names::Found;
use super::{Context, Refusal};
use crate::chemistry::Mixture;
use crate::finding::{Code, Finding};
use crate::model::{Amount, Reference, Substance};
use crate::units::Dimension;

/// The mass fraction of a substance in a solution of this strength.
#[allow(clippy::too_many_arguments, reason = "all of them are what a strength can depend on")]
pub fn mass_fraction(
    reference: &Reference,
    found: &Found,
    substance: &Substance,
    strength: &Amount,
    stated_density: Option<f64>,
    temperature_K: f64,
    context: &Context,
) -> Result<f64, Refusal> {
    let refuse = |message: String, help: &str| -> Refusal {
        Finding::new(Code::UnitOfWrongKind, reference.at, message).help(help).into()
    };
    let molar_mass = || {
        substance.molar_mass.ok_or_else(|| {
            refuse(format!("{} has no molar mass, so it has no strength in mol.", reference.text), "State it in g/L or % w/w.")
        })
    };
    let share = match strength.dimension() {
        Dimension::MassFraction => strength.value,
        Dimension::Molality => {
            let grams_per_kg = strength.value * molar_mass()?;
            grams_per_kg / (1.0 + grams_per_kg)
        }
        Dimension::AmountConcentration => {
            let grams_per_litre = strength.value * molar_mass()? * 1000.0;
            share_at(grams_per_litre, reference, found, substance, stated_density, temperature_K, context)?
        }
        Dimension::MassConcentration => {
            share_at(strength.value, reference, found, substance, stated_density, temperature_K, context)?
        }
        Dimension::VolumeFraction => match substance.density {
            Some(density) => {
                let grams_per_litre = strength.value * density;
                share_at(grams_per_litre, reference, found, substance, stated_density, temperature_K, context)?
            }
            None => {
                return Err(refuse(
                    format!("The density of {} is not known, so neither is its strength by volume.", reference.text),
                    "State the strength in % w/w or mol/L.",
                ));
            }
        },
        _ => return Err(refuse("This unit is no strength.".into(), "State the strength in mol/L, g/L, % w/w, % w/v or % v/v.")),
    };
    if !(0.0..=1.0 + 1e-9).contains(&share) {
        return Err(refuse(
            format!("No solution of {} is as strong as that: it would hold more than its own mass.", reference.text),
            "Check the strength.",
        ));
    }
    Ok(share.min(1.0))
}

/// The mass fraction at a mass concentration (g/L): w = ρ/d(w), where the density depends on w itself.
#[allow(clippy::too_many_arguments, reason = "all of them are what a strength can depend on")]
fn share_at(
    grams_per_litre: f64,
    reference: &Reference,
    found: &Found,
    substance: &Substance,
    stated_density: Option<f64>,
    temperature_K: f64,
    context: &Context,
) -> Result<f64, Refusal> {
    if let Some(density) = stated_density {
        return Ok(grams_per_litre / density);
    }
    let mole = match substance.molar_mass {
        Some(molar_mass) if !substance.inert => {
            Some(per_mole(reference, found, substance, context)?.0.scaled(1.0 / molar_mass))
        }
        _ => None,
    };
    let density_at = |share: f64| {
        table_density(substance, share).or_else(|| {
            let mut mixture = Mixture { water_kg: 1.0 - share, ..Mixture::default() };
            match &mole {
                Some(mole) => mixture.add(mole, share),
                None => {
                    mixture.inert_mass_kg += share;
                    mixture.inert_volume_L +=
                        share * substance.density.map_or(INERT_LITRES_PER_KG, |density| 1000.0 / density);
                }
            }
            density_of(&mixture, temperature_K, context)
        })
    };
    let mut share = (grams_per_litre / 1000.0).min(0.95);
    // The density changes slowly with the share, so this closes in by a factor of three or more a step.
    for _ in 0..60 {
        let Some(density) = density_at(share.clamp(0.0, 1.0)) else { break };
        let next = grams_per_litre / density;
        if (next - share).abs() < 1e-11 {
            return Ok(next);
        }
        share = next;
    }
    Ok(share)
}

/// Density of a solution of this mass fraction by the substance's table, kg/m³; none outside it.
pub fn table_density(substance: &Substance, share: f64) -> Option<f64> {
    let table = &substance.aqueous;
    let (last, ..) = *table.last()?;
    if share > last + 1e-12 {
        return None;
    }
    let upper = table.partition_point(|(fraction, ..)| *fraction < share);
    let (high_share, high_density, _) = *table.get(upper)?;
    let (low_share, low_density) = match upper.checked_sub(1).and_then(|lower| table.get(lower)) {
        Some((fraction, density, _)) => (*fraction, *density),
        // Below the first row lies pure water.
        None => (0.0, 998.2),
    };
    if high_share - low_share < 1e-12 {
        return Some(high_density);
    }
    let part = (share - low_share) / (high_share - low_share);
    Some(low_density + part * (high_density - low_density))
}
