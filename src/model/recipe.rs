//! A solution or a bottle as its lines say it, in base units: what goes into the beaker in bench order, the conditions,
//! and what must hold.

use super::NameKey;
use crate::finding::Anchor;
use crate::text::{FileId, Span};
use crate::units::{Dimension, Unit, format};

/// A value and where it was stated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stated<T> {
    /// The value.
    pub value: T,
    /// Where.
    pub at: Anchor,
}

/// A name that refers to something, with the strength that stands before it.
#[derive(Clone, Debug, PartialEq)]
pub struct Reference {
    /// The name as written, without quotes.
    pub text: String,
    /// The name as compared.
    pub key: NameKey,
    /// Where the name stands.
    pub at: Anchor,
    /// The strength before it.
    pub strength: Option<Strength>,
    /// The file in whose scope the name has its meaning, where that is not the one in which the recipe stands.
    pub home: Option<FileId>,
}

/// How strong a thing is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Strength {
    /// The strength itself.
    pub kind: StrengthKind,
    /// Where it stands.
    pub span: Span,
}

/// The kinds of strength.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum StrengthKind {
    /// A concentration, molality, content or fraction.
    Concentration(Amount),
    /// So many volumes of the thing and so many of water.
    Ratio {
        /// Volumes of the thing.
        of_it: f64,
        /// Volumes of water.
        of_water: f64,
    },
}

/// A quantity in the base unit of its dimension, and as it was written.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Amount {
    /// The value in the base unit of `unit`'s dimension.
    pub value: f64,
    /// Half the width of a written range (`28 to 30 % w/w`), base unit; 0 otherwise.
    pub half_range: f64,
    /// The unit that was written.
    pub unit: Unit,
    /// Where the quantity stands on its line.
    pub span: Span,
}

impl Amount {
    /// What the quantity measures.
    pub fn dimension(&self) -> Dimension {
        self.unit.dimension()
    }

    /// Whether the quantity says what the line brings to the finished solution (concentration, molality, fraction)
    /// rather than what goes in.
    pub fn is_concentration(&self) -> bool {
        matches!(
            self.dimension(),
            Dimension::AmountConcentration
                | Dimension::Molality
                | Dimension::MassConcentration
                | Dimension::MassFraction
                | Dimension::VolumeFraction
                | Dimension::EnzymeActivityConcentration
        )
    }
}

/// What stands after `±`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum HalfWidth {
    /// In the base unit of its dimension.
    Absolute(f64),
    /// As a share of the value.
    Relative(f64),
}

impl HalfWidth {
    /// The half-width about `value`, in the unit of `value`.
    pub fn about(self, value: f64) -> f64 {
        match self {
            HalfWidth::Absolute(width) => width,
            HalfWidth::Relative(share) => share * value.abs(),
        }
    }
}

/// The qualifiers of a line.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Qualifiers {
    /// `± Q`.
    pub tolerance: Option<Stated<HalfWidth>>,
    /// `purity P %`, as a share.
    pub purity: Option<Stated<f64>>,
    /// `water W %`, as a share lost on drying.
    pub water: Option<Stated<f64>>,
    /// `dried at T`, K.
    pub dried_at: Option<Stated<f64>>,
    /// `density Q`, kg/m³.
    pub density: Option<Stated<f64>>,
    /// `from NAME`.
    pub from: Option<Reference>,
    /// `about Q`: the author's estimate.
    pub about: Option<Stated<Amount>>,
    /// `at most Q`.
    pub at_most: Option<Stated<Amount>>,
    /// `by weight`.
    pub by_weight: bool,
    /// `at T`, K.
    pub at: Option<Stated<f64>>,
}

/// `QUANTITY [STRENGTH] NAME {, QUALIFIER}`.
#[derive(Clone, Debug, PartialEq)]
pub struct Addition {
    /// Whether nothing needs measuring.
    pub about: bool,
    /// The amount; several where the solution is a series.
    pub amounts: Vec<Amount>,
    /// `as FORMULA`.
    pub as_formula: Option<Stated<crate::syntax::formula::Formula>>,
    /// What.
    pub what: Reference,
    /// The qualifiers.
    pub qualifiers: Qualifiers,
}

/// `QUANTITY NAME / NAME to TARGET`.
#[derive(Clone, Debug, PartialEq)]
pub struct Pair {
    /// The total of what both give, or the volume to split.
    pub amount: Amount,
    /// The first member.
    pub first: Reference,
    /// The second member.
    pub second: Reference,
    /// What the finished solution must have.
    pub goals: Vec<Goal>,
}

/// `q.s. NAME [or NAME] to TARGET`.
#[derive(Clone, Debug, PartialEq)]
pub struct MakeUp {
    /// What is added.
    pub what: Reference,
    /// The other titrant, of which one is used.
    pub alternative: Option<Reference>,
    /// What is reached; several where the solution is a series.
    pub goals: Vec<Goal>,
    /// The qualifiers.
    pub qualifiers: Qualifiers,
}

/// What is to be reached.
#[derive(Clone, Debug, PartialEq)]
pub struct Goal {
    /// What.
    pub kind: GoalKind,
    /// Where it stands on the line.
    pub at: Anchor,
    /// `as FORMULA`.
    pub as_formula: Option<crate::syntax::formula::Formula>,
    /// At which temperature, K, where it is said.
    pub temperature: Option<Stated<f64>>,
    /// After which dilution.
    pub diluted: Option<Dilution>,
}

/// The kinds of goal.
#[derive(Clone, Debug, PartialEq)]
pub enum GoalKind {
    /// A volume, L.
    Volume {
        /// How much, L.
        litres: f64,
        /// Whether it is only `about` so much.
        about: bool,
        /// Its tolerance.
        tolerance: Option<HalfWidth>,
    },
    /// A mass, kg.
    Mass {
        /// How much, kg.
        kilograms: f64,
        /// Whether it is only `about` so much.
        about: bool,
        /// Its tolerance.
        tolerance: Option<HalfWidth>,
    },
    /// A property.
    Property {
        /// Which.
        property: Property,
        /// The value aimed at, in the base unit of `unit` (the middle of a range).
        aim: f64,
        /// The window's lower end.
        low: Option<f64>,
        /// The window's upper end.
        high: Option<f64>,
        /// The unit written; none for pH.
        unit: Option<Unit>,
    },
    /// Saturation.
    Saturation,
    /// By eye.
    ByEye(String),
}

/// `diluted N-fold [with NAME]`.
#[derive(Clone, Debug, PartialEq)]
pub struct Dilution {
    /// N, over 1.
    pub fold: f64,
    /// With what; water where it is not said.
    pub with: Option<Reference>,
}

/// A property of a solution.
#[derive(Clone, Debug, PartialEq)]
pub enum Property {
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
    /// Activity of water.
    WaterActivity,
    /// Alkalinity.
    Alkalinity,
    /// Hardness.
    Hardness,
    /// `total NAME`.
    Total(Reference),
    /// `free NAME`.
    Free(Reference),
    /// `saturation index of PHASE`.
    SaturationIndex(Reference),
}

impl Property {
    /// The property in the language's words.
    pub fn words(&self) -> String {
        match self {
            Property::Ph => "pH".into(),
            Property::IonicStrength => "ionic strength".into(),
            Property::BufferCapacity => "buffer capacity".into(),
            Property::Osmolality => "osmolality".into(),
            Property::Conductivity => "conductivity".into(),
            Property::Density => "density".into(),
            Property::WaterActivity => "water activity".into(),
            Property::Alkalinity => "alkalinity".into(),
            Property::Hardness => "hardness".into(),
            Property::Total(what) => format!("total {}", what.text),
            Property::Free(what) => format!("free {}", what.text),
            Property::SaturationIndex(what) => format!("saturation index of {}", what.text),
        }
    }

    /// A value of it in the base unit, shown in the unit that was written; bare where it has none.
    pub fn shown(&self, value: f64, unit: Option<Unit>) -> String {
        match self {
            Property::WaterActivity => format::fixed(value, 3),
            _ => format::with_unit(value, unit),
        }
    }
}

/// One action at the bench.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// The whole statement.
    pub at: Anchor,
    /// What is done.
    pub action: Action,
}

/// The kinds of action, in the order of the beaker.
#[derive(Clone, Debug, PartialEq)]
pub enum Action {
    /// Something goes in.
    Add(Addition),
    /// A pair goes in.
    Pair(Pair),
    /// As much as is enough.
    MakeUp(MakeUp),
    /// The whole batch of a solution goes in.
    AddAll(Reference),
    /// An alternative to the line above.
    Alternative(Addition),
    /// The beaker is brought to a temperature, K.
    BringTo(f64),
    /// A volatile is driven off.
    DriveOff(Reference),
    /// Solids are filtered off.
    Filter,
    /// Time passes, s.
    Wait(f64),
    /// What stands below is added later.
    Divider(Part),
    /// A titrant's strength was found: mol/L and standard uncertainty.
    Found {
        /// Of what.
        what: Reference,
        /// The found strength.
        strength: Amount,
        /// Its standard uncertainty, in the base unit.
        uncertainty: Option<f64>,
    },
}

/// Parts that are added later.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Part {
    /// `before use`.
    BeforeUse,
    /// `after autoclaving`.
    AfterAutoclaving,
}

/// `expect …`.
#[derive(Clone, Debug, PartialEq)]
pub struct Expectation {
    /// The whole statement.
    pub at: Anchor,
    /// What is expected to lie in the range.
    pub property: Property,
    /// Lower limit, base unit.
    pub low: Option<f64>,
    /// Upper limit, base unit.
    pub high: Option<f64>,
    /// The unit written; none for pH.
    pub unit: Option<Unit>,
    /// `as FORMULA`, as written and parsed.
    pub as_formula: Option<(String, crate::syntax::formula::Formula)>,
    /// `at T`, K.
    pub temperature: Option<f64>,
    /// `diluted N-fold`.
    pub diluted: Option<Dilution>,
}

/// `accept CODE [on NAME] because TEXT`.
#[derive(Clone, Debug, PartialEq)]
pub struct Acceptance {
    /// The whole statement.
    pub at: Anchor,
    /// The code as written, and where.
    pub code: Stated<String>,
    /// On which name.
    pub on: Option<Reference>,
    /// Why.
    pub because: String,
}

/// `stored at …`.
#[derive(Clone, Debug, PartialEq)]
pub struct Storage {
    /// The whole statement.
    pub at: Anchor,
    /// Lowest temperature, K; none after `below`.
    pub low: Option<f64>,
    /// Highest temperature, K.
    pub high: f64,
    /// How long, s.
    pub duration: Option<f64>,
    /// Which part of the recipe it speaks of, counted by dividers.
    pub part: usize,
    /// In what.
    pub material: Option<String>,
    /// `in the dark`.
    pub dark: bool,
}

/// What stands above the liquid.
#[derive(Clone, Debug, PartialEq)]
pub enum Atmosphere {
    /// Closed.
    Sealed,
    /// Exposed to air; where it drifts is a finding.
    Open,
    /// In equilibrium with air.
    Air,
    /// In equilibrium with a gas of this share (1) or partial pressure (Pa).
    Gas {
        /// The share or pressure.
        quantity: Amount,
        /// Of what.
        of: Reference,
        /// Whether the gas is saturated with water.
        moist: bool,
    },
}

/// A solution or a bottle.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Recipe {
    /// What is done, in bench order.
    pub entries: Vec<Entry>,
    /// Whether every line that the values depend on could be read.
    pub sound: bool,
    /// How many members a series has; 1 otherwise.
    pub members: usize,
    /// What tells the members of a series apart, as written: `4 mL`, `pH 6.0`. Empty where there is no series.
    pub series: Vec<String>,
    /// `made at`, K.
    pub made_at: Option<Stated<f64>>,
    /// `used at`, K, in the order written; a range is expanded to its ends and every 5 °C between.
    pub used_at: Vec<Stated<f64>>,
    /// `stored at`.
    pub storage: Vec<Storage>,
    /// `use within`, s.
    pub use_within: Option<Stated<f64>>,
    /// `ready after`, s.
    pub ready_after: Option<Stated<f64>>,
    /// What stands above the liquid.
    pub atmosphere: Option<Stated<Atmosphere>>,
    /// Whether it stands there in use only (`used at T under GAS`).
    pub gas_in_use_only: bool,
    /// `makes`.
    pub makes: Option<Stated<Amount>>,
    /// `like NAME`.
    pub like: Option<Reference>,
    /// `without NAME`.
    pub without: Vec<Reference>,
    /// `concentrate 50x`.
    pub concentrate: Option<Stated<f64>>,
    /// `expect`.
    pub expectations: Vec<Expectation>,
    /// `accept`.
    pub accepts: Vec<Acceptance>,
    /// `in LAB`.
    pub lab: Option<Reference>,
    /// `standardise against NAME`.
    pub standardised_against: Option<Reference>,
    /// The steps' texts with their places.
    pub steps: Vec<Stated<String>>,
    /// The values to write down, with their places.
    pub records: Vec<Stated<String>>,
    /// `document`, `revision`, `effective`.
    pub document: Option<Stated<DocumentFields>>,
    /// A bottle's density, kg/m³.
    pub density: Option<Stated<f64>>,
    /// A bottle's enzyme activity, U/L.
    pub activity: Option<Stated<f64>>,
    /// GHS hazard statements by code.
    pub hazards: Vec<String>,
}

/// What a `document` line says.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct DocumentFields {
    /// The code.
    pub code: String,
    /// The revision.
    pub revision: Option<String>,
    /// The date on which it takes effect.
    pub effective: Option<String>,
}
