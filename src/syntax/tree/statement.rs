//! The statements, and the headers of blocks.

use super::constant::{Aqueous, Complex, Constant, Density, Given, HeatOfSolution, Measured, Partnered, Solubility};
use super::danger::{Keeps, Side};
use super::expectation::{Accept, Expect, Found};
use super::lab::{Balance, Meter, WareLine};
use super::part::{FormulaText, Name, Number, Quantity, Slot, TemperatureRange, Text};
use super::solution::{Document, Gas, Ingredient, Pair, QuantumSatis, StoredAt, UsedAt};
use crate::text::Span;

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
    HeatOfSolution(HeatOfSolution),
    Inert,
    Pka(Constant),
    LogKsp(Constant),
    LogKh(Constant),
    Forms(Slot<FormsHow>),
    ComplexWith(Complex),
    InteractionWith(Partnered),
    MolarConductivity(Constant),
    MolarVolume(Constant),
    // ── dangers and groups ──
    Holds(Vec<Name>),
    With(Side),
    While(Expect),
    EvenInPassing,
    Keeps(Keeps),
    Raises(Slot<Text>),
    Because(Slot<Text>),
    Advice(Slot<Text>),
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
    Danger,
    Group,
    Lab,
}

/// How a solid forms, after `forms`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[allow(missing_docs, reason = "named after the words")]
pub enum FormsHow {
    Slowly,
    AtOnce,
    OnFreezing,
    InPassing,
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
