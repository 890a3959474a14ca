//! Solids: how far a solution is saturated with each, and what is left in solution when they have settled out.

use super::{
    Chemistry, ComponentId, Failure, Mixture, Phase, PhaseId, PhaseKind, State,
    equilibrium::reduction::{Bound, Reduction},
    phases::Activities,
    water,
};

/// A phase is saturated when its index is as near to zero as this.
const SATURATED: f64 = 1e-7;
/// An amount of a solid below this share of its scarcest component is none.
const NOTHING: f64 = 1e-11;

/// A state in equilibrium with solids that have settled out and with gases above it.
#[derive(Clone, Debug)]
pub struct Settled {
    /// The liquid, by itself: its derivatives are those of the closed liquid.
    pub state: State,
    /// Each solid that there is, mol.
    pub solids: Vec<(PhaseId, f64)>,
    /// What was taken up from each gas, mol; negative where it was given off.
    pub taken_up: Vec<(PhaseId, f64)>,
}

impl State {
    /// Saturation index of a solid: log₁₀ of the ion activity product over the solubility product; none where one of its
    /// components is absent.
    pub fn saturation_index(&self, id: PhaseId) -> Option<f64> {
        let phase = self.chemistry.phase(id).filter(|phase| phase.kind != PhaseKind::Gas)?;
        Activities::of(self).log10_excess(self, phase)
    }

    /// Saturation index of every solid whose components are all present, in order of their handles.
    pub fn saturation_indices(&self) -> Vec<(PhaseId, f64)> {
        let activities = Activities::of(self);
        let solids = self.chemistry.phases().filter(|(_, phase)| phase.kind != PhaseKind::Gas);
        solids.filter_map(|(id, phase)| Some((id, activities.log10_excess(self, phase)?))).collect()
    }

    /// The state that is left when every solid that may form has settled out, as far as it is saturated.
    ///
    /// # Errors
    /// As [`Chemistry::solve`].
    pub fn settled(&self, may_form: impl Fn(&Phase) -> bool) -> Result<Settled, Failure> {
        self.equilibrated(&[], may_form)
    }

    /// The state in equilibrium with gases at partial pressures (Pa), and with every solid that may form, from what this state
    /// holds.
    ///
    /// The set of solids is found step by step: the most saturated one is let form, one that would be less than nothing is taken
    /// away, until all indices are at most zero and all amounts at least nothing.
    ///
    /// # Errors
    /// As [`Chemistry::solve`]; [`Failure::NotConverged`] also where no set of solids is found.
    pub fn equilibrated(&self, gases: &[(PhaseId, f64)], may_form: impl Fn(&Phase) -> bool) -> Result<Settled, Failure> {
        let candidates: Vec<PhaseId> = (self.chemistry.phases())
            .filter(|(_, phase)| phase.kind != PhaseKind::Gas && may_form(phase))
            .map(|(id, _)| id)
            .collect();
        let mut solids: Vec<PhaseId> = Vec::new();
        let mut tried: Vec<Vec<PhaseId>> = Vec::new();
        let mut settled = self.with_phases(gases, &solids)?.ok_or_else(not_found)?;
        for _ in 0..4 * candidates.len() + 8 {
            let least = settled.solids.iter().copied().filter(|(id, amount)| *amount < -NOTHING * self.scarcest_mol(*id));
            if let Some((gone, _)) = least.min_by(|one, other| one.1.total_cmp(&other.1)) {
                solids.retain(|id| *id != gone);
            } else {
                let activities = Activities::of(&settled.state);
                let index = |id: &PhaseId| activities.log10_excess(&settled.state, self.chemistry.phase(*id)?);
                let most = candidates.iter().filter(|id| !solids.contains(id)).filter_map(|id| Some((*id, index(id)?)));
                match most.max_by(|one, other| one.1.total_cmp(&other.1)) {
                    Some((next, index)) if index > SATURATED => solids.push(next),
                    _ => {
                        settled.solids.retain(|(_, amount)| *amount > 0.0);
                        return Ok(settled);
                    }
                }
            }
            let mut sorted = solids.clone();
            sorted.sort();
            if tried.contains(&sorted) {
                return Err(not_found());
            }
            tried.push(sorted);
            settled = match self.with_phases(gases, &solids)? {
                Some(settled) => settled,
                // The new one is made of those that are there: it takes the place of one of them.
                None => self.exchanged(gases, &mut solids)?,
            };
        }
        Err(not_found())
    }

    /// The last of the solids takes the place of another one, so that no amount is less than nothing.
    pub(super) fn exchanged(&self, gases: &[(PhaseId, f64)], solids: &mut Vec<PhaseId>) -> Result<Settled, Failure> {
        for leaves in 0..solids.len().saturating_sub(1) {
            let mut fewer = solids.clone();
            fewer.remove(leaves);
            if let Some(settled) = self.with_phases(gases, &fewer)?
                && settled.solids.iter().all(|(id, amount)| *amount >= -NOTHING * self.scarcest_mol(*id))
            {
                *solids = fewer;
                return Ok(settled);
            }
        }
        Err(not_found())
    }

    /// Amount of the solid that its scarcest component would allow, mol.
    fn scarcest_mol(&self, id: PhaseId) -> f64 {
        let parts = self.chemistry.phase(id).map_or(&[][..], |phase| phase.parts.as_slice());
        let amount = |&(part, count): &(ComponentId, u32)| self.mixture.amounts_mol.get(&part).copied().unwrap_or(0.0) / f64::from(count);
        parts.iter().map(amount).fold(f64::INFINITY, f64::min)
    }

    /// The state with exactly these solids at saturation, whatever their amounts; none where they depend on each other.
    pub(super) fn with_phases(&self, gases: &[(PhaseId, f64)], solids: &[PhaseId]) -> Result<Option<Settled>, Failure> {
        if gases.is_empty() && solids.is_empty() {
            return Ok(Some(Settled { state: self.clone(), solids: Vec::new(), taken_up: Vec::new() }));
        }
        let mut mixture = self.mixture.clone();
        let mut bounds = Vec::new();
        let pressures = gases.iter().map(|&(id, pascal)| (id, libm::log(pascal / 1e5)));
        for (id, ln_amount) in pressures.chain(solids.iter().map(|id| (*id, 0.0))) {
            let Some(phase) = self.chemistry.phase(id) else { return Err(Failure::UnknownComponent) };
            if !ln_amount.is_finite() {
                return Err(Failure::NotFinite { what: format!("the pressure of {}", phase.name) });
            }
            for (part, _) in &phase.parts {
                mixture.amounts_mol.entry(*part).or_insert(0.0);
            }
            let ln_product = phase.log10_k(&self.chemistry, self.temperature_K) * core::f64::consts::LN_10 + ln_amount;
            bounds.push((id, Bound { parts: &phase.parts, hydrogen: phase.hydrogen, water: phase.water, ln_product }));
        }
        let (ids, bounds): (Vec<PhaseId>, Vec<Bound>) = bounds.into_iter().unzip();
        let Some(reduction) = Reduction::new(&self.chemistry, &mixture, self.temperature_K, self.settings.model, &bounds)? else {
            return Ok(None);
        };
        let (solution, amounts_mol, steps) = reduction.solve(&self.system, &self.point, self.settings.limits)?;
        let mut amounts = ids.into_iter().zip(amounts_mol);
        let taken_up = amounts.by_ref().take(gases.len()).map(|(id, amount)| (id, -amount)).collect();
        let solids = amounts.collect();
        let state = self.of_solution(&mixture, solution, steps)?;
        Ok(Some(Settled { state, solids, taken_up }))
    }
}

/// A mixture's mass of a phase, kg.
pub fn phase_mass_kg(chemistry: &Chemistry, id: PhaseId, amount_mol: f64) -> f64 {
    chemistry.phase(id).map_or(0.0, |phase| amount_mol * phase.molar_mass_kg_per_mol(chemistry))
}

impl Phase {
    /// What one mole of it is, as components, hydrogen ions and water.
    pub fn mixture(&self) -> Mixture {
        let mut mixture = Mixture::default().with_hydrogen(f64::from(self.hydrogen));
        mixture.water_kg = self.water * water::MOLAR_MASS_kg_per_mol;
        for &(part, count) in &self.parts {
            mixture = mixture.with(part, f64::from(count));
        }
        mixture
    }
}

fn not_found() -> Failure {
    Failure::NotConverged { steps: 0, residual: f64::MAX }
}
