//! What of a danger's side a vessel holds, and how much of it: by species at this pH, by totals, by substances.

use super::super::Case;
use crate::chemistry::{ComponentId, Mixture, SpeciesId, State};
use crate::evaluate::{LineOutcome, Outcome, Solute};
use crate::model::{Amount, Body, Lookup, NameKey, Namespace, Reference};
use crate::units::Dimension;

/// Any amount above this counts where no least is stated, mol/L.
const ANY: f64 = 1e-9;

/// A name of a side.
#[derive(Clone, Debug)]
pub struct Member {
    /// Its name.
    pub name: String,
    kind: Kind,
}

#[derive(Clone, Debug)]
enum Kind {
    Water,
    /// All forms of a component.
    Total(ComponentId),
    /// One form of a component.
    Form(SpeciesId, ComponentId),
    /// Hydrogen or hydroxide ions, as many as are free.
    Ion(SpeciesId),
    /// A substance that the chemistry does not follow.
    Substance(NameKey),
}

/// What stands in a vessel.
pub struct Beaker<'a> {
    /// Its content.
    pub mixture: &'a Mixture,
    /// Its volume, L.
    pub volume_L: f64,
    /// Its state, where there is one.
    pub state: Option<&'a State>,
    /// The substances in it; empty where they are not known.
    pub solutes: &'a [Solute],
}

/// A member that was found.
#[derive(Clone, Copy, Debug)]
pub struct Present<'m> {
    /// Which.
    pub member: &'m Member,
    /// How much, mol/L.
    pub amount_mol_per_L: f64,
    /// Of a form, its share in the total.
    pub share: Option<f64>,
}

/// The members that names stand for, groups opened.
pub fn members(case: &Case, names: &[Reference]) -> Vec<Member> {
    let mut found = Vec::new();
    for name in names {
        if let Lookup::One(definition) = case.context.scope.find(Namespace::Danger, &name.key, &name.text)
            && let Body::Group(group) = &definition.block.body
        {
            found.extend(group.holds.iter().map(|one| member(case, one)));
        } else {
            found.push(member(case, name));
        }
    }
    found
}

fn member(case: &Case, name: &Reference) -> Member {
    let substance = Kind::Substance(name.key.clone());
    let kind = match case.context.constituents.named(&name.key) {
        _ if name.key.as_str() == "water" => Kind::Water,
        Some(one) => match (one.component, one.species) {
            (Some(component), Some(species)) if one.hydrogen != 0.0 => Kind::Form(species, component),
            (Some(component), _) => Kind::Total(component),
            (None, Some(species)) => Kind::Ion(species),
            (None, None) => substance,
        },
        None => substance,
    };
    Member { name: name.text.clone(), kind }
}

impl Member {
    /// Whether a solution holds any of it.
    pub fn is_in(&self, outcome: &Outcome) -> bool {
        match &self.kind {
            Kind::Substance(key) => outcome.solutes.iter().any(|solute| solute.definition.name == *key),
            _ => self.is_in_mixture(&outcome.mixture),
        }
    }

    /// Whether a mixture holds any of it.
    pub fn is_in_mixture(&self, mixture: &Mixture) -> bool {
        match &self.kind {
            Kind::Water | Kind::Ion(_) => mixture.water_kg > 0.0,
            Kind::Total(component) | Kind::Form(_, component) => mixture.amounts_mol.get(component).is_some_and(|amount| *amount > 0.0),
            Kind::Substance(_) => false,
        }
    }

    /// Whether a line brings any of it.
    pub fn is_brought_by(&self, case: &Case, line: &LineOutcome) -> bool {
        match &self.kind {
            Kind::Substance(key) => {
                line.definition.name == *key
                    || (case.context.stocks)(&line.definition)
                        .and_then(|evaluation| evaluation.outcome().cloned())
                        .is_some_and(|outcome| outcome.solutes.iter().any(|solute| solute.definition.name == *key))
            }
            // An acid or a base: what brings hydrogen ions, or takes them.
            Kind::Ion(_) => line.per_kg.hydrogen_mol != 0.0,
            _ => self.is_in_mixture(&line.per_kg),
        }
    }

    /// Whether a substance is meant by it: it gives this component, or is itself named.
    pub fn is_substance(&self, solute: &Solute) -> bool {
        matches!(&self.kind, Kind::Substance(key) if solute.definition.name == *key) || NameKey::new(&self.name) == solute.definition.name
    }
}

/// The member of a side of which most is there, where it is as much as counts.
pub fn most<'m>(case: &Case, members: &'m [Member], least: Option<&Amount>, beaker: &Beaker) -> Option<Present<'m>> {
    members
        .iter()
        .filter_map(|member| measured(case, member, least, beaker))
        .max_by(|one, other| one.amount_mol_per_L.total_cmp(&other.amount_mol_per_L))
}

fn measured<'m>(case: &Case, member: &'m Member, least: Option<&Amount>, beaker: &Beaker) -> Option<Present<'m>> {
    let chemistry = &case.context.constituents.chemistry;
    let volume_L = beaker.volume_L;
    let total = |component: &ComponentId| beaker.mixture.amounts_mol.get(component).map(|amount| amount / volume_L);
    // mol/L, g/mol, and mL/mol where they are known.
    let (amount, molar_mass, molar_volume, share) = match &member.kind {
        Kind::Water => (beaker.mixture.water_kg / volume_L / 0.018_015, Some(18.015), Some(18.07), None),
        Kind::Total(component) => {
            let mass = chemistry.component(*component).map(|one| 1000.0 * one.molar_mass_kg_per_mol);
            let volume = chemistry.base_species(*component).and_then(|species| chemistry.molar_volume_cm3_per_mol(species));
            (total(component)?, mass, volume, None)
        }
        Kind::Form(species, component) => {
            let state = beaker.state?;
            let total = total(component)?;
            let amount = state.concentration_mol_per_L(*species);
            let mass = chemistry.component(*component).map(|one| 1000.0 * one.molar_mass_kg_per_mol);
            (amount, mass, None, Some(amount / total))
        }
        Kind::Ion(species) => (beaker.state?.concentration_mol_per_L(*species), None, None, None),
        Kind::Substance(key) => {
            let solute = beaker.solutes.iter().find(|solute| solute.definition.name == *key)?;
            let grams = 1000.0 * solute.mass_kg / volume_L;
            match solute.amount_mol.filter(|amount| *amount > 0.0) {
                Some(amount) => (amount / volume_L, Some(grams * volume_L / amount), None, None),
                None => {
                    // Without a formula only a mass can be compared; a molar mass of 1 g/mol carries it through.
                    let enough = match least {
                        Some(least) => least.dimension() == Dimension::MassConcentration && grams >= least.value,
                        None => grams > 0.0,
                    };
                    return enough.then_some(Present { member, amount_mol_per_L: grams, share: None });
                }
            }
        }
    };
    let enough = match least {
        None => amount > ANY,
        Some(least) => match least.dimension() {
            Dimension::AmountConcentration => amount >= least.value,
            Dimension::MassConcentration => molar_mass.is_some_and(|grams| amount * grams >= least.value),
            Dimension::VolumeFraction => molar_volume.is_some_and(|millilitres| amount * millilitres / 1000.0 >= least.value),
            Dimension::MassFraction => {
                let mass_kg = beaker.mixture.mass_kg(chemistry);
                molar_mass.is_some_and(|grams| amount * volume_L * grams / 1000.0 >= least.value * mass_kg)
            }
            _ => false,
        },
    };
    enough.then_some(Present { member, amount_mol_per_L: amount, share })
}
