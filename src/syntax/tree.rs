//! The tree of a file: one node per logical line, each with a typed statement, its tokens and what is wrong with it.
//!
//! A logical line is a line and those after it that begin with a comma. Spans inside a [`Line`] count from the start of
//! that logical line, so an equal line is an equal tree wherever it stands; [`Placed::start`] moves them into the file.

use std::sync::Arc;

use crate::text::Span;
use crate::units::Unit;

/// The tree of a whole file. Lines follow each other without gap or overlap and cover the text.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Tree {
    /// The logical lines in file order.
    pub lines: Vec<Placed>,
}

/// A logical line and where it stands.
#[derive(Clone, Debug, PartialEq)]
pub struct Placed {
    /// Byte offset of the line's first character in the file.
    pub start: usize,
    /// The line, shared with every equal line.
    pub line: Arc<Line>,
}

/// One logical line.
#[derive(Clone, Debug, PartialEq)]
pub struct Line {
    /// The text, line breaks included.
    pub text: String,
    /// Whether white space stands before the first word. Guides recovery only.
    pub indented: bool,
    /// What the line says.
    pub content: Content,
    /// Every token and gap in order, for colours, completion and the formatter.
    pub tokens: Vec<Token>,
    /// What is wrong with the line as it is written, whatever it means.
    pub faults: Vec<Fault>,
}

/// What a line says.
#[allow(clippy::large_enum_variant, reason = "nearly every line is a statement")]
#[derive(Clone, Debug, PartialEq)]
pub enum Content {
    /// Nothing, or a comment.
    Blank,
    /// A statement, perhaps with gaps.
    Statement(Statement),
    /// A line whose first word is unknown.
    Junk(Span),
}

/// A run of characters of one kind, or a gap where something is missing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Token {
    /// Its kind.
    pub kind: TokenKind,
    /// Its place; empty for a gap.
    pub span: Span,
}

/// The kinds of token.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum TokenKind {
    /// A statement word, header word or other fixed word of the language (`to`, `at`, `purity`).
    Keyword,
    /// A number.
    Number,
    /// A unit.
    Unit,
    /// The name of a thing being defined.
    Definition,
    /// The name of a thing being referred to.
    Name,
    /// A property of `expect` or of a target: pH, ionic strength …
    Property,
    /// `±`, `/`, `+`.
    Operator,
    /// A comma between parts.
    Separator,
    /// Free text of `step`, `note`, `source` …
    Text,
    /// A quoted path.
    Path,
    /// A finding code.
    Code,
    /// A chemical formula.
    Formula,
    /// A comment.
    Comment,
    /// Something that cannot be read.
    Bad,
    /// A gap: nothing stands here yet, and this is what belongs here.
    Missing(Expected),
}

/// What belongs into a gap.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Expected {
    /// A name of a substance, bottle or solution.
    IngredientName,
    /// A name of a solution.
    SolutionName,
    /// A name of an ion or molecule in solution.
    ConstituentName,
    /// A name of a lab.
    LabName,
    /// A name that this line defines.
    NewName,
    /// A quantity.
    Quantity,
    /// A unit.
    Unit,
    /// A number.
    Number,
    /// The word `to`.
    To,
    /// What a `q.s.` line or a pair is made up to.
    Target,
    /// A property that can be expected.
    Property,
    /// A range.
    Range,
    /// A temperature.
    Temperature,
    /// A duration.
    Duration,
    /// A qualifier.
    Qualifier,
    /// A quoted path.
    Path,
    /// Free text.
    Text,
    /// A finding code.
    Code,
    /// The word `because`.
    Because,
    /// A chemical formula.
    Formula,
    /// A gas.
    Gas,
    /// Anything else; the statement word says what.
    Other,
}

/// Something wrong with the writing of a line. Lowering turns it into a finding with words.
#[derive(Clone, Debug, PartialEq)]
pub struct Fault {
    /// The characters at fault, within the line.
    pub span: Span,
    /// What is wrong with them.
    pub kind: FaultKind,
    /// What might have been meant, each as text to put in place of `span` (or of `replace` where that differs).
    pub readings: Vec<Reading>,
}

/// One thing that a faulty piece of text may have meant.
#[derive(Clone, Debug, PartialEq)]
pub struct Reading {
    /// The characters to replace, within the line.
    pub span: Span,
    /// The replacement.
    pub text: String,
    /// A few words that say what this reading means, or empty where the replacement speaks for itself.
    pub meaning: String,
}

/// The kinds of fault.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum FaultKind {
    /// The first word is unknown. The nearest statement words stand in the readings.
    UnknownStatement,
    /// Something is missing at this place.
    Missing(Expected),
    /// Characters after a complete statement.
    Unexpected,
    /// A quantity that cannot be read.
    BadQuantity,
    /// A unit that is none.
    UnknownUnit,
    /// A unit of the wrong kind for this place; what would fit is said in a few words.
    WrongKindOfUnit(String),
    /// A number without the unit it needs.
    UnitMissing,
    /// A per cent sign that does not say of what.
    BarePercent,
    /// Normality.
    Normality,
    /// ppm, ppb.
    Ppm,
    /// A decimal comma.
    DecimalComma,
    /// A comma between thousands, or a decimal comma: both can be read.
    ThousandsComma,
    /// A number with a superfluous leading zero, or none before the point.
    LeadingZero,
    /// `1:10`: one in ten, or one to ten.
    OneInHowMany,
    /// A sign before a quantity.
    SignedQuantity,
    /// An en dash as a range.
    DashAsRange,
    /// A number that cannot be read, or is not finite.
    BadNumber,
    /// A number out of its bounds (pH outside −2 to 16, purity over 100 %); the bounds in words.
    OutOfBounds(String),
    /// A range whose end is not above its beginning.
    RangeDoesNotRise,
    /// A word after a comma that is no qualifier.
    UnknownQualifier,
    /// A qualifier that cannot stand on this kind of line.
    MisplacedQualifier,
    /// A comma with nothing after it.
    NothingAfterComma,
    /// A target that is none.
    BadTarget,
    /// A property that is none.
    UnknownProperty,
    /// A range that cannot be read.
    BadRange,
    /// A name that cannot be read or needs quotes.
    BadName,
    /// A second number where a name should begin.
    SecondNumber,
    /// A formula that cannot be read.
    BadFormula,
    /// A character that cannot be seen, with its code point.
    InvisibleCharacter(char),
    /// A letter of another alphabet that looks like a Latin one.
    LookAlikeLetter {
        /// What is written.
        found: char,
        /// What it looks like.
        looks_like: char,
    },
    /// A word of the language written in another letter case or spelling; the reading gives the written form.
    WrittenForm,
    /// A line longer, or nested deeper, than the program reads.
    TooLong,
}

/// A part of a statement that may be missing or unreadable.
#[derive(Clone, Debug, PartialEq)]
pub enum Slot<T> {
    /// It is there.
    Given(T),
    /// Nothing stands at this offset.
    Missing(usize),
    /// Something stands there that cannot be read; a fault says why.
    Bad(Span),
}

impl<T> Slot<T> {
    /// The part, where it is there.
    pub fn given(&self) -> Option<&T> {
        match self {
            Slot::Given(part) => Some(part),
            Slot::Missing(_) | Slot::Bad(_) => None,
        }
    }
}

/// A name as written: unquoted text with runs of white space kept, or the inside of quotes (doubled quotes undone).
#[derive(Clone, Debug, PartialEq)]
pub struct Name {
    /// Its place, quotes included.
    pub span: Span,
    /// The name itself.
    pub text: String,
    /// Whether it stands in quotes.
    pub quoted: bool,
}

/// A piece of free text, trimmed.
#[derive(Clone, Debug, PartialEq)]
pub struct Text {
    /// Its place.
    pub span: Span,
    /// The text.
    pub text: String,
}

/// A number as written. Its digits are `span` of the line's text.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Number {
    /// Its place.
    pub span: Span,
    /// Its value, finite.
    pub value: f64,
}

/// A number with a unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Quantity {
    /// From the number's first digit to the unit's last character.
    pub span: Span,
    /// The number.
    pub number: Number,
    /// The unit.
    pub unit: Unit,
    /// Where the unit stands (of a list or range with one unit at its end: there).
    pub unit_span: Span,
}

/// What stands after `±`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tolerance {
    /// From the sign to the end.
    pub span: Span,
    /// The half-width: a quantity, a percentage (unit with dimension `Percent`), or a bare number (pH).
    pub half_width: Number,
    /// Its unit; none for a bare number.
    pub unit: Option<Unit>,
}

/// A statement. Half-typed ones have gaps.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs, reason = "each variant is named after its statement word in the language reference")]
pub enum Statement {
    // ── file ──
    Language(Slot<Number>),
    Use(Slot<Text>),
    Header(Header),
    // ── what goes into a solution ──
    Ingredient(Ingredient),
    Pair(Pair),
    QuantumSatis(QuantumSatis),
    All(Slot<Name>),
    Or(Ingredient),
    Makes(Slot<Quantity>),
    // ── what changes the beaker ──
    CoolTo(Slot<Quantity>),
    WarmTo(Slot<Quantity>),
    DriveOff(Slot<Name>),
    Filter,
    Wait(Slot<Quantity>),
    BeforeUse,
    AfterAutoclaving,
    // ── conditions ──
    MadeAt(Slot<Quantity>),
    UsedAt(UsedAt),
    StoredAt(StoredAt),
    ReadyAfter(Slot<Quantity>),
    UseWithin(Slot<Quantity>),
    Sealed,
    Open,
    Under(Slot<Gas>),
    In(Slot<Name>),
    // ── how it is made up from others ──
    Like(Slot<Name>),
    Without(Slot<Name>),
    Concentrate(Slot<Number>),
    // ── what must hold ──
    Expect(Expect),
    StandardiseAgainst(Slot<Name>),
    Found(Found),
    Accept(Accept),
    // ── texts ──
    Step(Slot<Text>),
    Record(Slot<Text>),
    Note(Slot<Text>),
    Document(Document),
    Source(Slot<Text>),
    Supplier(Slot<Text>),
    Expires(Slot<Text>),
    // ── substances, bottles, ions, solids ──
    InsteadOfTheBuiltIn,
    Also(Vec<Name>),
    Cas(Slot<Text>),
    Formula(Slot<FormulaText>),
    Charge(Slot<Number>),
    MolarMass(Slot<Measured>),
    Gives(Vec<Given>),
    Form(Slot<Text>),
    Density(Density),
    Aqueous(Aqueous),
    Solubility(Solubility),
    Activity(Slot<Quantity>),
    Hazard(Vec<Text>),
    KeepAwayFrom(Vec<Name>),
    Inert,
    Pka(Constant),
    LogKsp(Constant),
    ComplexWith(Complex),
    InteractionWith(Partnered),
    MolarConductivity(Constant),
    MolarVolume(Constant),
    // ── labs ──
    Room(Slot<TemperatureRange>),
    Balance(Slot<Balance>),
    Ware(WareLine),
    Meter(Meter),
}

/// The kinds of block.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
#[allow(missing_docs, reason = "named after the header words")]
pub enum BlockKind {
    Solution,
    Bottle,
    Substance,
    Ion,
    Solid,
    Lab,
}

/// `solution NAME` and its like.
#[derive(Clone, Debug, PartialEq)]
pub struct Header {
    /// The header word.
    pub kind: BlockKind,
    /// Where the header word stands.
    pub kind_span: Span,
    /// The name defined.
    pub name: Slot<Name>,
}

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

/// What a `q.s.` line or a pair is made up to.
#[derive(Clone, Debug, PartialEq)]
pub struct Target {
    /// Its place, after `to`.
    pub span: Span,
    /// What must be reached.
    pub kind: TargetKind,
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

/// A chemical formula as written, and its parse.
#[derive(Clone, Debug, PartialEq)]
pub struct FormulaText {
    /// Its place.
    pub span: Span,
    /// As written.
    pub text: String,
}

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

/// One or two temperatures.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TemperatureRange {
    /// Its place.
    pub span: Span,
    /// The lower one.
    pub low: Quantity,
    /// The upper one; equal to `low` where one is given.
    pub high: Quantity,
}

/// `balance readability 0.1 mg, 20 mg to 220 g`.
#[derive(Clone, Debug, PartialEq)]
pub struct Balance {
    /// Readability.
    pub readability: Quantity,
    /// Least mass.
    pub least: Option<Quantity>,
    /// Greatest mass.
    pub greatest: Option<Quantity>,
    /// `± 0.2 mg`, where stated.
    pub tolerance: Option<Tolerance>,
}

/// The kinds of volumetric ware and vessels.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs, reason = "named after their words")]
pub enum WareKind {
    Flask,
    Cylinder,
    Pipette,
    Burette,
    Vessel,
}

/// `flask 100 mL ± 0.10 mL, 250 mL ± 0.15 mL`.
#[derive(Clone, Debug, PartialEq)]
pub struct WareLine {
    /// What.
    pub kind: WareKind,
    /// Which sizes.
    pub wares: Vec<Ware>,
}

/// One piece of ware.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ware {
    /// Its place.
    pub span: Span,
    /// Its volume, or the least of an adjustable one.
    pub volume: Quantity,
    /// The greatest volume of an adjustable one.
    pub up_to: Option<Quantity>,
    /// Its tolerance.
    pub tolerance: Option<Tolerance>,
    /// Whether it says `class A`.
    pub class_a: bool,
}

/// Meters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[allow(missing_docs, reason = "named after their words")]
pub enum MeterKind {
    Ph,
    Conductivity,
    Osmometer,
}

/// `pH meter ± 0.02`, `conductivity meter ± 1 %, reference 25 °C, compensation 2.0 %`.
#[derive(Clone, Debug, PartialEq)]
pub struct Meter {
    /// Which.
    pub kind: MeterKind,
    /// Its tolerance.
    pub tolerance: Slot<Tolerance>,
    /// Reference temperature.
    pub reference: Option<Slot<Quantity>>,
    /// Compensation, per cent per kelvin.
    pub compensation: Option<Slot<Quantity>>,
}
