//! What goes into a solution, and how it is made, used and kept.

use super::expectation::Target;
use super::part::{FormulaText, Name, Number, Quantity, Slot, Text, Tolerance};
use crate::text::Span;

/// The quantities that open an ingredient line.
#[derive(Clone, Debug, PartialEq)]
pub enum Amounts {
    /// One quantity.
    One(Quantity),
    /// `0, 2, 4 mL`: one solution per value. At least two.
    Series(Vec<Quantity>),
    /// `28 to 30 % w/w` in a bottle.
    Range(Quantity, Quantity),
}

/// `[about] QUANTITY [of] [STRENGTH] NAME {, QUALIFIER}`.
#[derive(Clone, Debug, PartialEq)]
pub struct Ingredient {
    /// Whether the line says `about`.
    pub about: bool,
    /// How much.
    pub amounts: Slot<Amounts>,
    /// `as FORMULA` after the quantity.
    pub as_formula: Option<Slot<FormulaText>>,
    /// Strength before the name.
    pub strength: Option<Slot<Strength>>,
    /// What.
    pub name: Slot<Name>,
    /// The qualifiers, tolerances included, in order.
    pub qualifiers: Vec<Qualifier>,
}

/// `QUANTITY [STRENGTH] NAME / [STRENGTH] NAME to TARGET`.
#[derive(Clone, Debug, PartialEq)]
pub struct Pair {
    /// The total.
    pub amount: Slot<Quantity>,
    /// Strength of the first member.
    pub first_strength: Option<Slot<Strength>>,
    /// The first member.
    pub first: Slot<Name>,
    /// Strength of the second member.
    pub second_strength: Option<Slot<Strength>>,
    /// The second member.
    pub second: Slot<Name>,
    /// What the finished solution must have.
    pub target: Slot<Target>,
    /// Qualifiers (few can stand here).
    pub qualifiers: Vec<Qualifier>,
}

/// `q.s. [STRENGTH] NAME [or [STRENGTH] NAME] to TARGET {, QUALIFIER}`.
#[derive(Clone, Debug, PartialEq)]
pub struct QuantumSatis {
    /// Strength of the thing added.
    pub strength: Option<Slot<Strength>>,
    /// The thing added.
    pub name: Slot<Name>,
    /// The other titrant, after `or`.
    pub alternative: Option<(Option<Slot<Strength>>, Slot<Name>)>,
    /// What it is made up to.
    pub target: Slot<Target>,
    /// Qualifiers.
    pub qualifiers: Vec<Qualifier>,
}

/// How strong a thing is, before its name.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Strength {
    /// `1 mol/L`, `37 % w/w`.
    Quantity(Quantity),
    /// `(1 + 9)`: volumes of the thing and of water (ISO 78-2).
    Ratio {
        /// Its place, brackets included.
        span: Span,
        /// Volumes of the thing.
        of_it: Number,
        /// Volumes of water.
        of_water: Number,
    },
}

/// A part after a comma.
#[derive(Clone, Debug, PartialEq)]
pub struct Qualifier {
    /// Its place, without the comma.
    pub span: Span,
    /// What it says.
    pub kind: QualifierKind,
}

/// The closed list of qualifiers.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs, reason = "named after the qualifier words in the language reference")]
pub enum QualifierKind {
    Tolerance(Tolerance),
    Purity(Slot<Quantity>),
    Water(Slot<Quantity>),
    DriedAt { temperature: Slot<Quantity>, duration: Option<Slot<Quantity>> },
    Density(Slot<Quantity>),
    From(Slot<Name>),
    About(Slot<Quantity>),
    AtMost(Slot<Quantity>),
    ByWeight,
    At(Slot<Quantity>),
    Grade(Slot<Text>),
    Lot(Slot<Text>),
    /// A word that is no qualifier, or a gap after the comma; a fault says so.
    Unreadable,
}

/// `used at T [, T …] [under GAS]` or `used at T to T`.
#[derive(Clone, Debug, PartialEq)]
pub struct UsedAt {
    /// The temperatures; two where `span_of_temperatures` is set.
    pub temperatures: Vec<Slot<Quantity>>,
    /// Whether the two are ends of a range.
    pub is_range: bool,
    /// `under GAS`.
    pub under: Option<Slot<Gas>>,
}

/// `stored at T [to T] [for DURATION] [, in MATERIAL] [, in the dark]`, `stored below T …`.
#[derive(Clone, Debug, PartialEq)]
pub struct StoredAt {
    /// Whether it says `below`.
    pub below: bool,
    /// The temperature.
    pub from: Slot<Quantity>,
    /// The end of the range.
    pub to: Option<Slot<Quantity>>,
    /// How long.
    pub duration: Option<Slot<Quantity>>,
    /// `in glass`.
    pub material: Option<Text>,
    /// `in the dark`.
    pub dark: bool,
}

/// What stands above the liquid.
#[derive(Clone, Debug, PartialEq)]
pub struct Gas {
    /// Its place.
    pub span: Span,
    /// What it is.
    pub kind: GasKind,
    /// `, moist`.
    pub moist: bool,
}

/// Kinds of gas phase.
#[derive(Clone, Debug, PartialEq)]
pub enum GasKind {
    /// Air.
    Air,
    /// `5 % CO2`, `4 kPa CO2`.
    Part {
        /// Its share or partial pressure.
        quantity: Quantity,
        /// Of what.
        of: Slot<Name>,
    },
}

/// `document CODE, revision N[, effective DATE]`.
#[derive(Clone, Debug, PartialEq)]
pub struct Document {
    /// The document's code.
    pub code: Slot<Text>,
    /// Its revision.
    pub revision: Option<Slot<Text>>,
    /// When it takes effect.
    pub effective: Option<Slot<Text>>,
}
