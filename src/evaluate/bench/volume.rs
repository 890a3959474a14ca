//! The volume of the beaker, what fills it up to a mark, and its dilution.

use super::refusals::overfull;
use super::Bench;
use crate::chemistry::{Mixture, water};
use crate::evaluate::beaker::Beaker;
use crate::evaluate::goods::{Goods, goods, volume_of};
use crate::evaluate::names::ingredient;
use crate::evaluate::plan::Extent;
use crate::evaluate::{Context, Refusal};
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Qualifiers, Reference};
use crate::units::format;

impl Bench<'_, '_> {
    pub(super) fn volume(&self, mixture: &Mixture, temperature_K: f64, at: Anchor) -> Result<f64, Refusal> {
        volume_of(mixture, temperature_K, self.context).ok_or_else(|| {
            Finding::new(Code::NoSolutionFound, at, "The volume of the beaker at this line cannot be worked out.")
                .help("Check the amounts; a number may be off by a factor of a thousand.")
                .into()
        })
    }

    /// How much of the goods brings the beaker to an extent, kg.
    pub(super) fn fill(&self, beaker: &Beaker, goods: &Goods, extent: Extent, at: Anchor) -> Result<f64, Refusal> {
        match extent {
            Extent::Kilograms(kilograms) => {
                let missing = kilograms - beaker.kilograms;
                if missing < -1e-9 * kilograms {
                    let (holds, mark) = (format::mass(beaker.kilograms, 4), format::mass(kilograms, 4));
                    return Err(overfull(at, &holds, &mark));
                }
                Ok(missing.max(0.0))
            }
            Extent::Litres(litres) => {
                let density = goods.density.unwrap_or(1000.0) / 1000.0;
                let temperature_K = self.temperature_of(beaker);
                let before = if beaker.kilograms > 0.0 { self.volume(&beaker.mixture, temperature_K, at)? } else { 0.0 };
                // A beaker at its mark within a ten-thousandth is full.
                if before > litres * 1.0001 {
                    return Err(overfull(at, &format::volume(before, 4), &format::volume(litres, 4)));
                }
                closed_in((litres - before).max(0.0) * density, density, 1e-12 * litres, |mass| {
                    let mut filled = beaker.mixture.clone();
                    filled.add(&goods.per_kg, mass);
                    Ok(litres - self.volume(&filled, temperature_K, at)?)
                })
            }
        }
    }
}

/// One volume of a mixture made up to `fold` volumes with water, or with another solution, closed, at the temperature of
/// making.
pub(in crate::evaluate) fn diluted(
    mixture: &Mixture,
    fold: f64,
    with: Option<&Reference>,
    temperature_K: f64,
    context: &Context,
) -> Result<Mixture, Refusal> {
    let fail = |message: &str| -> Refusal {
        Finding::new(Code::NoSolutionFound, with.map_or(Anchor::default(), |with| with.at), message.to_string()).into()
    };
    let volume = volume_of(mixture, temperature_K, context).ok_or_else(|| fail("The solution's volume is not known, so it cannot be diluted."))?;
    let (diluent, density) = match with {
        None => (Mixture::water(1.0), water::density_kg_per_m3(temperature_K) / 1000.0),
        Some(reference) => {
            let found = ingredient(reference, true, context)?;
            let goods = goods(reference, &found, &Qualifiers::default(), temperature_K, context)?;
            let density = goods.density.ok_or_else(|| fail("What it is diluted with is no liquid."))?;
            (goods.per_kg, density / 1000.0)
        }
    };
    let target = fold * volume;
    let mass = closed_in((target - volume) * density, density, 1e-13 * target, |mass| {
        let mut filled = mixture.clone();
        filled.add(&diluent, mass);
        let now = volume_of(&filled, temperature_K, context).ok_or_else(|| fail("The diluted solution's volume is not known."))?;
        Ok(target - now)
    })?;
    let mut filled = mixture.clone();
    filled.add(&diluent, mass);
    Ok(filled)
}

/// The mass (kg) that leaves no volume (L) missing, from a guess, by secants: a kilogram takes up nearly its volume.
fn closed_in(
    guess: f64,
    density: f64,
    tolerance: f64,
    mut missing: impl FnMut(f64) -> Result<f64, Refusal>,
) -> Result<f64, Refusal> {
    let (mut mass, mut slope) = (guess, 1.0 / density);
    let mut last: Option<(f64, f64)> = None;
    for _ in 0..40 {
        let miss = missing(mass)?;
        if let Some((mass_before, miss_before)) = last {
            let between = (miss_before - miss) / (mass - mass_before);
            if between.is_finite() && between > 0.1 / density {
                slope = between;
            }
        }
        let next = (mass + miss / slope).max(0.0);
        if (next - mass).abs() <= tolerance {
            return Ok(next);
        }
        last = Some((mass, miss));
        mass = next;
    }
    Ok(mass)
}
