//! The closed table of finding codes: one row each, with its level, a summary, and its page.

use super::Level;

macro_rules! codes {
    ($($variant:ident, $name:literal, $level:ident, $summary:literal;)*) => {
        /// The kinds of finding. Codes are stable once shipped.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
        pub enum Code {
            $(#[doc = $summary] $variant,)*
        }

        impl Code {
            /// Every code, in the order of the table.
            pub const ALL: &'static [Code] = &[$(Code::$variant),*];

            /// The code as it is written: kebab-case.
            pub fn name(self) -> &'static str {
                match self { $(Code::$variant => $name,)* }
            }

            /// The level that a finding of this code has unless its place says otherwise.
            pub fn level(self) -> Level {
                match self { $(Code::$variant => Level::$level,)* }
            }

            /// One sentence that says what kind of thing was found.
            pub fn summary(self) -> &'static str {
                match self { $(Code::$variant => $summary,)* }
            }

            /// The page that explains the finding, in Markdown.
            pub fn page(self) -> &'static str {
                match self { $(Code::$variant => include_str!(concat!("pages/", $name, ".md")),)* }
            }
        }
    };
}

codes! {
    // ── How a line is written ──
    UnknownStatement, "unknown-statement", Error, "The first word of the line is not one that the language knows.";
    IncompleteLine, "incomplete-line", Error, "Something is missing on the line.";
    Unreadable, "unreadable", Error, "Characters that cannot be read where they stand.";
    UnknownUnit, "unknown-unit", Error, "A unit that the language does not know.";
    UnitOfWrongKind, "unit-of-wrong-kind", Error, "A unit of the wrong kind for this place.";
    UnitMissing, "unit-missing", Error, "A number without the unit it needs.";
    BarePercent, "bare-percent", Error, "A per cent sign that does not say of what.";
    Normality, "normality", Error, "A normality, which depends on a reaction that is not stated.";
    Ppm, "ppm", Error, "Parts per million, which can be by mass, by volume or per litre.";
    DecimalComma, "decimal-comma", Error, "A decimal comma.";
    LeadingZero, "leading-zero", Error, "A number with a superfluous leading zero, or without one before the point.";
    OneInHowMany, "one-in-how-many", Error, "A ratio such as 1:10, which can be one in ten or one to ten.";
    SignedQuantity, "signed-quantity", Error, "A quantity with a sign.";
    BadNumber, "bad-number", Error, "A number that cannot be read or is out of bounds.";
    RangeDoesNotRise, "range-does-not-rise", Error, "A range whose end is not above its beginning.";
    UnknownQualifier, "unknown-qualifier", Error, "Words after a comma that are no qualifier.";
    MisplacedQualifier, "misplaced-qualifier", Error, "A qualifier that cannot stand on this kind of line.";
    NothingAfterComma, "nothing-after-comma", Error, "A comma with nothing after it.";
    UnknownProperty, "unknown-property", Error, "A property that the language does not know.";
    NameNeedsQuotes, "name-needs-quotes", Error, "A name that cannot be told from the words around it.";
    NumberInName, "number-in-name", Error, "A second number where a name should begin.";
    BadFormula, "bad-formula", Error, "A chemical formula that cannot be read.";
    InvisibleCharacter, "invisible-character", Error, "A character that cannot be seen.";
    LookAlikeLetter, "look-alike-letter", Error, "A letter of another alphabet that looks like a Latin one.";
    WrittenForm, "written-form", Hint, "A word of the language in another spelling or letter case.";
    LineTooLong, "line-too-long", Error, "A line longer than the program reads.";
    // ── Blocks, files and names ──
    MisplacedStatement, "misplaced-statement", Error, "A statement that belongs in another kind of block.";
    UnknownEdition, "unknown-edition", Error, "A file that asks for an edition of the language that the program does not know.";
    NamelessBlock, "nameless-block", Error, "Lines that belong to no block, because the header above them cannot be read.";
    SaidTwiceDifferently, "said-twice-differently", Error, "Two lines of a block that say different things where one is needed.";
    FileNotFound, "file-not-found", Error, "A file named by `use` that is not there.";
    FileNotReadable, "file-not-readable", Error, "A file that cannot be read as text.";
    PathOutsideRoot, "path-outside-root", Error, "A path that leads out of the library.";
    PathSpelling, "path-spelling", Error, "A path spelled otherwise than the file on disk.";
    UnknownName, "unknown-name", Error, "A name that nothing in scope bears.";
    AmbiguousName, "ambiguous-name", Error, "A name that several things in scope bear.";
    AmbiguousSalt, "ambiguous-salt", Error, "A name that fits several substances.";
    DefinedTwice, "defined-twice", Error, "Two definitions of one name in one place.";
    HidesTheBuiltIn, "hides-the-built-in", Warning, "A definition that takes a built-in name without saying so.";
    SpelledOtherwise, "spelled-otherwise", Hint, "A name spelled otherwise than where it is defined.";
    StrengthOrName, "strength-or-name", Error, "Words that are a strength and a name, or the name of a solution.";
    BadDefinition, "bad-definition", Error, "A definition from which nothing can be worked out.";
    StockFound, "stock-found", Hint, "The bottle or solution that stands for a strength and a name.";
    WhichBottle, "which-bottle", Error, "Several bottles or solutions that a strength and a name can mean.";
    Cycle, "cycle", Error, "Solutions that are made from each other.";
    IngredientHasNoValue, "ingredient-has-no-value", Error, "An ingredient whose own recipe cannot be worked out.";
    NotEvaluatedYet, "not-evaluated-yet", Hint, "A statement that is read but not yet worked out.";
    AcceptWithoutEffect, "accept-without-effect", Warning, "An acceptance that silences nothing.";
    // ── What a recipe says ──
    NoExtent, "no-extent", Error, "A recipe that does not say how much is made.";
    NoSolvent, "no-solvent", Error, "A recipe without a liquid.";
    NotAPair, "not-a-pair", Error, "Two things that do not differ by protons only.";
    PhSaidTwice, "ph-said-twice", Error, "A pair beside another pH target.";
    SaidTwice, "said-twice", Error, "The same substance twice by concentration.";
    AddsToTotal, "adds-to-total", Warning, "A line that adds to what another line states as a concentration.";
    HydrateNotStated, "hydrate-not-stated", Warning, "A mass of something that is sold in several hydrates.";
    MassFitsOtherHydrate, "mass-fits-other-hydrate", Hint, "A mass that is a round amount of another hydrate.";
    StrengthNotStated, "strength-not-stated", Error, "An acid, a base or ammonia by volume without strength or bottle.";
    PercentOfWhat, "percent-of-what", Error, "A volume fraction of a concentrated reagent that can be read in two ways.";
    AsWhat, "as-what", Warning, "A mass concentration of an ion that is reported in two ways.";
    MolalityMadeUpToVolume, "molality-made-up-to-volume", Hint, "A molality in a solution that is made up to a volume.";
    PurityOfASolution, "purity-of-a-solution", Error, "A purity on a line that takes a stock.";
    SameStockTwice, "same-stock-twice", Error, "Two lines that take different things out of one stock.";
    OutlivesItsParts, "outlives-its-parts", Warning, "A product kept longer than something in it.";
    FoldMismatch, "fold-mismatch", Warning, "A concentrate diluted by another factor than it says.";
    StrengthDensityDisagree, "strength-density-disagree", Warning, "A density that belongs to another strength.";
    AboutDiffers, "about-differs", Warning, "An author's estimate far from the computed amount.";
    TakesTooMuch, "takes-too-much", Warning, "A line that takes more than the author allows.";
    AlternativeDiffers, "alternative-differs", Warning, "An alternative that does not bring the same as the line above it.";
    FoundDiffers, "found-differs", Warning, "A found strength far from the computed one.";
    QuantityInStep, "quantity-in-step", Warning, "A quantity in the text of a step, where it is not evaluated.";
    LiquidCountedIn, "liquid-counted-in", Hint, "The liquid of the make-up, counted as present when the pH is set.";
    VolumeFromDensity, "volume-from-density", Hint, "A volume worked out from mass and density.";
    TemperatureAssumed, "temperature-assumed", Hint, "A temperature that nothing states.";
    TemperatureNotStated, "temperature-not-stated", Warning, "A pH that depends on a temperature that nothing states.";
    // ── What a recipe gives ──
    ExpectationFails, "expectation-fails", Error, "An expectation that does not hold.";
    ConductivityTemperatureMissing, "conductivity-temperature-missing", Error, "A conductivity without a temperature.";
    ExpectationWithoutValue, "expectation-without-value", Warning, "An expectation that cannot be judged.";
    TargetOutOfReach, "target-out-of-reach", Error, "A target that no amount can reach.";
    TargetAlreadyPassed, "target-already-passed", Error, "A target that is passed before anything is added.";
    WrongWayTitrant, "wrong-way-titrant", Error, "A titrant that moves the pH away from the target.";
    Overfull, "overfull", Error, "More goes in than fits under the mark.";
    AddedAfterVolume, "added-after-volume", Warning, "An addition after the solution was made up.";
    WeakBuffering, "weak-buffering", Warning, "A pH that little holds in place.";
    MovesAfterSetting, "moves-after-setting", Warning, "A pH that later lines move away from where it was set.";
    SetInTooLittle, "set-in-too-little", Warning, "A pH set in too little of the liquid.";
    TemperatureShift, "temperature-shift", Warning, "A pH that moves between making and use.";
    DilutionShift, "dilution-shift", Warning, "A pH that moves when a concentrate is diluted.";
    SaltShift, "salt-shift", Warning, "A pH that moves when salt is added.";
    SteepTarget, "steep-target", Warning, "An expected free ion that hangs on a hundredth of one line.";
    MetalBound, "metal-bound", Warning, "A metal that a chelator in excess binds.";
    DoesNotDissolve, "does-not-dissolve", Warning, "A solid of which not all dissolves.";
    MayPrecipitate, "may-precipitate", Warning, "A solution that is saturated with a solid that forms.";
    PrecipitatesInTransit, "precipitates-in-transit", Warning, "A beaker that is saturated on the way to a clear solution.";
    MetalHydrolyses, "metal-hydrolyses", Warning, "A metal that falls out as its hydroxide.";
    CrystallisesInStore, "crystallises-in-store", Warning, "A solution that is clear where it is made and not where it is kept.";
    FreezeShift, "freeze-shift", Warning, "A buffer whose pH moves on freezing.";
    TakesUpCarbonDioxide, "takes-up-carbon-dioxide", Warning, "An open solution whose pH falls as it takes up carbon dioxide.";
    GasEscapes, "gas-escapes", Warning, "An open solution that loses a gas.";
    NotAtGasEquilibrium, "not-at-gas-equilibrium", Warning, "A hydrogen carbonate solution whose gas is not stated.";
    SetUnderAnotherGas, "set-under-another-gas", Warning, "A pH that was set under another gas than that of use.";
    OutsideModelRange, "outside-model-range", Warning, "A solution beyond the range of the model.";
    NoSolutionFound, "no-solution-found", Error, "Equations for which the solver found no answer.";
    // ── What can hurt, react or not keep ──
    DangerousTogether, "dangerous-together", Error, "Two things that must not meet in one vessel.";
    ToxicGasFromAcid, "toxic-gas-from-acid", Error, "A toxic gas that this pH sets free.";
    AcidBeforeWater, "acid-before-water", Error, "Water that runs into a concentrated acid or lye.";
    HotWhenMadeUp, "hot-when-made-up", Warning, "A solution that is far from room temperature when it is made up to the mark.";
    DecomposesInAcid, "decomposes-in-acid", Warning, "Something that falls apart at this pH.";
    DoesNotKeep, "does-not-keep", Warning, "Something that does not last as long as the solution is kept.";
    ReactsTogether, "reacts-together", Warning, "Two things that use each other up.";
    RedoxNotComputed, "redox-not-computed", Hint, "An oxidiser and a reducer, whose reaction is not worked out.";
    UnmodelledMatters, "unmodelled-matters", Warning, "A solute without formula, in an amount that can matter.";
    BileSaltGels, "bile-salt-gels", Warning, "A bile salt that gels or falls out.";
    SaltsOutInOrganic, "salts-out-in-organic", Warning, "A salt that falls out of this much organic solvent.";
    PhSetInOrganic, "ph-set-in-organic", Warning, "A pH that is set with organic solvent in the beaker.";
    VolumeContracts, "volume-contracts", Hint, "Liquids whose volumes do not add up.";
    LightSensitive, "light-sensitive", Warning, "Something that light destroys, kept where light reaches it.";
    AttacksGlass, "attacks-glass", Warning, "A solution that attacks the glass it is kept in.";
}

impl Code {
    /// The code of this name.
    pub fn from_name(name: &str) -> Option<Code> {
        Code::ALL.iter().copied().find(|code| code.name() == name)
    }
}
