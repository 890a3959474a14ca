//! Water that runs into concentrated acid or lye.

use super::super::Case;
use super::presence::Member;
use super::{DEFERS, capital};
use crate::evaluate::{LineOutcome, Outcome, Role, Solute};
use crate::finding::{Code, Finding};
use crate::model::Danger;
use crate::units::format;

/// Acid or lye up to this share of the finished volume warms nothing much: 2 % nitric acid, 0.1 % trifluoroacetic acid.
/// Common practice, no source.
const LITTLE: f64 = 0.02;

/// Whether a line brings mostly water.
fn is_aqueous(line: &LineOutcome) -> bool {
    line.volume_L.is_some() && line.per_kg.water_kg > 0.5
}

/// The substances in what a line takes, for the mass that it takes.
fn solutes(case: &Case, line: &LineOutcome) -> Vec<Solute> {
    match (case.context.stocks)(&line.definition).and_then(|evaluation| evaluation.outcome().cloned()) {
        Some(stock) if stock.mass_kg > 0.0 => {
            let factor = line.mass_kg / stock.mass_kg;
            let scaled = |solute: &Solute| Solute {
                amount_mol: solute.amount_mol.map(|amount| amount * factor),
                mass_kg: solute.mass_kg * factor,
                ..solute.clone()
            };
            stock.solutes.iter().map(scaled).collect()
        }
        _ => vec![Solute {
            definition: line.definition.clone(),
            name: line.name.clone(),
            amount_mol: line.amount_mol,
            mass_kg: line.mass_kg,
        }],
    }
}

/// Walks the lines: what stands in the vessel when the first water comes must not be concentrated acid or lye.
pub fn acid_before_water(case: &Case, outcome: &Outcome, danger: &Danger, sides: &[Vec<Member>]) -> Option<Finding> {
    let least = danger.sides.first()?.least.as_ref()?.value;
    let members = sides.first()?;
    let (mut litres, mut moles, mut acid): (f64, f64, Option<&LineOutcome>) = (0.0, 0.0, None);
    for line in outcome.lines.iter().filter(|line| line.role != Role::Alternative) {
        let caustic: f64 = solutes(case, line)
            .iter()
            .filter(|solute| members.iter().any(|member| member.is_substance(solute)))
            .filter_map(|solute| solute.amount_mol)
            .sum();
        let strength = line.volume_L.filter(|litres| *litres > 0.0).map_or(0.0, |litres| caustic / litres);
        if strength >= least {
            acid = Some(acid.unwrap_or(line));
        } else if is_aqueous(line) {
            // The first water: either it runs onto the acid, or the acid will run into it.
            let acid = acid?;
            let stands = moles / litres;
            let is_little = litres <= LITTLE * 1.001 * outcome.volume_L;
            if stands < least || is_little {
                return None;
            }
            return Some(
                Finding::new(
                    Code::AcidBeforeWater,
                    line.at,
                    format!(
                        "{} stands in the vessel at {} when the first water comes: {}.",
                        capital(&acid.name),
                        format::concentration(stands, 2),
                        danger.because
                    ),
                )
                .help(format!("{} {DEFERS}", danger.advice.as_deref().unwrap_or_default()).trim().to_owned())
                .related(acid.at, "added before it")
                .about(crate::model::NameKey::new(&acid.name).as_str()),
            );
        }
        litres += line.volume_L.unwrap_or(line.mass_kg);
        moles += caustic;
    }
    None
}
