//! Solids and gases of a root as phases of its chemistry: what they dissolve to, and their constants in terms of the components.

use std::collections::HashMap;

use super::{Block, DefinitionKey, NameKey, Reference, Solid, Substance, molar_mass};
use super::constituents::{Builder, WATER_KG_PER_MOL, unknown_partner};
use crate::chemistry::{ComponentId, ConstantId, HYDROGEN_MOLAR_MASS_kg_per_mol, Phase, PhaseId, PhaseKind};
use crate::finding::{Code, Finding};

/// The phases of a root by their names.
#[derive(Clone, Debug, Default)]
pub struct Phases {
    /// Solids by name.
    pub(super) solids: HashMap<NameKey, PhaseId>,
    /// Gases by the substance that they are.
    pub(super) gases: HashMap<DefinitionKey, PhaseId>,
    /// Carbon dioxide.
    pub(super) carbon_dioxide: Option<PhaseId>,
    /// For each phase, the block that defines it.
    pub(super) defined_by: HashMap<PhaseId, DefinitionKey>,
}

impl Phases {
    /// The solid of this name.
    pub fn solid(&self, name: &NameKey) -> Option<PhaseId> {
        self.solids.get(name).copied()
    }

    /// The gas that a substance is.
    pub fn gas(&self, substance: &DefinitionKey) -> Option<PhaseId> {
        self.gases.get(substance).copied()
    }

    /// Carbon dioxide, where the library knows it as a gas.
    pub fn carbon_dioxide(&self) -> Option<PhaseId> {
        self.carbon_dioxide
    }

    /// The block that defines a phase.
    pub fn definition(&self, id: PhaseId) -> Option<&DefinitionKey> {
        self.defined_by.get(&id)
    }
}

/// What something gives in water, summed over its parts.
#[derive(Default)]
struct Given {
    parts: Vec<(ComponentId, u32)>,
    hydrogen: i32,
    water: f64,
    /// log₁₀ of the formation constants of the forms that it gives.
    log_beta: Vec<(f64, ConstantId)>,
    mass_kg_per_mol: f64,
}

impl Given {
    fn add(&mut self, component: ComponentId, count: u32) {
        match self.parts.iter_mut().find(|(part, _)| *part == component) {
            Some((_, old)) => *old += count,
            None => self.parts.push((component, count)),
        }
    }
}

impl Builder {
    /// Adds a solid, or a finding that says why not.
    pub(super) fn add_solid(&mut self, key: &DefinitionKey, block: &Block, solid: &Solid) {
        let Some(name) = &block.name else { return };
        let complain = |message: String, help: &str| {
            (key.clone(), Finding::new(Code::BadDefinition, block.header_anchor(), message).help(help))
        };
        let Some(constant) = solid.log_ksp.as_ref().filter(|_| !solid.gives.is_empty()) else {
            let message = format!("The solid {} does not say what it gives, or how little of it.", name.text);
            self.findings.push(complain(message, "State what it `gives` and its `log Ksp`."));
            return;
        };
        let mut given = match self.given(&solid.gives) {
            Ok(given) => given,
            Err(unknown) => {
                self.findings.push((key.clone(), unknown_partner(unknown)));
                return;
            }
        };
        if let Some(formula_mass) = solid.formula.as_ref().and_then(|(_, formula)| molar_mass(formula)) {
            let molecules = (formula_mass - given.mass_kg_per_mol) / WATER_KG_PER_MOL;
            let rounded = (2.0 * molecules).round() / 2.0;
            if (molecules - rounded).abs() > 0.02 {
                let missing = 1000.0 * (formula_mass - given.mass_kg_per_mol);
                let message = format!("The formula of {} and what it gives differ by {missing:.2} g/mol, which is not water.", name.text);
                self.findings.push(complain(message, "Correct the formula, or the counts after `gives`."));
                return;
            }
            given.water += rounded;
        }
        let charge: i32 = given.parts.iter().map(|(part, count)| self.charge_of(*part) * *count as i32).sum::<i32>() + given.hydrogen;
        if charge != 0 || given.parts.is_empty() {
            let message = format!("What {} gives has a charge of {charge:+} in all.", name.text);
            self.findings.push(complain(message, "Correct the counts after `gives`."));
            return;
        }
        let log_k = self.in_components(key, format!("log Ksp of {}", name.text), constant, &given.log_beta);
        let id = self.chemistry.add_phase(Phase {
            name: name.text.clone(),
            kind: PhaseKind::Solid(solid.forming),
            parts: given.parts,
            hydrogen: given.hydrogen,
            water: given.water,
            log_k,
        });
        for also in std::iter::once(name).chain(&block.also) {
            self.phases.solids.insert(also.key.clone(), id);
        }
        self.phases.defined_by.insert(id, key.clone());
    }

    /// Adds a substance as a gas, where it has a Henry's constant.
    pub(super) fn add_gas(&mut self, key: &DefinitionKey, block: &Block, substance: &Substance) {
        let (Some(name), Some(constant), Some(formula_mass)) = (&block.name, &substance.log_kh, substance.molar_mass) else { return };
        let mut given = if substance.gives.is_empty() {
            let Some(component) = self.by_substance.get(key).copied() else { return };
            Given { parts: vec![(component, 1)], mass_kg_per_mol: formula_mass, ..Given::default() }
        } else {
            match self.given(&substance.gives) {
                Ok(given) => given,
                // The substance's own finding speaks of it.
                Err(_) => return,
            }
        };
        given.water += ((formula_mass - given.mass_kg_per_mol) / WATER_KG_PER_MOL).round();
        if let Some(of) = &constant.of {
            let species = self.by_name.get(&of.key).and_then(|one| one.species).and_then(|id| self.chemistry.species(id));
            match species.filter(|species| species.parts == given.parts && species.hydrogen == given.hydrogen) {
                Some(species) => given.log_beta = species.log_beta.clone(),
                None => {
                    let message = format!("{} is not what {} is in water.", of.text, name.text);
                    let finding = Finding::new(Code::BadDefinition, of.at, message).help("Name the form that holds what the substance gives.");
                    self.findings.push((key.clone(), finding));
                    return;
                }
            }
        }
        let log_k = self.in_components(key, format!("log KH of {}", name.text), constant, &given.log_beta);
        let id = self.chemistry.add_phase(Phase {
            name: name.text.clone(),
            kind: PhaseKind::Gas,
            parts: given.parts,
            hydrogen: given.hydrogen,
            water: given.water,
            log_k,
        });
        if substance.formula.as_ref().is_some_and(|(_, formula)| formula.canonical() == "CO2") {
            self.phases.carbon_dioxide = Some(id);
        }
        self.phases.gases.insert(key.clone(), id);
        self.phases.defined_by.insert(id, key.clone());
    }

    /// What a list after `gives` comes to.
    fn given<'a>(&self, gives: &'a [(f64, Reference)]) -> Result<Given, &'a Reference> {
        let mut given = Given::default();
        for (count, reference) in gives {
            let constituent = self.by_name.get(&reference.key).ok_or(reference)?;
            let whole = count.round();
            match constituent.species.and_then(|id| self.chemistry.species(id)) {
                None => {
                    // Water itself.
                    given.water += count * constituent.water;
                    given.mass_kg_per_mol += count * constituent.water * WATER_KG_PER_MOL;
                }
                Some(species) => {
                    let mut mass = f64::from(species.hydrogen) * HYDROGEN_MOLAR_MASS_kg_per_mol + f64::from(species.water) * WATER_KG_PER_MOL;
                    for &(part, parts) in &species.parts {
                        given.add(part, whole as u32 * parts);
                        mass += f64::from(parts) * self.molar_mass_of(part);
                    }
                    given.hydrogen += whole as i32 * species.hydrogen;
                    given.water += whole * f64::from(species.water);
                    given.mass_kg_per_mol += whole * mass;
                    given.log_beta.extend(species.log_beta.iter().map(|&(factor, id)| (whole * factor, id)));
                }
            }
        }
        Ok(given)
    }

    /// A constant of the forms that something gives, as one of the components: less what it takes to form them.
    fn in_components(&mut self, key: &DefinitionKey, name: String, constant: &super::Constant, log_beta: &[(f64, ConstantId)]) -> Vec<(f64, ConstantId)> {
        let own = self.add_constant(key, name, constant, 1.0);
        let mut log_k = vec![(1.0, own)];
        for &(factor, id) in log_beta {
            match log_k.iter_mut().find(|(_, known)| *known == id) {
                Some((sum, _)) => *sum -= factor,
                None => log_k.push((-factor, id)),
            }
        }
        log_k
    }
}
