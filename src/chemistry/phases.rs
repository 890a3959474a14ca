//! Phases beside the solution: pure solids and gases, each as a reaction to the components with its constant.

use super::{ChemistryBuilder, Chemistry, ComponentId, ConstantId, HYDROGEN_MOLAR_MASS_kg_per_mol, Inconsistency, Mixture, State, water};

/// Handle of a phase in a [`Chemistry`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct PhaseId(pub(crate) usize);

/// Whether and how a solid forms from a solution that is saturated with it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Forming {
    /// Within minutes to days, and later the nearer the solution is to saturation.
    #[default]
    Readily,
    /// Not within the keeping of a solution: a mineral that others forestall.
    Slowly,
    /// On mixing.
    AtOnce,
    /// Readily, and first of all when the solution freezes.
    OnFreezing,
    /// On the way to a less soluble solid, which is the one that counts.
    InPassing,
}

/// What a phase is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum PhaseKind {
    /// A pure solid: its constant is of activities.
    Solid(Forming),
    /// An ideal gas: its constant is of activities divided by the partial pressure in bar.
    Gas,
}

/// A pure phase that dissolves to components, hydrogen ions and water.
#[derive(Clone, Debug, PartialEq)]
pub struct Phase {
    /// Its name.
    pub name: String,
    /// Solid or gas.
    pub kind: PhaseKind,
    /// Components and their counts.
    pub parts: Vec<(ComponentId, u32)>,
    /// Hydrogen ions that it gives; negative where it takes them up.
    pub hydrogen: i32,
    /// Molecules of water that it gives; negative where it takes them up.
    pub water: f64,
    /// log₁₀ K of dissolving to the components, as a sum of factor times constant.
    pub log_k: Vec<(f64, ConstantId)>,
}

impl Phase {
    /// Whether it is a solid that can be expected to form.
    pub fn forms(&self) -> bool {
        matches!(self.kind, PhaseKind::Solid(Forming::Readily | Forming::AtOnce | Forming::OnFreezing))
    }

    /// Molar mass, kg/mol.
    pub fn molar_mass_kg_per_mol(&self, chemistry: &Chemistry) -> f64 {
        let of_parts = |&(id, count): &(ComponentId, u32)| f64::from(count) * chemistry.component(id).map_or(0.0, |c| c.molar_mass_kg_per_mol);
        self.parts.iter().map(of_parts).sum::<f64>()
            + f64::from(self.hydrogen) * HYDROGEN_MOLAR_MASS_kg_per_mol
            + self.water * water::MOLAR_MASS_kg_per_mol
    }

    /// log₁₀ K at a temperature (K).
    pub fn log10_k(&self, chemistry: &Chemistry, temperature_K: f64) -> f64 {
        self.log_k.iter().map(|&(factor, id)| factor * chemistry.constant(id).map_or(0.0, |c| c.log10_k(temperature_K))).sum()
    }

    /// Standard uncertainty of log₁₀ K, its constants taken as independent; 0 where none is known.
    pub fn standard_uncertainty(&self, chemistry: &Chemistry) -> f64 {
        let squares = self.log_k.iter().map(|&(factor, id)| {
            let of_one = factor * chemistry.constant(id).map_or(0.0, |c| c.standard_uncertainty);
            of_one * of_one
        });
        libm::sqrt(squares.sum())
    }

    /// Whether all of its constants are known at a temperature (K).
    pub fn holds_at(&self, chemistry: &Chemistry, temperature_K: f64) -> bool {
        self.log_k.iter().all(|&(_, id)| chemistry.constant(id).is_some_and(|c| c.holds_at(temperature_K)))
    }
}

impl Chemistry {
    /// A phase by its handle.
    pub fn phase(&self, id: PhaseId) -> Option<&Phase> {
        self.tables().phases.get(id.0)
    }

    /// All phases in order of their handles.
    pub fn phases(&self) -> impl Iterator<Item = (PhaseId, &Phase)> {
        self.tables().phases.iter().enumerate().map(|(i, phase)| (PhaseId(i), phase))
    }
}

impl ChemistryBuilder {
    /// Adds a phase. It is neutral and holds at least one component.
    pub fn add_phase(&mut self, phase: Phase) -> PhaseId {
        let mut charge = phase.hydrogen;
        let mut problem = None;
        for &(part, count) in &phase.parts {
            match (self.tables.components.get(part.0), i32::try_from(count)) {
                (Some(component), Ok(count)) if count > 0 => charge += component.charge * count,
                _ => problem = Some(Inconsistency::Unknown { species: phase.name.clone() }),
            }
        }
        if phase.parts.is_empty() || phase.log_k.iter().any(|(_, id)| id.0 >= self.tables.constants.len()) {
            problem = Some(Inconsistency::Unknown { species: phase.name.clone() });
        }
        if charge != 0 {
            problem = Some(Inconsistency::Charge { species: phase.name.clone(), stated: 0, of_parts: charge });
        }
        if !phase.water.is_finite() || phase.log_k.iter().any(|(factor, _)| !factor.is_finite()) {
            problem = Some(Inconsistency::NotFinite { name: phase.name.clone() });
        }
        if let Some(problem) = problem {
            self.complain(problem);
        }
        self.tables.phases.push(phase);
        PhaseId(self.tables.phases.len() - 1)
    }
}

impl State {
    /// log₁₀ of the product of the activities of what a mixture holds, each to the power of its amount in moles; none where one
    /// of its components is absent.
    pub fn log10_activity_product(&self, mixture: &Mixture) -> Option<f64> {
        let product = Activities::of(self).ln_product(mixture)? / core::f64::consts::LN_10;
        product.is_finite().then_some(product)
    }
}

/// ln of the activities of the components of a state.
pub(super) struct Activities {
    ln_hydrogen: f64,
    ln_water: f64,
    /// By component; none where it is absent.
    ln_component: Vec<Option<f64>>,
}

impl Activities {
    pub(super) fn of(state: &State) -> Self {
        let chemistry = &state.chemistry;
        let mut ln_component = vec![None; chemistry.component_count()];
        for (id, ln_activity) in state.system.components.iter().zip(state.point.ln_activity.iter().skip(1)) {
            if let Some(entry) = ln_component.get_mut(id.0) {
                *entry = Some(*ln_activity);
            }
        }
        Self { ln_hydrogen: state.point.ln_hydrogen_activity(), ln_water: state.point.ln_water_activity, ln_component }
    }

    /// ln of the product of the activities of what a mixture holds, each to the power of its amount in moles.
    fn ln_product(&self, mixture: &Mixture) -> Option<f64> {
        let water_mol = mixture.water_kg / water::MOLAR_MASS_kg_per_mol;
        let mut ln_product = mixture.hydrogen_mol * self.ln_hydrogen + water_mol * self.ln_water;
        for (part, amount_mol) in mixture.amounts_mol.iter().filter(|(_, amount)| **amount != 0.0) {
            ln_product += amount_mol * self.ln_component.get(part.0).copied().flatten()?;
        }
        Some(ln_product)
    }

    /// log₁₀ of what the product of the activities is over what it is in equilibrium with the phase (at 1 bar of a gas); none
    /// where one of its components is absent.
    pub(super) fn log10_excess(&self, state: &State, phase: &Phase) -> Option<f64> {
        let mut ln_product = f64::from(phase.hydrogen) * self.ln_hydrogen + phase.water * self.ln_water;
        for &(part, count) in &phase.parts {
            ln_product += f64::from(count) * self.ln_component.get(part.0).copied().flatten()?;
        }
        let excess = ln_product / core::f64::consts::LN_10 - phase.log10_k(&state.chemistry, state.temperature_K);
        excess.is_finite().then_some(excess)
    }
}
