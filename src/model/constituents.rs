//! One chemistry per root: every ion and every molecule that dissolves as itself, as components and species, and the
//! names by which recipes speak of them.

use std::collections::HashMap;

use super::phases::Phases;
use super::{
    Block, Body, Complex, Constant, ConstantValue, DefinitionKey, Interaction, Ion, NameKey, Reference, Solid, Substance, molar_mass,
};
use crate::chemistry::{self, Chemistry, ChemistryBuilder, Component, ComponentId, ConstantId, Mixture, Species, SpeciesId};
use crate::finding::{Anchor, Code, Finding};
use crate::syntax::formula::Formula;

/// Molar mass of water, kg/mol (IUPAC standard atomic weights 2021, abridged).
pub const WATER_KG_PER_MOL: f64 = 0.018_015;

/// Something in solution that has a name: an ion, one of its protonated forms, a complex, a molecule.
#[derive(Clone, Debug)]
pub struct Constituent {
    /// Its name.
    pub name: String,
    /// The component that it is counted by; none for hydrogen, hydroxide and water.
    pub component: Option<ComponentId>,
    /// How many hydrogen ions more than the component it holds.
    pub hydrogen: f64,
    /// How many molecules of water more.
    pub water: f64,
    /// Its species.
    pub species: Option<SpeciesId>,
    /// Molar mass, kg/mol.
    pub molar_mass: Option<f64>,
    /// The block that defines it.
    pub definition: Option<DefinitionKey>,
}

/// The chemistry of a root with its names.
#[derive(Clone, Debug)]
pub struct Constituents {
    /// The components, species and constants.
    pub chemistry: Chemistry,
    by_name: HashMap<NameKey, Constituent>,
    by_substance: HashMap<DefinitionKey, ComponentId>,
    /// For each component, the block that defines it.
    pub defined_by: HashMap<ComponentId, DefinitionKey>,
    /// For each constant, where it comes from and the place of its line.
    pub constants: HashMap<ConstantId, (DefinitionKey, Anchor, Option<String>)>,
    /// For each pair with an interaction coefficient, the smaller species first, the same.
    pub interactions: HashMap<(SpeciesId, SpeciesId), (DefinitionKey, Anchor, Option<String>)>,
    formulas: HashMap<NameKey, Formula>,
    /// Its solids and gases.
    pub phases: Phases,
    /// What is wrong with the definitions.
    pub findings: Vec<(DefinitionKey, Finding)>,
}

impl Constituents {
    /// Builds the chemistry from the blocks of a root, built-in ones first. Of two ions of one name the later one holds,
    /// so that a user's wins over a built-in one.
    pub fn build<'a>(blocks: impl IntoIterator<Item = (DefinitionKey, &'a Block)>) -> Self {
        let mut ions: Vec<(DefinitionKey, &Block, &Ion)> = Vec::new();
        let mut index_of: HashMap<NameKey, usize> = HashMap::new();
        let mut molecules: Vec<(DefinitionKey, &Block, &Substance)> = Vec::new();
        let mut solids: Vec<(DefinitionKey, &Block, &Solid)> = Vec::new();
        let mut gases: Vec<(DefinitionKey, &Block, &Substance)> = Vec::new();
        for (key, block) in blocks {
            match &block.body {
                Body::Ion(ion) => match index_of.get(&key.name).and_then(|index| ions.get_mut(*index)) {
                    Some(slot) => *slot = (key, block, ion),
                    None => {
                        index_of.insert(key.name.clone(), ions.len());
                        ions.push((key, block, ion));
                    }
                },
                Body::Substance(substance) => {
                    if substance.log_kh.is_some() {
                        gases.push((key.clone(), block, substance));
                    }
                    if dissolves_as_itself(substance) {
                        molecules.push((key, block, substance));
                    }
                }
                Body::Solid(solid) => {
                    solids.retain(|(old, ..)| old.name != key.name);
                    solids.push((key, block, solid));
                }
                _ => {}
            }
        }
        Builder::new().build(ions, molecules, &solids, &gases)
    }

    /// The constituent of this name.
    pub fn named(&self, name: &NameKey) -> Option<&Constituent> {
        self.by_name.get(name)
    }

    /// The formula of an ion or molecule by its name, for masses that are reported as another formula.
    pub fn formula_of(&self, name: &NameKey) -> Option<Formula> {
        let definition = self.named(name)?.definition.as_ref()?;
        self.formulas.get(&definition.name).cloned()
    }

    /// Every constituent, in no particular order.
    pub fn all(&self) -> impl Iterator<Item = (&NameKey, &Constituent)> {
        self.by_name.iter()
    }

    /// What one mole of a substance brings to a solution, and how much of that is water of crystallisation (kg).
    ///
    /// # Errors
    /// Why its composition is not known.
    pub fn per_mole(&self, key: &DefinitionKey, substance: &Substance) -> Result<(Mixture, f64), CompositionRefusal> {
        let mut mixture = Mixture::default();
        if substance.inert {
            return Err(CompositionRefusal::Inert);
        }
        let molar_mass = substance.molar_mass.ok_or(CompositionRefusal::NoMolarMass)?;
        if substance.gives.is_empty() {
            if is_water(substance) {
                mixture.water_kg = molar_mass;
                return Ok((mixture, molar_mass));
            }
            let component = self.by_substance.get(key).ok_or(CompositionRefusal::NoMolarMass)?;
            mixture.amounts_mol.insert(*component, 1.0);
            return Ok((mixture, 0.0));
        }
        for (count, reference) in &substance.gives {
            let constituent = self.named(&reference.key).ok_or_else(|| CompositionRefusal::Unknown(reference.clone()))?;
            if let Some(component) = constituent.component {
                *mixture.amounts_mol.entry(component).or_insert(0.0) += count;
            }
            mixture.hydrogen_mol += count * constituent.hydrogen;
            mixture.water_kg += count * constituent.water * WATER_KG_PER_MOL;
        }
        // The rest of the formula is water: of crystallisation, or taken up when the substance dissolves.
        let rest = molar_mass - mixture.mass_kg(&self.chemistry);
        let molecules = rest / WATER_KG_PER_MOL;
        if (molecules - (2.0 * molecules).round() / 2.0).abs() > 0.01 {
            return Err(CompositionRefusal::DoesNotBalance { missing_g_per_mol: 1000.0 * rest });
        }
        mixture.water_kg += rest;
        Ok((mixture, rest.max(0.0)))
    }
}

/// Why a substance's composition in water cannot be worked out.
#[derive(Clone, Debug, PartialEq)]
pub enum CompositionRefusal {
    /// It is stated to be inert: it has mass and no effect.
    Inert,
    /// It has neither formula nor molar mass.
    NoMolarMass,
    /// It gives something that nothing defines.
    Unknown(Reference),
    /// What it gives and its formula differ by more than water, g/mol.
    DoesNotBalance {
        /// The mass that is missing, g/mol; negative where too much is given.
        missing_g_per_mol: f64,
    },
}

/// Whether the substance is water.
pub fn is_water(substance: &Substance) -> bool {
    substance.formula.as_ref().is_some_and(|(_, formula)| formula.canonical() == "H2O")
}

fn dissolves_as_itself(substance: &Substance) -> bool {
    !substance.inert && substance.gives.is_empty() && substance.molar_mass.is_some() && !is_water(substance)
}

/// What is known while the chemistry is being built.
pub(super) struct Builder {
    pub(super) chemistry: ChemistryBuilder,
    pub(super) by_name: HashMap<NameKey, Constituent>,
    pub(super) by_substance: HashMap<DefinitionKey, ComponentId>,
    pub(super) phases: Phases,
    molar_masses: HashMap<ComponentId, f64>,
    defined_by: HashMap<ComponentId, DefinitionKey>,
    constants: HashMap<ConstantId, (DefinitionKey, Anchor, Option<String>)>,
    interactions: HashMap<(SpeciesId, SpeciesId), (DefinitionKey, Anchor, Option<String>)>,
    charges: HashMap<ComponentId, i32>,
    pub(super) findings: Vec<(DefinitionKey, Finding)>,
}

impl Builder {
    fn new() -> Self {
        let chemistry = ChemistryBuilder::new();
        let mut by_name = HashMap::new();
        let water = |hydrogen: f64, water: f64, name: &str, species, molar_mass| Constituent {
            name: name.to_string(),
            component: None,
            hydrogen,
            water,
            species,
            molar_mass: Some(molar_mass),
            definition: None,
        };
        by_name.insert(
            NameKey::new("hydrogen"),
            water(1.0, 0.0, "hydrogen", Some(ChemistryBuilder::HYDROGEN), 0.001_008),
        );
        by_name.insert(
            NameKey::new("hydroxide"),
            water(-1.0, 1.0, "hydroxide", Some(ChemistryBuilder::HYDROXIDE), 0.017_007),
        );
        by_name.insert(NameKey::new("water"), water(0.0, 1.0, "water", None, WATER_KG_PER_MOL));
        Builder {
            chemistry,
            by_name,
            by_substance: HashMap::new(),
            phases: Phases::default(),
            molar_masses: HashMap::new(),
            defined_by: HashMap::new(),
            constants: HashMap::new(),
            interactions: HashMap::new(),
            charges: HashMap::new(),
            findings: Vec::new(),
        }
    }

    fn build(
        mut self,
        ions: Vec<(DefinitionKey, &Block, &Ion)>,
        molecules: Vec<(DefinitionKey, &Block, &Substance)>,
        solids: &[(DefinitionKey, &Block, &Solid)],
        gases: &[(DefinitionKey, &Block, &Substance)],
    ) -> Constituents {
        for (key, block, ion) in &ions {
            self.add_ion(key, block, ion);
        }
        // Complexes and interactions may name any ion, so they come when all are there.
        for (key, _, ion) in &ions {
            for complex in &ion.complexes {
                self.add_complex(key, complex);
            }
        }
        for (key, block, substance) in &molecules {
            self.add_molecule(key, block, substance);
        }
        for (key, _, ion) in &ions {
            for interaction in &ion.interactions {
                self.add_interaction(key, interaction);
            }
            for constant in &ion.molar_volumes {
                if let (Some(species), ConstantValue::Number { value, .. }) =
                    (self.species_of(key, constant.of.as_ref()), constant.value)
                {
                    // The chemistry counts in cm³/mol.
                    self.chemistry.set_molar_volume(species, 1e3 * value);
                }
            }
            for constant in &ion.molar_conductivities {
                if let (Some(species), ConstantValue::Number { value, .. }) =
                    (self.species_of(key, constant.of.as_ref()), constant.value)
                {
                    // S·m²/mol to S·cm²/mol.
                    self.chemistry.set_molar_conductivity(species, 1e4 * value);
                }
            }
        }
        for (key, block, solid) in solids {
            self.add_solid(key, block, solid);
        }
        for (key, block, substance) in gases {
            self.add_gas(key, block, substance);
        }
        let of_ions = ions.iter().filter_map(|(key, _, ion)| Some((key.name.clone(), ion.formula.as_ref()?.1.clone())));
        let of_molecules =
            molecules.iter().filter_map(|(key, _, one)| Some((key.name.clone(), one.formula.as_ref()?.1.clone())));
        let formulas = of_molecules.chain(of_ions).collect();
        let chemistry = self.chemistry.finish().unwrap_or_else(|problem| {
            if let Some((key, block, _)) = ions.last() {
                let message = format!("The ions of this library do not hang together: {problem}.");
                self.findings.push((key.clone(), Finding::new(Code::BadDefinition, block.header_anchor(), message)));
            }
            Chemistry::default()
        });
        Constituents {
            chemistry,
            by_name: self.by_name,
            by_substance: self.by_substance,
            defined_by: self.defined_by,
            constants: self.constants,
            interactions: self.interactions,
            formulas,
            phases: self.phases,
            findings: self.findings,
        }
    }

    fn add_ion(&mut self, key: &DefinitionKey, block: &Block, ion: &Ion) {
        let Some(name) = &block.name else { return };
        let molar_mass = ion.formula.as_ref().and_then(|(_, formula)| molar_mass(formula)).or(ion.molar_mass);
        // Hydrogen and hydroxide stand in the library for their volumes and interactions; the chemistry has them.
        if let Some(constituent) = self.by_name.get_mut(&name.key)
            && constituent.component.is_none()
        {
            constituent.definition = Some(key.clone());
            return;
        }
        let Some(molar_mass) = molar_mass else {
            self.findings.push((
                key.clone(),
                Finding::new(
                    Code::BadDefinition,
                    block.header_anchor(),
                    format!("The ion {} has neither a formula nor a molar mass.", name.text),
                )
                .help("State its `formula`, or a `molar mass`."),
            ));
            return;
        };
        let component = self.chemistry.add_component(Component {
            name: name.text.clone(),
            charge: ion.charge,
            molar_mass_kg_per_mol: molar_mass,
        });
        self.defined_by.insert(component, key.clone());
        self.charges.insert(component, ion.charge);
        self.molar_masses.insert(component, molar_mass);
        let base = Constituent {
            name: name.text.clone(),
            component: Some(component),
            hydrogen: 0.0,
            water: 0.0,
            species: self.chemistry.base_species(component),
            molar_mass: Some(molar_mass),
            definition: Some(key.clone()),
        };
        for also in std::iter::once(name).chain(&block.also) {
            self.by_name.insert(also.key.clone(), base.clone());
        }
        // The last pKa adds the first proton; overall constants are sums from there.
        let mut log_beta: Vec<(f64, ConstantId)> = Vec::new();
        for (step, pka) in ion.pka.iter().rev().enumerate() {
            let hydrogen = step as i32 + 1;
            let acid_name = match &pka.of {
                Some(of) => of.text.clone(),
                None => format!("{} + {hydrogen} H", name.text),
            };
            let id = self.add_constant(key, format!("pKa of {acid_name}"), pka, -1.0);
            // A pKa is the negative logarithm of the ionisation constant: forming the acid has its opposite.
            log_beta.push((1.0, id));
            let water = pka.water.round() as i32;
            let species = self.chemistry.add_species(Species {
                name: acid_name.clone(),
                charge: ion.charge + hydrogen,
                parts: vec![(component, 1)],
                hydrogen,
                water,
                log_beta: log_beta.clone(),
            });
            self.by_name.entry(NameKey::new(&acid_name)).or_insert(Constituent {
                name: acid_name,
                component: Some(component),
                hydrogen: f64::from(hydrogen),
                water: f64::from(water),
                species: Some(species),
                molar_mass: Some(molar_mass + f64::from(hydrogen) * 0.001_008 + f64::from(water) * WATER_KG_PER_MOL),
                definition: Some(key.clone()),
            });
        }
    }

    /// Adds a constant for the formation of a species. `sign` is −1 for an ionisation, whose enthalpy and heat capacity
    /// turn round with it.
    pub(super) fn add_constant(&mut self, key: &DefinitionKey, name: String, constant: &Constant, sign: f64) -> ConstantId {
        let value = match constant.value {
            ConstantValue::Number { value, enthalpy, heat_capacity } => chemistry::ConstantValue::VantHoff {
                log10_k: value,
                enthalpy_J_per_mol: enthalpy.map(|enthalpy| sign * enthalpy),
                heat_capacity_J_per_mol_K: heat_capacity.map(|heat_capacity| sign * heat_capacity),
            },
            ConstantValue::Equation { a, b, c, d, range } => chemistry::ConstantValue::Equation {
                a,
                b,
                c,
                d,
                range_K: range.unwrap_or((273.15, 373.15)),
            },
        };
        let id = self.chemistry.add_constant(chemistry::Constant {
            name,
            value,
            standard_uncertainty: constant.uncertainty.unwrap_or(0.0),
        });
        self.constants.insert(id, (key.clone(), constant.at, constant.source.clone()));
        id
    }

    fn add_complex(&mut self, key: &DefinitionKey, complex: &Complex) {
        let Some(itself) = self.by_name.get(&key.name).and_then(|constituent| constituent.component) else { return };
        let mut parts = vec![(itself, complex.itself.round() as u32)];
        let (mut hydrogen, mut water, mut water_is_stated) = (0.0, 0.0, false);
        for (count, partner) in &complex.partners {
            let Some(constituent) = self.by_name.get(&partner.key) else {
                self.findings.push((key.clone(), unknown_partner(partner)));
                return;
            };
            water_is_stated |= partner.key.as_str() == "water";
            hydrogen += count * constituent.hydrogen;
            water += count * constituent.water;
            if let Some(component) = constituent.component {
                parts.push((component, count.round() as u32));
            }
        }
        // A hydrogen ion that is split off leaves a hydroxide, which brought a molecule of water.
        if hydrogen < 0.0 && !water_is_stated {
            water -= hydrogen;
        }
        let name = complex.named.as_ref().map(|named| named.text.clone()).unwrap_or_else(|| {
            let partners: Vec<String> = complex
                .partners
                .iter()
                .map(|(count, partner)| if *count == 1.0 { partner.text.clone() } else { format!("{count} {}", partner.text) })
                .collect();
            format!("{} with {}", self.by_name.get(&key.name).map_or("", |own| own.name.as_str()), partners.join(", "))
        });
        let charge_of = |component: &ComponentId| self.charges.get(component).copied().unwrap_or(0);
        let charge = parts.iter().map(|(component, count)| charge_of(component) * *count as i32).sum::<i32>()
            + hydrogen.round() as i32;
        let id = self.add_constant(key, format!("log K of {name}"), &complex.log_k, 1.0);
        let species = self.chemistry.add_species(Species {
            name: name.clone(),
            charge,
            parts,
            hydrogen: hydrogen.round() as i32,
            water: water.round() as i32,
            log_beta: vec![(1.0, id)],
        });
        self.by_name.entry(NameKey::new(&name)).or_insert(Constituent {
            name,
            component: None,
            hydrogen: 0.0,
            water: 0.0,
            species: Some(species),
            molar_mass: None,
            definition: Some(key.clone()),
        });
    }

    fn add_molecule(&mut self, key: &DefinitionKey, block: &Block, substance: &Substance) {
        let (Some(name), Some(molar_mass)) = (&block.name, substance.molar_mass) else { return };
        let component =
            self.chemistry.add_component(Component { name: name.text.clone(), charge: 0, molar_mass_kg_per_mol: molar_mass });
        self.by_substance.insert(key.clone(), component);
        self.molar_masses.insert(component, molar_mass);
        self.defined_by.insert(component, key.clone());
        let species = self.chemistry.base_species(component);
        let from_density = substance.density.map(|density| 1e6 * molar_mass / density);
        let stated = substance.molar_volume.map(|litres| 1e3 * litres);
        if let (Some(species), Some(cubic_centimetres)) = (species, stated.or(from_density)) {
            self.chemistry.set_molar_volume(species, cubic_centimetres);
        }
        self.by_name.entry(name.key.clone()).or_insert(Constituent {
            name: name.text.clone(),
            component: Some(component),
            hydrogen: 0.0,
            water: 0.0,
            species,
            molar_mass: Some(molar_mass),
            definition: Some(key.clone()),
        });
    }

    pub(super) fn charge_of(&self, component: ComponentId) -> i32 {
        self.charges.get(&component).copied().unwrap_or(0)
    }

    /// kg/mol.
    pub(super) fn molar_mass_of(&self, component: ComponentId) -> f64 {
        self.molar_masses.get(&component).copied().unwrap_or(0.0)
    }

    fn species_of(&self, key: &DefinitionKey, of: Option<&Reference>) -> Option<SpeciesId> {
        let name = of.map_or(&key.name, |reference| &reference.key);
        self.by_name.get(name)?.species
    }

    fn add_interaction(&mut self, key: &DefinitionKey, interaction: &Interaction) {
        let Some(one) = self.species_of(key, interaction.constant.of.as_ref()) else { return };
        match self.by_name.get(&interaction.partner.key).and_then(|partner| partner.species) {
            Some(other) => {
                let (epsilon_kg_per_mol, uncertainty) = (interaction.epsilon, interaction.constant.uncertainty.unwrap_or(0.0));
                self.chemistry.add_interaction(one, other, chemistry::Interaction { epsilon_kg_per_mol, uncertainty });
                let from = (key.clone(), interaction.constant.at, interaction.constant.source.clone());
                self.interactions.insert((one.min(other), one.max(other)), from);
            }
            None => self.findings.push((key.clone(), unknown_partner(&interaction.partner))),
        }
    }
}

pub(super) fn unknown_partner(partner: &Reference) -> Finding {
    Finding::new(Code::UnknownName, partner.at, format!("No ion or molecule in solution is called {}.", partner.text))
        .help("Define it in an `ion` block, or correct the name.")
}

