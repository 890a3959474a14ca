//! What a run through the lines amounts to: what is taken, and what comes of it.

use super::{Bench, Run};
use crate::evaluate::goods::{Goods, scaled, state_of};
use crate::evaluate::plan::{Planned, Work, litres_of};
use crate::model::Action;
use crate::units::Dimension;
use crate::evaluate::{LineOutcome, Outcome, PartOutcome, Role, Solute};

impl Bench<'_, '_> {
    /// What the run amounts to.
    pub(super) fn outcome(&self, run: Run, made_at_half_width_K: f64) -> Outcome {
        let Run { beaker, masses, set_points, parts, finals, stages } = run;
        let finals_of_all = finals.last().copied().unwrap_or_default();
        let mut lines = Vec::new();
        let mut solutes: Vec<Solute> = Vec::new();
        let mut take = |line: &Planned, goods: &Goods, mass_kg: f64, role: Role| {
            let by_count = self.is_by_count(line);
            let amount_mol = goods.solute.as_ref().filter(|_| !by_count).map(|(_, moles, _)| moles * mass_kg);
            for solute in goods.solutes.iter().filter(|_| role != Role::Alternative && !by_count) {
                let solute = scaled(solute, mass_kg);
                match solutes.iter_mut().find(|known| known.definition == solute.definition) {
                    Some(known) => {
                        known.mass_kg += solute.mass_kg;
                        known.amount_mol = known.amount_mol.zip(solute.amount_mol).map(|(one, other)| one + other);
                    }
                    None => solutes.push(solute),
                }
            }
            lines.push(LineOutcome {
                entry: line.entry,
                at: line.at,
                name: goods.name.clone(),
                definition: goods.definition.clone(),
                role,
                mass_kg,
                volume_L: litres_of(goods, mass_kg).filter(|_| !by_count),
                amount_mol,
                concentration_mol_per_L: amount_mol.map(|amount| amount / finals_of_all.litres),
                per_kg: goods.per_kg.clone(),
                by_count,
            });
        };
        let mut made_up = false;
        for (line, masses) in self.plan.iter().zip(&masses) {
            match &line.work {
                Work::Add { goods, .. } => take(line, goods, masses[0], Role::Stated),
                Work::Instead { goods, .. } => take(line, goods, masses[0], Role::Alternative),
                Work::Pair { members, .. } => {
                    take(line, &members[0], masses[0], Role::OfPair);
                    take(line, &members[1], masses[1], Role::OfPair);
                }
                Work::FillTo { goods, .. } => {
                    made_up = true;
                    take(line, goods, masses[0], Role::MakesUp);
                }
                Work::Adjust { goods, .. } | Work::ByEye { goods, .. } | Work::Saturate { goods, .. } => {
                    take(line, goods, masses[0], Role::Adjusts);
                }
                Work::SetPh { titrants, .. } => {
                    let which = usize::from(masses[1] > 0.0);
                    if let (Some(titrant), Some(mass)) = (titrants.get(which), masses.get(which)) {
                        take(line, titrant, *mass, Role::Adjusts);
                    }
                }
                Work::Divider | Work::BringTo(_) | Work::DriveOff(_) | Work::Filter => {}
            }
        }
        Outcome {
            made_at_K: self.temperature_K,
            made_at_half_width_K,
            finished: state_of(&beaker.mixture, self.temperature_K, self.context),
            mass_kg: beaker.kilograms,
            water_kg: beaker.water_kg,
            mixture: beaker.mixture,
            volume_L: finals_of_all.litres,
            lines,
            set_points,
            parts: parts
                .into_iter()
                .zip(&finals)
                .map(|((entry, beaker), finals)| PartOutcome {
                    entry,
                    state: state_of(&beaker.mixture, self.temperature_K, self.context),
                    mixture: beaker.mixture,
                    volume_L: finals.litres,
                })
                .collect(),
            stages,
            removed: beaker.removed,
            above: None,
            drift: None,
            uses: Vec::new(),
            verdicts: Vec::new(),
            solutes,
            found: None,
            made_up,
        }
    }

    /// Whether a line adds things by count.
    fn is_by_count(&self, line: &Planned) -> bool {
        let amounts = match self.recipe.entries.get(line.entry).map(|entry| &entry.action) {
            Some(Action::Add(addition) | Action::Alternative(addition)) => addition.amounts.as_slice(),
            _ => &[],
        };
        amounts.iter().any(|amount| amount.dimension() == Dimension::Count)
    }
}
