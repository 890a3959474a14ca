//! The thermodynamic database: components, species, constants, and what is known of each species.

use core::fmt;
use std::sync::Arc;

use super::constants::{Constant, ConstantId, ConstantValue};
use super::phases::Phase;

/// Handle of a component in a [`Chemistry`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ComponentId(pub(crate) usize);

/// Handle of a species in a [`Chemistry`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SpeciesId(pub(crate) usize);

/// An ion or molecule in its most deprotonated form, from which species are built.
#[derive(Clone, Debug, PartialEq)]
pub struct Component {
    /// Its name.
    pub name: String,
    /// Its charge number.
    pub charge: i32,
    /// Its molar mass by formula, kg/mol.
    pub molar_mass_kg_per_mol: f64,
}

/// A dissolved species: a sum of components, hydrogen ions and water, with its overall formation constant.
#[derive(Clone, Debug, PartialEq)]
pub struct Species {
    /// Its name.
    pub name: String,
    /// Its charge number; must be that of its parts.
    pub charge: i32,
    /// Components and their counts.
    pub parts: Vec<(ComponentId, u32)>,
    /// Hydrogen ions relative to the components; negative where the species has lost more.
    pub hydrogen: i32,
    /// Water relative to components and hydrogen ions; negative where water is released on formation.
    pub water: i32,
    /// log₁₀ of the overall formation constant as a sum of factor times constant.
    pub log_beta: Vec<(f64, ConstantId)>,
}

/// A SIT interaction coefficient between two species at 25 °C.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interaction {
    /// ε, kg/mol, for log₁₀ γ.
    pub epsilon_kg_per_mol: f64,
    /// Standard uncertainty of ε, kg/mol; 0 where none is known.
    pub uncertainty: f64,
}

/// Why a database does not hang together.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Inconsistency {
    /// A species' charge is not that of its parts.
    Charge {
        /// Name of the species.
        species: String,
        /// The charge stated.
        stated: i32,
        /// The charge of its parts.
        of_parts: i32,
    },
    /// A species names a component or constant that was not added, or a value was set for an unknown species.
    Unknown {
        /// Name of the species, or what was set.
        species: String,
    },
    /// A number in this row is not finite, or a molar mass not positive.
    NotFinite {
        /// Name of the row.
        name: String,
    },
}

impl fmt::Display for Inconsistency {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Charge { species, stated, of_parts } => {
                write!(f, "{species} has charge {stated}, but its parts add up to {of_parts}")
            }
            Self::Unknown { species } => write!(f, "{species} refers to something that is not in the database"),
            Self::NotFinite { name } => write!(f, "a value of {name} is not a usable number"),
        }
    }
}

impl std::error::Error for Inconsistency {}

/// The rows of a database and what can be looked up of them; shared, never changed once built.
#[derive(Clone, Debug, Default, PartialEq)]
pub(super) struct Tables {
    pub(super) components: Vec<Component>,
    base_species: Vec<SpeciesId>,
    pub(super) constants: Vec<Constant>,
    species: Vec<Species>,
    pub(super) phases: Vec<Phase>,
    /// For each species its interactions, in order of the partner.
    interactions: Vec<Vec<(SpeciesId, Interaction)>>,
    molar_volume_cm3_per_mol: Vec<Option<f64>>,
    molar_conductivity_S_cm2_per_mol: Vec<Option<f64>>,
    /// For each component the species whose first part it is.
    species_by_first_part: Vec<Vec<SpeciesId>>,
    /// Species without any component, H⁺ and OH⁻ first.
    species_of_water: Vec<SpeciesId>,
}

/// A thermodynamic database, immutable and cheap to clone.
#[derive(Clone, Debug)]
pub struct Chemistry {
    tables: Arc<Tables>,
}

impl PartialEq for Chemistry {
    fn eq(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.tables, &other.tables) || self.tables == other.tables
    }
}

impl Default for Chemistry {
    /// Water and nothing else.
    fn default() -> Self {
        Chemistry { tables: Arc::new(ChemistryBuilder::new().tables) }
    }
}

impl Chemistry {
    /// The hydrogen ion.
    pub fn hydrogen(&self) -> SpeciesId {
        ChemistryBuilder::HYDROGEN
    }

    /// The hydroxide ion.
    pub fn hydroxide(&self) -> SpeciesId {
        ChemistryBuilder::HYDROXIDE
    }

    /// The ionisation constant of water.
    pub fn water_ionisation(&self) -> ConstantId {
        ChemistryBuilder::WATER_IONISATION
    }

    /// A builder that starts from this database, to add a user's own ions. Handles stay valid.
    pub fn builder(&self) -> ChemistryBuilder {
        ChemistryBuilder { tables: (*self.tables).clone(), problem: None }
    }

    /// A component by its handle.
    pub fn component(&self, id: ComponentId) -> Option<&Component> {
        self.tables.components.get(id.0)
    }

    /// A species by its handle.
    pub fn species(&self, id: SpeciesId) -> Option<&Species> {
        self.tables.species.get(id.0)
    }

    /// A constant by its handle.
    pub fn constant(&self, id: ConstantId) -> Option<&Constant> {
        self.tables.constants.get(id.0)
    }

    /// The species that is the component itself.
    pub fn base_species(&self, id: ComponentId) -> Option<SpeciesId> {
        self.tables.base_species.get(id.0).copied()
    }

    /// All components in order of their handles.
    pub fn components(&self) -> impl Iterator<Item = (ComponentId, &Component)> {
        self.tables.components.iter().enumerate().map(|(i, c)| (ComponentId(i), c))
    }

    /// All species in order of their handles.
    pub fn all_species(&self) -> impl Iterator<Item = (SpeciesId, &Species)> {
        self.tables.species.iter().enumerate().map(|(i, s)| (SpeciesId(i), s))
    }

    /// All constants in order of their handles.
    pub fn constants(&self) -> impl Iterator<Item = (ConstantId, &Constant)> {
        self.tables.constants.iter().enumerate().map(|(i, c)| (ConstantId(i), c))
    }

    /// The interactions of a species with others.
    pub fn interactions(&self, id: SpeciesId) -> &[(SpeciesId, Interaction)] {
        self.tables.interactions.get(id.0).map_or(&[], Vec::as_slice)
    }

    /// Published partial molar volume at 25 °C and infinite dilution, cm³/mol, on the convention V(H⁺) = 0.
    pub fn molar_volume_cm3_per_mol(&self, id: SpeciesId) -> Option<f64> {
        self.tables.molar_volume_cm3_per_mol.get(id.0).copied().flatten()
    }

    /// Published limiting molar conductivity at 25 °C, S·cm²/mol (per mole of ions, not of charges).
    pub fn molar_conductivity_S_cm2_per_mol(&self, id: SpeciesId) -> Option<f64> {
        self.tables.molar_conductivity_S_cm2_per_mol.get(id.0).copied().flatten()
    }

    /// All rows.
    pub(super) fn tables(&self) -> &Tables {
        &self.tables
    }

    /// Species made of water alone.
    pub(crate) fn species_of_water(&self) -> &[SpeciesId] {
        &self.tables.species_of_water
    }

    /// Species whose first part is this component.
    pub(crate) fn species_by_first_part(&self, id: ComponentId) -> &[SpeciesId] {
        self.tables.species_by_first_part.get(id.0).map_or(&[], Vec::as_slice)
    }

    /// How many components there are.
    pub(crate) fn component_count(&self) -> usize {
        self.tables.components.len()
    }

    /// How many species there are.
    pub(crate) fn species_count(&self) -> usize {
        self.tables.species.len()
    }
}

/// Collects the rows of a [`Chemistry`]. H⁺, OH⁻ and the ionisation of water are there from the start.
#[derive(Clone, Debug)]
pub struct ChemistryBuilder {
    pub(super) tables: Tables,
    problem: Option<Inconsistency>,
}

impl Default for ChemistryBuilder {
    fn default() -> Self {
        Self::new()
    }
}

impl ChemistryBuilder {
    /// The hydrogen ion, in every database.
    pub const HYDROGEN: SpeciesId = SpeciesId(0);
    /// The hydroxide ion, in every database.
    pub const HYDROXIDE: SpeciesId = SpeciesId(1);
    /// The ionisation constant of water, in every database.
    pub const WATER_IONISATION: ConstantId = ConstantId(0);

    /// A database of nothing but water.
    pub fn new() -> Self {
        let mut builder = Self { tables: Tables::default(), problem: None };
        let ionisation = builder.add_constant(Constant {
            name: "ionisation of water".into(),
            value: ConstantValue::Water,
            // IAPWS R11-07 estimates 0.01 between 0 °C and 100 °C.
            standard_uncertainty: 0.01,
        });
        builder.add_species(Species {
            name: "hydrogen".into(),
            charge: 1,
            parts: Vec::new(),
            hydrogen: 1,
            water: 0,
            log_beta: Vec::new(),
        });
        builder.add_species(Species {
            name: "hydroxide".into(),
            charge: -1,
            parts: Vec::new(),
            hydrogen: -1,
            water: 1,
            log_beta: vec![(1.0, ionisation)],
        });
        builder
    }

    /// Adds a component and the species that is the component itself.
    pub fn add_component(&mut self, component: Component) -> ComponentId {
        let id = ComponentId(self.tables.components.len());
        if !component.molar_mass_kg_per_mol.is_finite() || component.molar_mass_kg_per_mol <= 0.0 {
            self.complain(Inconsistency::NotFinite { name: component.name.clone() });
        }
        let species = Species {
            name: component.name.clone(),
            charge: component.charge,
            parts: vec![(id, 1)],
            hydrogen: 0,
            water: 0,
            log_beta: Vec::new(),
        };
        self.tables.components.push(component);
        self.tables.species_by_first_part.push(Vec::new());
        let base = self.add_species(species);
        self.tables.base_species.push(base);
        id
    }

    /// Adds a constant.
    pub fn add_constant(&mut self, constant: Constant) -> ConstantId {
        let id = ConstantId(self.tables.constants.len());
        let finite = constant.log10_k(298.15).is_finite() && constant.log10_k(373.15).is_finite();
        if !finite || !constant.standard_uncertainty.is_finite() || constant.standard_uncertainty < 0.0 {
            self.complain(Inconsistency::NotFinite { name: constant.name.clone() });
        }
        self.tables.constants.push(constant);
        id
    }

    /// Adds a species.
    pub fn add_species(&mut self, species: Species) -> SpeciesId {
        let id = SpeciesId(self.tables.species.len());
        let mut of_parts = species.hydrogen;
        for &(part, count) in &species.parts {
            match (self.tables.components.get(part.0), i32::try_from(count)) {
                (Some(component), Ok(count)) if count > 0 => of_parts += component.charge * count,
                _ => self.complain(Inconsistency::Unknown { species: species.name.clone() }),
            }
        }
        if species.charge != of_parts {
            let (species, stated) = (species.name.clone(), species.charge);
            self.complain(Inconsistency::Charge { species, stated, of_parts });
        }
        for (factor, constant) in &species.log_beta {
            if constant.0 >= self.tables.constants.len() {
                self.complain(Inconsistency::Unknown { species: species.name.clone() });
            }
            if !factor.is_finite() {
                self.complain(Inconsistency::NotFinite { name: species.name.clone() });
            }
        }
        match species.parts.first() {
            Some((part, _)) => {
                if let Some(list) = self.tables.species_by_first_part.get_mut(part.0) {
                    list.push(id);
                }
            }
            None => self.tables.species_of_water.push(id),
        }
        self.tables.species.push(species);
        self.tables.interactions.push(Vec::new());
        self.tables.molar_volume_cm3_per_mol.push(None);
        self.tables.molar_conductivity_S_cm2_per_mol.push(None);
        id
    }

    /// Sets the interaction coefficient of a pair, in either order; the last one set holds.
    pub fn add_interaction(&mut self, first: SpeciesId, second: SpeciesId, interaction: Interaction) {
        if !interaction.epsilon_kg_per_mol.is_finite() || !interaction.uncertainty.is_finite() {
            self.complain(Inconsistency::NotFinite { name: "an interaction".into() });
            return;
        }
        for (one, other) in [(first, second), (second, first)] {
            match self.tables.interactions.get_mut(one.0) {
                Some(list) => match list.binary_search_by_key(&other, |(partner, _)| *partner) {
                    Ok(at) => {
                        if let Some(entry) = list.get_mut(at) {
                            entry.1 = interaction;
                        }
                    }
                    Err(at) => list.insert(at, (other, interaction)),
                },
                None => self.complain(Inconsistency::Unknown { species: "an interaction".into() }),
            }
        }
    }

    /// Sets the partial molar volume at 25 °C and infinite dilution, cm³/mol, on the convention V(H⁺) = 0.
    pub fn set_molar_volume(&mut self, species: SpeciesId, volume_cm3_per_mol: f64) {
        match self.tables.molar_volume_cm3_per_mol.get_mut(species.0) {
            Some(entry) if volume_cm3_per_mol.is_finite() => *entry = Some(volume_cm3_per_mol),
            Some(_) => self.complain(Inconsistency::NotFinite { name: "a molar volume".into() }),
            None => self.complain(Inconsistency::Unknown { species: "a molar volume".into() }),
        }
    }

    /// Sets the limiting molar conductivity at 25 °C, S·cm²/mol (per mole of ions, not of charges).
    pub fn set_molar_conductivity(&mut self, species: SpeciesId, conductivity_S_cm2_per_mol: f64) {
        match self.tables.molar_conductivity_S_cm2_per_mol.get_mut(species.0) {
            Some(entry) if conductivity_S_cm2_per_mol.is_finite() => *entry = Some(conductivity_S_cm2_per_mol),
            Some(_) => self.complain(Inconsistency::NotFinite { name: "a molar conductivity".into() }),
            None => self.complain(Inconsistency::Unknown { species: "a molar conductivity".into() }),
        }
    }

    /// The species that is the component itself.
    pub fn base_species(&self, id: ComponentId) -> Option<SpeciesId> {
        self.tables.base_species.get(id.0).copied()
    }

    /// A species that was added.
    pub fn species(&self, id: SpeciesId) -> Option<&Species> {
        self.tables.species.get(id.0)
    }

    /// The database, or the first thing that does not hang together.
    pub fn finish(self) -> Result<Chemistry, Inconsistency> {
        match self.problem {
            Some(problem) => Err(problem),
            None => Ok(Chemistry { tables: Arc::new(self.tables) }),
        }
    }

    pub(super) fn complain(&mut self, problem: Inconsistency) {
        self.problem.get_or_insert(problem);
    }
}
