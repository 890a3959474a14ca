//! What is wrong with the writing of a line, and what may have been meant.

use crate::text::Span;

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
