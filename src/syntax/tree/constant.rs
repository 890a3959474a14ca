//! What a substance or an ion is known by: counts, constants, densities.

use super::part::{Name, Number, Quantity, Slot, TemperatureRange, Text, Tolerance};
use crate::text::Span;
use crate::units::Unit;

/// A count and a name in `gives`.
#[derive(Clone, Debug, PartialEq)]
pub struct Given {
    /// How many; 1 where it is not written. May be negative or fractional.
    pub count: f64,
    /// Where the count stands, if written.
    pub count_span: Option<Span>,
    /// Of what.
    pub name: Slot<Name>,
}

/// A constant's value, with unit and standard uncertainty.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measured {
    /// Its place.
    pub span: Span,
    /// The number, sign included.
    pub number: Number,
    /// Its unit.
    pub unit: Option<Unit>,
    /// Its standard uncertainty, in the same unit.
    pub uncertainty: Option<f64>,
}

/// A published temperature equation `a/T + b + c T + d ln T`, T in kelvin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Equation {
    /// Its place.
    pub span: Span,
    /// Coefficient of 1/T, K.
    pub a: f64,
    /// The constant term.
    pub b: f64,
    /// Coefficient of T, 1/K.
    pub c: f64,
    /// Coefficient of ln T.
    pub d: f64,
    /// Standard uncertainty.
    pub uncertainty: Option<f64>,
}

/// The value of a constant.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Value {
    /// A number at 25 °C.
    Measured(Measured),
    /// An equation.
    Equation(Equation),
}

/// A constant with its parts after commas: `pKa 7.198 ± 0.005, of dihydrogen phosphate, enthalpy 3.6 kJ/mol, source …`.
#[derive(Clone, Debug, PartialEq)]
pub struct Constant {
    /// The value.
    pub value: Slot<Value>,
    /// The parts.
    pub parts: Vec<ConstantPart>,
}

/// A part of a constant.
#[derive(Clone, Debug, PartialEq)]
pub struct ConstantPart {
    /// Its place, without the comma.
    pub span: Span,
    /// What it says.
    pub kind: ConstantPartKind,
}

/// The kinds of parts that constants have.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs, reason = "named after their words in the language reference")]
pub enum ConstantPartKind {
    /// `of NAME`: the species that this constant belongs to.
    Of(Slot<Name>),
    Enthalpy(Slot<Measured>),
    HeatCapacity(Slot<Measured>),
    LogK(Slot<Value>),
    At(Slot<Quantity>),
    AtIonicStrength(Slot<Quantity>),
    /// `from 0 °C to 50 °C`: where an equation holds.
    Range(Slot<TemperatureRange>),
    Source(Slot<Text>),
    /// `named NAME`: the species that a complex is.
    Named(Slot<Name>),
    /// `itself 3`: how many of the block's own ion.
    Itself(Slot<Number>),
    /// Further partners of a complex: `2 hydrogen`.
    Partner(Given),
    /// A word that is none; a fault says so.
    Unreadable,
}

/// `complex with [N] NAME {, [N] NAME}, log K …`.
#[derive(Clone, Debug, PartialEq)]
pub struct Complex {
    /// The first partner; more of them are parts.
    pub partner: Slot<Given>,
    /// The parts.
    pub parts: Vec<ConstantPart>,
}

/// `interaction with NAME, VALUE`.
#[derive(Clone, Debug, PartialEq)]
pub struct Partnered {
    /// With what.
    pub partner: Slot<Name>,
    /// The value.
    pub value: Slot<Measured>,
    /// The parts.
    pub parts: Vec<ConstantPart>,
}

/// `density 1.159 g/mL [at T]`.
#[derive(Clone, Debug, PartialEq)]
pub struct Density {
    /// The density.
    pub value: Slot<Quantity>,
    /// `± 0.002 g/mL`, where a certificate states it.
    pub tolerance: Option<Tolerance>,
    /// At which temperature.
    pub at: Option<Slot<Quantity>>,
    /// The parts (source).
    pub parts: Vec<ConstantPart>,
}

/// `aqueous 36 % w/w, density 1.1789 g/mL at 20 °C`: a row of a substance's density table in water.
#[derive(Clone, Debug, PartialEq)]
pub struct Aqueous {
    /// The strength.
    pub strength: Slot<Quantity>,
    /// The density.
    pub density: Slot<Quantity>,
    /// At which temperature.
    pub at: Option<Slot<Quantity>>,
    /// The parts (source).
    pub parts: Vec<ConstantPart>,
}

/// `solubility 35.9 g/L at 20 °C`.
#[derive(Clone, Debug, PartialEq)]
pub struct Solubility {
    /// How much.
    pub value: Slot<Quantity>,
    /// At which temperature.
    pub at: Option<Slot<Quantity>>,
    /// The parts (source).
    pub parts: Vec<ConstantPart>,
}

/// `heat of solution -67.0 kJ/mol at 35 % w/w`: enthalpy of dissolving one mole of the substance to that strength.
#[derive(Clone, Debug, PartialEq)]
pub struct HeatOfSolution {
    /// The enthalpy.
    pub value: Slot<Measured>,
    /// The strength reached; much water where none is said.
    pub at: Option<Slot<Quantity>>,
    /// The parts (source).
    pub parts: Vec<ConstantPart>,
}
