//! What is brought together: amounts of components, water, and matter that takes no part.

use std::collections::BTreeMap;

use super::{Chemistry, ComponentId, HYDROGEN_MOLAR_MASS_kg_per_mol};

/// Amounts brought together, in terms of the components. Amounts do not change with temperature or reaction.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Mixture {
    /// Water, as H₂O, kg; may count water that a component is short of as negative.
    pub water_kg: f64,
    /// Hydrogen ions, mol; negative for a strong base (OH⁻ is H₂O − H⁺).
    pub hydrogen_mol: f64,
    /// Amount of each component, mol.
    pub amounts_mol: BTreeMap<ComponentId, f64>,
    /// Mass of matter that takes no part in the chemistry, kg.
    pub inert_mass_kg: f64,
    /// Volume that this matter takes up, L.
    pub inert_volume_L: f64,
}

impl Mixture {
    /// This much pure water.
    pub fn water(water_kg: f64) -> Self {
        Self { water_kg, ..Self::default() }
    }

    /// The same with an amount of a component (mol) added.
    pub fn with(mut self, component: ComponentId, amount_mol: f64) -> Self {
        *self.amounts_mol.entry(component).or_insert(0.0) += amount_mol;
        self
    }

    /// The same with an amount of hydrogen ions (mol) added; negative takes them away.
    pub fn with_hydrogen(mut self, amount_mol: f64) -> Self {
        self.hydrogen_mol += amount_mol;
        self
    }

    /// Adds `factor` times the other mixture.
    pub fn add(&mut self, other: &Self, factor: f64) {
        self.water_kg += factor * other.water_kg;
        self.hydrogen_mol += factor * other.hydrogen_mol;
        self.inert_mass_kg += factor * other.inert_mass_kg;
        self.inert_volume_L += factor * other.inert_volume_L;
        for (&component, &amount_mol) in &other.amounts_mol {
            *self.amounts_mol.entry(component).or_insert(0.0) += factor * amount_mol;
        }
    }

    /// The mixture times a factor.
    pub fn scaled(&self, factor: f64) -> Self {
        let mut result = Self::default();
        result.add(self, factor);
        result
    }

    /// Its mass, kg. Components that the chemistry does not know count nothing.
    pub fn mass_kg(&self, chemistry: &Chemistry) -> f64 {
        let mut mass = self.water_kg + self.inert_mass_kg + self.hydrogen_mol * HYDROGEN_MOLAR_MASS_kg_per_mol;
        for (&component, &amount_mol) in &self.amounts_mol {
            mass += amount_mol * chemistry.component(component).map_or(0.0, |c| c.molar_mass_kg_per_mol);
        }
        mass
    }

    /// Its net charge, mol.
    pub fn charge_mol(&self, chemistry: &Chemistry) -> f64 {
        let mut charge = self.hydrogen_mol;
        for (&component, &amount_mol) in &self.amounts_mol {
            charge += amount_mol * chemistry.component(component).map_or(0.0, |c| f64::from(c.charge));
        }
        charge
    }
}
