//! Properties, ranges and targets; what must hold, what was found, what was judged.

use super::part::{FormulaText, Name, Number, Quantity, Slot, Text, Tolerance};
use crate::text::Span;
use crate::units::Unit;

/// What a `q.s.` line or a pair is made up to.
#[derive(Clone, Debug, PartialEq)]
pub struct Target {
    /// Its place, after `to`.
    pub span: Span,
    /// What must be reached.
    pub kind: TargetKind,
    /// `as CaCO3`.
    pub as_formula: Option<Slot<FormulaText>>,
    /// `at 37 °C`.
    pub at: Option<Slot<Quantity>>,
    /// `diluted 10-fold [with NAME]`.
    pub diluted: Option<Dilution>,
}

/// The kinds of target.
#[derive(Clone, Debug, PartialEq)]
pub enum TargetKind {
    /// `1 L`, `1 kg`, `about 400 mL`. A volume or a mass.
    Extent {
        /// Whether it says `about`.
        about: bool,
        /// How much.
        quantity: Quantity,
        /// `± 0.4 mL`.
        tolerance: Option<Tolerance>,
    },
    /// `pH 7.00 ± 0.05`, `pH 5.3 to 5.5`, `ionic strength 150 mmol/L`, `free calcium 1 µmol/L`.
    Property {
        /// Which property.
        property: Property,
        /// Which value.
        range: Slot<Range>,
    },
    /// `pH 6.0, 6.5, 7.0`: a series.
    Series {
        /// Which property.
        property: Property,
        /// The values, at least two.
        values: Vec<Bound>,
    },
    /// `saturation`.
    Saturation,
    /// `"faint pink"`: by eye.
    ByEye(Text),
}

/// A property of a solution.
#[derive(Clone, Debug, PartialEq)]
pub struct Property {
    /// Its place.
    pub span: Span,
    /// Which one.
    pub kind: PropertyKind,
}

/// The properties that can be expected or sought.
#[derive(Clone, Debug, PartialEq)]
pub enum PropertyKind {
    /// pH.
    Ph,
    /// Ionic strength.
    IonicStrength,
    /// Buffer capacity.
    BufferCapacity,
    /// Osmolality.
    Osmolality,
    /// Conductivity.
    Conductivity,
    /// Density.
    Density,
    /// Water activity.
    WaterActivity,
    /// Alkalinity.
    Alkalinity,
    /// Hardness.
    Hardness,
    /// `total NAME`.
    Total(Slot<Name>),
    /// `free NAME`.
    Free(Slot<Name>),
    /// `saturation index of PHASE`.
    SaturationIndex(Slot<Name>),
}

/// A bound of a range: a number with an optional unit (which may stand after the other bound).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bound {
    /// Its place.
    pub span: Span,
    /// The number.
    pub number: Number,
    /// Its own unit or, in `a to b UNIT`, the range's.
    pub unit: Option<Unit>,
}

/// A range of values.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Range {
    /// A single value (targets only).
    Exactly(Bound),
    /// `a ± b`.
    PlusMinus(Bound, Tolerance),
    /// `a to b`.
    Between(Bound, Bound),
    /// `at least a`.
    AtLeast(Bound),
    /// `at most a`.
    AtMost(Bound),
}

/// `diluted N-fold [with NAME]`.
#[derive(Clone, Debug, PartialEq)]
pub struct Dilution {
    /// Its place.
    pub span: Span,
    /// N.
    pub fold: Slot<Number>,
    /// With what; water where it is not said.
    pub with: Option<Slot<Name>>,
}

/// `expect PROPERTY RANGE [as FORMULA] [at T] [diluted N-fold [with NAME]]`.
#[derive(Clone, Debug, PartialEq)]
pub struct Expect {
    /// What is expected to lie in the range.
    pub property: Slot<Property>,
    /// The range.
    pub range: Slot<Range>,
    /// `as P`.
    pub as_formula: Option<Slot<FormulaText>>,
    /// `at 4 °C`.
    pub at: Option<Slot<Quantity>>,
    /// `diluted 10-fold`.
    pub diluted: Option<Dilution>,
}

/// `found 0.1003 mol/L sodium hydroxide ± 0.0002 mol/L`.
#[derive(Clone, Debug, PartialEq)]
pub struct Found {
    /// The strength.
    pub strength: Slot<Quantity>,
    /// Of what.
    pub name: Slot<Name>,
    /// Its uncertainty.
    pub tolerance: Option<Tolerance>,
}

/// `accept CODE [on NAME] because TEXT`.
#[derive(Clone, Debug, PartialEq)]
pub struct Accept {
    /// Which finding.
    pub code: Slot<Text>,
    /// On lines of which name.
    pub on: Option<Slot<Name>>,
    /// Why.
    pub because: Slot<Text>,
}
