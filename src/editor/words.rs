//! The words of the language with one sentence each: the one table behind hovers over words and their completion.

use crate::syntax::tree::{BlockKind, FormsHow, Slot, Statement};

/// Where a word stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum WordKind {
    /// It opens a block.
    Header,
    /// It opens a statement.
    Statement,
    /// It stands after a comma on a line by which something goes in.
    Qualifier,
    /// It is a property that is expected or sought.
    Property,
    /// It joins the parts of a statement.
    Joint,
}

/// A word of the language.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Word {
    /// As it is written.
    pub word: &'static str,
    /// Where it stands.
    pub kind: WordKind,
    /// In which blocks its statement can stand; empty for words that stand anywhere, or at the head of the file.
    pub blocks: &'static [BlockKind],
    /// How it is written with what follows.
    pub form: &'static str,
    /// What it says, in a sentence.
    pub help: &'static str,
}

const SOLUTION: &[BlockKind] = &[BlockKind::Solution];
const RECIPES: &[BlockKind] = &[BlockKind::Solution, BlockKind::Bottle];
const BOTTLE: &[BlockKind] = &[BlockKind::Bottle];
const MATTER: &[BlockKind] = &[BlockKind::Bottle, BlockKind::Substance];
const SUBSTANCE: &[BlockKind] = &[BlockKind::Substance];
const SUBSTANCE_ION: &[BlockKind] = &[BlockKind::Substance, BlockKind::Ion];
const SUBSTANCE_SOLID: &[BlockKind] = &[BlockKind::Substance, BlockKind::Solid];
const CHEMICAL: &[BlockKind] = &[BlockKind::Substance, BlockKind::Ion, BlockKind::Solid];
const NAMED: &[BlockKind] = &[BlockKind::Substance, BlockKind::Bottle, BlockKind::Ion, BlockKind::Solid];
const ION: &[BlockKind] = &[BlockKind::Ion];
const SOLID: &[BlockKind] = &[BlockKind::Solid];
const DANGER: &[BlockKind] = &[BlockKind::Danger];
const GROUP: &[BlockKind] = &[BlockKind::Group];
const LAB: &[BlockKind] = &[BlockKind::Lab];

const fn header(word: &'static str, form: &'static str, help: &'static str) -> Word {
    Word { word, kind: WordKind::Header, blocks: &[], form, help }
}

const fn statement(word: &'static str, blocks: &'static [BlockKind], form: &'static str, help: &'static str) -> Word {
    Word { word, kind: WordKind::Statement, blocks, form, help }
}

const fn qualifier(word: &'static str, form: &'static str, help: &'static str) -> Word {
    Word { word, kind: WordKind::Qualifier, blocks: RECIPES, form, help }
}

const fn property(word: &'static str, form: &'static str, help: &'static str) -> Word {
    Word { word, kind: WordKind::Property, blocks: &[], form, help }
}

const fn joint(word: &'static str, form: &'static str, help: &'static str) -> Word {
    Word { word, kind: WordKind::Joint, blocks: &[], form, help }
}

/// Every word, in the order in which completion lists those that can stand at a place.
pub const WORDS: &[Word] = &[
    // ── file ──
    header("solution", "solution NAME", "Opens the recipe of a solution."),
    header("bottle", "bottle NAME", "Opens the description of a bottle on the shelf, as bought."),
    header("substance", "substance NAME", "Opens the description of a pure substance."),
    header("ion", "ion NAME", "Opens the description of an ion in water, with its constants."),
    header("solid", "solid NAME", "Opens the description of a solid phase that can precipitate."),
    header("danger", "danger NAME", "Opens the description of what must not come together, or does not keep."),
    header("group", "group NAME", "Opens a list of things that behave alike, for dangers to name."),
    header("lab", "lab NAME", "Opens the description of a lab: its room temperature, balances, ware and meters."),
    statement("use", &[], "use \"PATH\"", "Makes the names of another file known in this one; the path is read from this file's folder."),
    statement("language", &[], "language 1", "Says for which edition of the language the file is written."),
    // ── what goes into a solution ──
    statement("q.s.", SOLUTION, "q.s. NAME to TARGET", "As much as is enough: adds this until the target is met, a volume, a mass, a pH or another property."),
    statement("about", SOLUTION, "about QUANTITY NAME", "The amount needs no measuring."),
    statement("all", SOLUTION, "all NAME", "The whole batch of that solution goes in."),
    statement("or", SOLUTION, "or QUANTITY NAME", "An alternative to the line above that must bring the same."),
    statement("makes", SOLUTION, "makes QUANTITY", "How much is made, where nothing is made up to a volume or a mass."),
    // ── conditions ──
    statement("made at", SOLUTION, "made at TEMPERATURE", "The temperature at which it is made; volumes and concentrations refer to it."),
    statement("used at", SOLUTION, "used at TEMPERATURE", "Where it must hold: expectations are judged there too."),
    // ── what must hold ──
    statement("expect", SOLUTION, "expect PROPERTY RANGE [as FORMULA] [at TEMPERATURE] [diluted N-fold]", "What must hold; it is checked whenever the recipe changes."),
    statement("accept", RECIPES, "accept CODE [on NAME] because REASON", "A warning or hint that the author has judged; it is no longer reported here."),
    // ── texts ──
    statement("step", SOLUTION, "step TEXT", "An instruction in its place; it is printed and never evaluated."),
    statement("note", &[], "note TEXT", "A remark; it is printed and never evaluated."),
    statement("record", SOLUTION, "record TEXT", "A value to be written down when the solution is made."),
    statement("document", RECIPES, "document CODE, revision N[, effective DATE]", "The recipe's identity for the head of the sheet."),
    // ── keeping ──
    statement("stored at", RECIPES, "stored at T [to T] [for DURATION] [, in MATERIAL] [, in the dark]", "How and how long it is kept."),
    statement("stored below", RECIPES, "stored below T [for DURATION]", "The temperature under which it is kept."),
    statement("ready after", SOLUTION, "ready after DURATION", "How long it must stand before it is used."),
    statement("use within", SOLUTION, "use within DURATION", "How long it may be used once it is made."),
    statement("sealed", SOLUTION, "sealed", "Closed: nothing is exchanged with the air. This is what holds where nothing is said."),
    statement("open", SOLUTION, "open", "Open to the air: where that moves the pH is a finding."),
    statement("under", SOLUTION, "under air | under 5 % CO2[, moist]", "In equilibrium with this gas."),
    statement("in", SOLUTION, "in LAB", "In which lab it is made, where several are in scope."),
    // ── what changes the beaker ──
    statement("cool to", SOLUTION, "cool to TEMPERATURE", "The beaker is brought to this temperature, at this place."),
    statement("warm to", SOLUTION, "warm to TEMPERATURE", "The beaker is brought to this temperature, at this place."),
    statement("drive off", SOLUTION, "drive off NAME", "A volatile leaves the beaker, at this place."),
    statement("filter", SOLUTION, "filter", "Solids are filtered off, at this place."),
    statement("wait", SOLUTION, "wait DURATION", "Time passes, at this place."),
    statement("before use", SOLUTION, "before use", "What stands below is added just before use, to what stands above."),
    statement("after autoclaving", SOLUTION, "after autoclaving", "What stands below is added after autoclaving, to what stands above."),
    // ── how it is made up from others ──
    statement("like", SOLUTION, "like NAME", "Takes over how that solution is made and kept; a line here with the same name replaces its line."),
    statement("without", SOLUTION, "without NAME", "Leaves out a line that `like` brought."),
    statement("concentrate", SOLUTION, "concentrate 10x", "How many times stronger than used it is made."),
    statement("standardise against", SOLUTION, "standardise against NAME", "The titrant's strength is found by titrating this."),
    statement("found", SOLUTION, "found QUANTITY NAME [± QUANTITY]", "The strength that was found; it replaces the computed one wherever the titrant is used."),
    // ── substances, bottles, ions, solids ──
    statement("density", MATTER, "density QUANTITY [at T]", "Its density."),
    statement("supplier", BOTTLE, "supplier TEXT", "Where the bottle comes from."),
    statement("expires", BOTTLE, "expires DATE", "Until when the bottle may be used."),
    statement("activity", BOTTLE, "activity QUANTITY", "Enzyme activity of the bottle's content."),
    statement("formula", CHEMICAL, "formula FORMULA", "Its chemical formula; the molar mass follows from it."),
    statement("charge", ION, "charge N", "Charge of the most deprotonated form."),
    statement("pKa", ION, "pKa VALUE [± U], of NAME[, enthalpy H][, source TEXT]", "An acid's ionisation constant at 25 °C and zero ionic strength, with the name of the acid."),
    statement("complex with", ION, "complex with [N] NAME, log K VALUE[, …]", "A complex that the ion forms, with its overall formation constant."),
    statement("interaction with", ION, "interaction with NAME, VALUE", "Specific interaction coefficient ε of the ion with one of opposite charge, kg/mol."),
    statement("molar conductivity", ION, "molar conductivity VALUE[, of NAME]", "Limiting molar conductivity at 25 °C, per mole of ions."),
    statement("molar volume", SUBSTANCE_ION, "molar volume VALUE[, of NAME]", "Partial molar volume in water at infinite dilution."),
    statement("molar mass", SUBSTANCE_ION, "molar mass VALUE", "Molar mass, where no formula gives it."),
    statement("also", NAMED, "also NAME, NAME", "Other names of the same thing."),
    statement("CAS", MATTER, "CAS NUMBER", "CAS registry number."),
    statement("gives", SUBSTANCE_SOLID, "gives [N] NAME, [N] NAME", "What one formula unit gives in water; the rest of the formula is water."),
    statement("form", SUBSTANCE, "form solid | liquid | gas", "What it is as bought."),
    statement("aqueous", SUBSTANCE, "aqueous STRENGTH, density QUANTITY at T", "Density of its solution in water at that strength."),
    statement("solubility", SUBSTANCE, "solubility QUANTITY at T", "How much dissolves in water."),
    statement("hazard", MATTER, "hazard H314, H290", "GHS hazard statements by code. The safety data sheet decides."),
    statement("keep away from", SUBSTANCE, "keep away from NAME, NAME", "What it must not meet."),
    statement("inert", SUBSTANCE, "inert", "It has mass and volume, and no effect on pH that the program works out."),
    statement("instead of the built-in", NAMED, "instead of the built-in", "Says that this definition is meant to replace the one of the built-in library."),
    statement("log Ksp", SOLID, "log Ksp VALUE", "Solubility product of what the solid gives."),
    statement("forms slowly", SOLID, "forms slowly", "It does not form while a solution is kept, so that no finding warns of it."),
    statement("forms at once", SOLID, "forms at once", "It is certain to form where the solution is well saturated."),
    statement("forms in passing", SOLID, "forms in passing", "It comes and goes on the way to a less soluble solid, so that the other one is judged."),
    statement("forms on freezing", SOLID, "forms on freezing", "It crystallises first when a solution that holds its ions freezes, and moves the pH."),
    statement("log KH", SUBSTANCE, "log KH VALUE[, of NAME][, enthalpy H]", "Henry's constant: activity of what it is in water over its partial pressure in bar."),
    statement("heat of solution", SUBSTANCE, "heat of solution VALUE [at STRENGTH]", "Enthalpy of dissolving a mole of it; negative where it warms."),
    statement("source", &[BlockKind::Bottle, BlockKind::Substance, BlockKind::Ion, BlockKind::Solid, BlockKind::Danger, BlockKind::Group], "source TEXT", "Where the facts come from."),
    // ── dangers and groups ──
    statement("with", DANGER, "with NAME, NAME, at least QUANTITY", "One side of a danger; any of the names will do."),
    statement("while", DANGER, "while PROPERTY RANGE", "What must hold in the vessel for the danger."),
    statement("even in passing", DANGER, "even in passing", "It counts after every line, though a later line ends it."),
    statement("keeps", DANGER, "keeps DURATION at T", "How long it keeps."),
    statement("raises", DANGER, "raises CODE", "The finding that is raised."),
    statement("because", DANGER, "because TEXT", "What happens; the finding says so."),
    statement("advice", DANGER, "advice TEXT", "What to do; the finding says so."),
    statement("holds", GROUP, "holds NAME, NAME", "What belongs to the group."),
    // ── labs ──
    statement("room", LAB, "room T to T", "The room's temperature; its middle is taken where a recipe does not say where it is made."),
    statement("balance", LAB, "balance readability QUANTITY, QUANTITY to QUANTITY", "A balance: its readability, and from where to where it weighs."),
    statement("flask", LAB, "flask VOLUME ± TOLERANCE, …", "Volumetric flasks."),
    statement("cylinder", LAB, "cylinder VOLUME ± TOLERANCE, …", "Measuring cylinders."),
    statement("pipette", LAB, "pipette VOLUME [to VOLUME] ± TOLERANCE, …", "Pipettes."),
    statement("burette", LAB, "burette VOLUME ± TOLERANCE", "Burettes."),
    statement("vessel", LAB, "vessel VOLUME to VOLUME", "Vessels in which batches are made."),
    statement("pH meter", LAB, "pH meter ± 0.02", "The pH meter's tolerance."),
    statement("conductivity meter", LAB, "conductivity meter ± 1 %, reference 25 °C, compensation 2 %/K", "The conductivity meter: tolerance, reference temperature, compensation."),
    statement("osmometer", LAB, "osmometer ± QUANTITY", "The osmometer's tolerance."),
    // ── qualifiers ──
    qualifier("±", "± QUANTITY", "A limit on the amount."),
    qualifier("purity", "purity P %", "How much of what is weighed is the substance; more is weighed for it."),
    qualifier("water", "water W %", "Loss on drying: how much of what is weighed is water."),
    qualifier("dried at", "dried at T for DURATION", "How it is dried before it is weighed."),
    qualifier("density", "density QUANTITY", "Density of the liquid that is measured out."),
    qualifier("from", "from NAME", "The solution or bottle that it is taken from; the volume is worked out."),
    qualifier("about", "about QUANTITY", "The author's estimate of what it takes."),
    qualifier("at most", "at most QUANTITY", "More than this must not be needed."),
    qualifier("by weight", "by weight", "The liquid is weighed rather than measured out by volume."),
    qualifier("at", "at T", "At which temperature it is measured out."),
    qualifier("grade", "grade TEXT", "The grade that must be used; it is printed."),
    qualifier("lot", "lot TEXT", "The lot; it is printed."),
    // ── properties ──
    property("pH", "pH 7.00 ± 0.05", "Minus the logarithm of the activity of hydrogen ions, on the molality scale."),
    property("ionic strength", "ionic strength 150 mmol/L", "Half the sum of each ion's concentration times the square of its charge."),
    property("buffer capacity", "buffer capacity at least 8 mmol/L", "Strong base per litre that moves the pH by one, as a derivative."),
    property("osmolality", "osmolality 290 mosmol/kg", "Osmotic concentration, per kilogram of water."),
    property("conductivity", "conductivity 12 mS/cm at 25 °C", "Electrolytic conductivity, at a temperature or as the lab's meter shows it."),
    property("density", "density 1.00 to 1.02 g/mL", "Mass of the solution by its volume."),
    property("water activity", "water activity at most 0.95", "Activity of water; 1 for pure water."),
    property("alkalinity", "alkalinity 2.0 mmol/L (eq)", "Strong acid that brings it to pH 4.5, in mmol/L, mmol/L (eq), °dH or mg/L as CaCO3."),
    property("hardness", "hardness 8 °dH", "Calcium and magnesium in all forms, in mmol/L, mmol/L (eq), °dH or mg/L as CaCO3."),
    property("total", "total NAME RANGE [as FORMULA]", "All forms of a thing together."),
    property("free", "free NAME RANGE", "The forms made of a thing and hydrogen only, complexes left out."),
    property("saturation index of", "saturation index of SOLID RANGE", "Logarithm of ion activity product by solubility product; above 0 it can precipitate."),
    // ── joints ──
    joint("to", "to TARGET", "Introduces what must be reached, or the end of a range."),
    joint("at", "at T", "At which temperature."),
    joint("at least", "at least QUANTITY", "A lower limit."),
    joint("at most", "at most QUANTITY", "An upper limit."),
    joint("as", "as FORMULA", "Of what a mass concentration is: `50 mg/L as P` counts the phosphorus."),
    joint("of", "of NAME", "Read and kept; it changes nothing. After a constant it names the acid or form that the constant belongs to."),
    joint("or", "or NAME", "The other titrant; exactly one of the two is used."),
    joint("with", "with NAME", "With what it is diluted; water where nothing is said."),
    joint("for", "for DURATION", "How long."),
    joint("on", "on NAME", "Only for findings about this name."),
    joint("because", "because REASON", "Why the finding is accepted, for the next reviewer."),
    joint("diluted", "diluted N-fold [with NAME]", "After one volume is made up to N volumes."),
    joint("saturation", "saturation", "As much as dissolves."),
    joint("revision", "revision N", "The document's revision."),
    joint("effective", "effective DATE", "When the revision takes effect."),
    joint("below", "below T", "Under this temperature."),
    joint("in the dark", "in the dark", "Protected from light."),
    joint("in", "in MATERIAL", "In a container of this material."),
    joint("moist", "moist", "The gas is saturated with water."),
    joint("air", "air", "Air, with the carbon dioxide that it holds."),
    joint("readability", "readability QUANTITY", "The smallest step that the balance shows."),
    joint("class A", "class A", "Volumetric ware of class A tolerance."),
    joint("reference", "reference T", "Temperature to which conductivity is referred."),
    joint("compensation", "compensation P %", "Change of conductivity with temperature that the meter assumes, per kelvin."),
    joint("enthalpy", "enthalpy QUANTITY", "Enthalpy of the reaction; it gives the constant at other temperatures."),
    joint("heat capacity", "heat capacity QUANTITY", "Heat capacity of the reaction."),
    joint("log K", "log K VALUE", "Logarithm of the overall formation constant at 25 °C and zero ionic strength."),
    joint("at ionic strength", "at ionic strength QUANTITY", "The ionic strength at which the constant was measured."),
    joint("named", "named NAME", "What the complex is called."),
    joint("itself", "itself N", "How many of the block's own ion the complex holds."),
];

/// The words of a kind.
pub fn of_kind(kind: WordKind) -> impl Iterator<Item = &'static Word> {
    WORDS.iter().filter(move |word| word.kind == kind)
}

/// The word of this spelling in one of these kinds, the first kind first.
pub fn find(spelling: &str, kinds: &[WordKind]) -> Option<&'static Word> {
    let spelling = spelling.split_whitespace().collect::<Vec<_>>().join(" ");
    kinds.iter().find_map(|kind| of_kind(*kind).find(|word| word.word.eq_ignore_ascii_case(&spelling)))
}

/// The word that opens a statement; none for a line that opens with a quantity.
pub fn of_statement(statement: &Statement) -> Option<&'static Word> {
    use Statement as S;
    let spelling = match statement {
        S::Ingredient(line) if line.about => "about",
        S::Ingredient(_) | S::Pair(_) => return None,
        S::Language(_) => "language",
        S::Use(_) => "use",
        S::Header(header) => return find(super::describe::kind_word(header.kind), &[WordKind::Header]),
        S::QuantumSatis(_) => "q.s.",
        S::All(_) => "all",
        S::Or(_) => "or",
        S::Makes(_) => "makes",
        S::CoolTo(_) => "cool to",
        S::WarmTo(_) => "warm to",
        S::DriveOff(_) => "drive off",
        S::Filter => "filter",
        S::Wait(_) => "wait",
        S::BeforeUse => "before use",
        S::AfterAutoclaving => "after autoclaving",
        S::MadeAt(_) => "made at",
        S::UsedAt(_) => "used at",
        S::StoredAt(stored) if stored.below => "stored below",
        S::StoredAt(_) => "stored at",
        S::ReadyAfter(_) => "ready after",
        S::UseWithin(_) => "use within",
        S::Sealed => "sealed",
        S::Open => "open",
        S::Under(_) => "under",
        S::In(_) => "in",
        S::Like(_) => "like",
        S::Without(_) => "without",
        S::Concentrate(_) => "concentrate",
        S::Expect(_) => "expect",
        S::StandardiseAgainst(_) => "standardise against",
        S::Found(_) => "found",
        S::Accept(_) => "accept",
        S::Step(_) => "step",
        S::Record(_) => "record",
        S::Note(_) => "note",
        S::Document(_) => "document",
        S::Source(_) => "source",
        S::Supplier(_) => "supplier",
        S::Expires(_) => "expires",
        S::InsteadOfTheBuiltIn => "instead of the built-in",
        S::Also(_) => "also",
        S::Cas(_) => "CAS",
        S::Formula(_) => "formula",
        S::Charge(_) => "charge",
        S::MolarMass(_) => "molar mass",
        S::Gives(_) => "gives",
        S::Form(_) => "form",
        S::Density(_) => "density",
        S::Aqueous(_) => "aqueous",
        S::Solubility(_) => "solubility",
        S::Activity(_) => "activity",
        S::Hazard(_) => "hazard",
        S::KeepAwayFrom(_) => "keep away from",
        S::HeatOfSolution(_) => "heat of solution",
        S::Inert => "inert",
        S::With(_) => "with",
        S::While(_) => "while",
        S::EvenInPassing => "even in passing",
        S::Keeps(_) => "keeps",
        S::Raises(_) => "raises",
        S::Because(_) => "because",
        S::Advice(_) => "advice",
        S::Holds(_) => "holds",
        S::Pka(_) => "pKa",
        S::LogKsp(_) => "log Ksp",
        S::LogKh(_) => "log KH",
        S::Forms(Slot::Given(FormsHow::AtOnce)) => "forms at once",
        S::Forms(Slot::Given(FormsHow::OnFreezing)) => "forms on freezing",
        S::Forms(Slot::Given(FormsHow::InPassing)) => "forms in passing",
        S::Forms(_) => "forms slowly",
        S::ComplexWith(_) => "complex with",
        S::InteractionWith(_) => "interaction with",
        S::MolarConductivity(_) => "molar conductivity",
        S::MolarVolume(_) => "molar volume",
        S::Room(_) => "room",
        S::Balance(_) => "balance",
        S::Ware(line) => match line.kind {
            crate::syntax::tree::WareKind::Flask => "flask",
            crate::syntax::tree::WareKind::Cylinder => "cylinder",
            crate::syntax::tree::WareKind::Pipette => "pipette",
            crate::syntax::tree::WareKind::Burette => "burette",
            crate::syntax::tree::WareKind::Vessel => "vessel",
        },
        S::Meter(meter) => match meter.kind {
            crate::syntax::tree::MeterKind::Ph => "pH meter",
            crate::syntax::tree::MeterKind::Conductivity => "conductivity meter",
            crate::syntax::tree::MeterKind::Osmometer => "osmometer",
        },
    };
    find(spelling, &[WordKind::Statement])
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_word_stands_once_in_its_kind() {
        for (index, word) in WORDS.iter().enumerate() {
            let again = WORDS.iter().skip(index + 1).find(|other| other.kind == word.kind && other.word == word.word);
            assert_eq!(again, None);
            assert!(word.help.ends_with('.'), "{}", word.word);
        }
    }

    #[test]
    fn every_first_word_opens_a_statement_that_knows_it() {
        for word in of_kind(WordKind::Statement).chain(of_kind(WordKind::Header)) {
            let tree = crate::syntax::parse(&format!("{} \n", word.word));
            let content = &tree.lines.first().unwrap().line.content;
            match content {
                crate::syntax::tree::Content::Statement(statement) => {
                    assert_eq!(of_statement(statement).map(|found| found.word), Some(word.word), "{statement:?}");
                }
                other => panic!("{}: {other:?}", word.word),
            }
        }
    }
}
