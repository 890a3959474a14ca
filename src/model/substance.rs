//! Substances, ions, solids and labs as their blocks say them, in base units.

use super::{HalfWidth, NameKey, Reference, Stated};
use crate::finding::Anchor;
use crate::syntax::formula::Formula;
use crate::syntax::tree::{BlockKind, MeterKind, WareKind};

/// A `substance` block.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Substance {
    /// Its formula, as written and parsed.
    pub formula: Option<(String, Formula)>,
    /// Molar mass, kg/mol: from the formula, or as stated.
    pub molar_mass: Option<f64>,
    /// CAS registry number.
    pub cas: Option<String>,
    /// What it gives in water; empty for a molecule that dissolves as itself.
    pub gives: Vec<(f64, Reference)>,
    /// `solid`, `liquid` or `gas`.
    pub form: Option<String>,
    /// Density of the pure substance, kg/m³.
    pub density: Option<f64>,
    /// Densities of its solutions in water: mass fraction, kg/m³, temperature in K; in order of the fraction.
    pub aqueous: Vec<(f64, f64, f64)>,
    /// Molar volume of the molecule in water, L/mol, where stated.
    pub molar_volume: Option<f64>,
    /// Solubilities: amount in its unit's base, unit, temperature in K.
    pub solubility: Vec<(super::Amount, Option<f64>)>,
    /// Heats of solution: J/mol, and the mass fraction that is reached; none for much water.
    pub heats_of_solution: Vec<(f64, Option<f64>)>,
    /// Henry's constant (log₁₀): activity of what it is in water over its partial pressure in bar.
    pub log_kh: Option<Constant>,
    /// GHS hazard statements by code.
    pub hazards: Vec<String>,
    /// What it must not meet.
    pub keep_away_from: Vec<Reference>,
    /// No formula, or none that counts.
    pub inert: bool,
    /// `instead of the built-in`.
    pub instead: bool,
    /// Where the facts come from.
    pub source: Option<String>,
}

/// A constant at 25 °C with its temperature dependence.
#[derive(Clone, Debug, PartialEq)]
pub struct Constant {
    /// The value.
    pub value: ConstantValue,
    /// Standard uncertainty, in the unit of the value.
    pub uncertainty: Option<f64>,
    /// The species that it belongs to, where said.
    pub of: Option<Reference>,
    /// Molecules of water that its species holds beside the ion and the hydrogens (−1 for boric acid, B(OH)₃).
    pub water: f64,
    /// The ionic strength it holds at, mol/kg or mol/L; 0 where not said.
    pub ionic_strength: f64,
    /// Where it comes from.
    pub source: Option<String>,
    /// Where it stands.
    pub at: Anchor,
}

/// The value of a constant.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ConstantValue {
    /// A number at 25 °C; enthalpy J/mol and heat capacity J/(mol·K) of the ionisation or formation.
    Number {
        /// The number.
        value: f64,
        /// Enthalpy, J/mol.
        enthalpy: Option<f64>,
        /// Heat capacity, J/(mol·K).
        heat_capacity: Option<f64>,
    },
    /// `a/T + b + c T + d ln T`, T in K, with its range.
    Equation {
        /// K.
        a: f64,
        /// 1.
        b: f64,
        /// 1/K.
        c: f64,
        /// 1.
        d: f64,
        /// Range of validity, K.
        range: Option<(f64, f64)>,
    },
}

/// A complex of an ion.
#[derive(Clone, Debug, PartialEq)]
pub struct Complex {
    /// The partners with their counts; `hydrogen` among them, perhaps negative.
    pub partners: Vec<(f64, Reference)>,
    /// How many of the block's own ion.
    pub itself: f64,
    /// What the complex is called.
    pub named: Option<Reference>,
    /// Overall formation constant (log₁₀).
    pub log_k: Constant,
}

/// A SIT coefficient.
#[derive(Clone, Debug, PartialEq)]
pub struct Interaction {
    /// With what.
    pub partner: Reference,
    /// kg/mol.
    pub epsilon: f64,
    /// Its standard uncertainty and source.
    pub constant: Constant,
}

/// An `ion` block: the most deprotonated form, the acids that stand on it, and what it does in water.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Ion {
    /// Formula as written and parsed, without charge.
    pub formula: Option<(String, Formula)>,
    /// Charge.
    pub charge: i32,
    /// Molar mass where there is no formula, kg/mol.
    pub molar_mass: Option<f64>,
    /// pKa values, most acidic first.
    pub pka: Vec<Constant>,
    /// Complexes.
    pub complexes: Vec<Complex>,
    /// SIT coefficients.
    pub interactions: Vec<Interaction>,
    /// Molar volumes, L/mol.
    pub molar_volumes: Vec<Constant>,
    /// Limiting molar conductivities, S·m²/mol.
    pub molar_conductivities: Vec<Constant>,
    /// `instead of the built-in`.
    pub instead: bool,
    /// Where the facts come from.
    pub source: Option<String>,
}

/// A `solid` block: a phase that can precipitate.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Solid {
    /// Formula as written and parsed.
    pub formula: Option<(String, Formula)>,
    /// What it gives when it dissolves.
    pub gives: Vec<(f64, Reference)>,
    /// log Ksp.
    pub log_ksp: Option<Constant>,
    /// Whether and how it forms.
    pub forming: crate::chemistry::Forming,
    /// `instead of the built-in`.
    pub instead: bool,
    /// Where the facts come from.
    pub source: Option<String>,
}

/// A balance.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Balance {
    /// Readability, kg.
    pub readability: f64,
    /// Least mass, kg.
    pub least: Option<f64>,
    /// Greatest mass, kg.
    pub greatest: Option<f64>,
}

/// A piece of ware.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ware {
    /// What kind.
    pub kind: WareKind,
    /// Its volume or least volume, L.
    pub volume: f64,
    /// The greatest volume of an adjustable one, L.
    pub up_to: Option<f64>,
    /// Its tolerance.
    pub tolerance: Option<HalfWidth>,
    /// Whether it is class A.
    pub class_a: bool,
}

/// A `lab` block.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Lab {
    /// Lowest and highest room temperature, K.
    pub room: Option<Stated<(f64, f64)>>,
    /// Balances.
    pub balances: Vec<Balance>,
    /// Flasks, cylinders, pipettes, burettes, vessels.
    pub wares: Vec<Ware>,
    /// Meters with their tolerance.
    pub meters: Vec<(MeterKind, HalfWidth)>,
    /// What the conductivity meter shows, where it says so.
    pub conductivity_meter: Option<ConductivityMeter>,
}

/// How a conductivity meter brings its reading to a reference temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ConductivityMeter {
    /// The temperature to which it refers, K.
    pub reference_K: f64,
    /// The change with temperature that it assumes, 1/K, of the conductivity at the reference; none where it follows the solution.
    pub compensation_per_K: Option<f64>,
}

/// The key under which a definition is found, by its kind's namespace.
pub fn namespace(kind: BlockKind) -> Namespace {
    match kind {
        BlockKind::Solution | BlockKind::Bottle | BlockKind::Substance => Namespace::Ingredient,
        BlockKind::Ion => Namespace::Constituent,
        BlockKind::Solid => Namespace::Phase,
        BlockKind::Danger | BlockKind::Group => Namespace::Danger,
        BlockKind::Lab => Namespace::Lab,
    }
}

/// Names are told apart by the place where they stand.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Namespace {
    /// Substances, bottles, solutions.
    Ingredient,
    /// Ions and molecules in solution.
    Constituent,
    /// Solids.
    Phase,
    /// Dangers and groups.
    Danger,
    /// Labs.
    Lab,
}

/// A block of a file, found by the kind of block and its name, wherever it has moved to.
#[derive(Clone, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct DefinitionKey {
    /// The file.
    pub file: crate::text::FileId,
    /// The namespace.
    pub namespace: Namespace,
    /// The header's name.
    pub name: NameKey,
}
