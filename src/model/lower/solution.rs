//! Solutions and bottles: from statements to a recipe.

use std::sync::Arc;

use super::lines::{acceptance, addition, atmosphere, expectation, make_up, pair, part, series_values, storage};
use super::quantities::{amount, base_value, half_width, stated};
use super::{Lowering, defined_name, reference, statement_span, statements};
use crate::finding::{Anchor, Code, Finding, Fix};
use crate::model::block::BlockRole;
use crate::model::*;
use crate::syntax::tree::{self, Amounts, BlockKind, Line, Slot, Statement};
use crate::text::Span;
use crate::units::Dimension;

/// The blocks that define something others can name.
const DEFINING: &[BlockKind] = {
    use BlockKind::*;
    &[Substance, Bottle, Ion, Solid, Danger, Group, Solution]
};

/// Where a statement belongs, when that is not in a block of this role.
pub(super) fn home_of(statement: &Statement, role: &BlockRole) -> Option<&'static str> {
    use Statement as S;
    let BlockRole::Defines(kind) = role else {
        let in_head = matches!(statement, S::Use(_) | S::Language(_) | S::Header(_) | S::Note(_));
        return (!in_head).then_some("a block");
    };
    let (homes, words): (&[BlockKind], _) = match statement {
        S::Use(_) | S::Language(_) => (&[], "the head of the file"),
        S::Header(_) | S::Note(_) | S::Source(_) => return None,
        S::Ingredient(_) => (&[BlockKind::Solution, BlockKind::Bottle], "a solution or a bottle"),
        S::Density(_) => (&[BlockKind::Bottle, BlockKind::Substance], "a bottle or a substance"),
        S::Hazard(_) => (&[BlockKind::Bottle, BlockKind::Substance], "a bottle or a substance"),
        S::Supplier(_) | S::Expires(_) | S::Activity(_) => (&[BlockKind::Bottle], "a bottle"),
        S::StoredAt(_) => (&[BlockKind::Solution, BlockKind::Bottle], "a solution or a bottle"),
        S::Accept(_) | S::Document(_) => (&[BlockKind::Solution, BlockKind::Bottle], "a solution or a bottle"),
        S::Pair(_) | S::QuantumSatis(_) | S::All(_) | S::Or(_) | S::Makes(_) | S::CoolTo(_) | S::WarmTo(_)
        | S::DriveOff(_) | S::Filter | S::Wait(_) | S::BeforeUse | S::AfterAutoclaving | S::MadeAt(_)
        | S::UsedAt(_) | S::ReadyAfter(_) | S::UseWithin(_) | S::Sealed | S::Open | S::Under(_) | S::In(_)
        | S::Like(_) | S::Without(_) | S::Concentrate(_) | S::Expect(_) | S::StandardiseAgainst(_) | S::Found(_)
        | S::Step(_) | S::Record(_) => (&[BlockKind::Solution], "a solution"),
        S::Also(_) | S::InsteadOfTheBuiltIn => (DEFINING, "a substance, bottle, ion, solid, danger or group"),
        S::Cas(_) => (&[BlockKind::Substance, BlockKind::Bottle], "a substance"),
        S::Formula(_) => (&[BlockKind::Substance, BlockKind::Ion, BlockKind::Solid], "a substance, an ion or a solid"),
        S::MolarMass(_) => (&[BlockKind::Substance, BlockKind::Ion], "a substance or an ion"),
        S::Gives(_) => (&[BlockKind::Substance, BlockKind::Solid], "a substance or a solid"),
        S::MolarVolume(_) => (&[BlockKind::Ion, BlockKind::Substance], "an ion or a substance"),
        S::Form(_) | S::Aqueous(_) | S::Solubility(_) | S::KeepAwayFrom(_) | S::HeatOfSolution(_) | S::Inert | S::LogKh(_) => {
            (&[BlockKind::Substance], "a substance")
        }
        S::Charge(_) | S::Pka(_) | S::ComplexWith(_) | S::InteractionWith(_) | S::MolarConductivity(_) => {
            (&[BlockKind::Ion], "an ion")
        }
        S::LogKsp(_) | S::Forms(_) => (&[BlockKind::Solid], "a solid"),
        S::With(_) | S::While(_) | S::EvenInPassing | S::Keeps(_) | S::Raises(_) | S::Because(_) | S::Advice(_) => {
            (&[BlockKind::Danger], "a danger")
        }
        S::Holds(_) => (&[BlockKind::Group], "a group"),
        S::Room(_) | S::Balance(_) | S::Ware(_) | S::Meter(_) => (&[BlockKind::Lab], "a lab"),
    };
    (!homes.contains(kind)).then_some(words)
}

/// How far the values of a block depend on a statement that cannot be read.
fn carries_values(statement: &Statement) -> bool {
    use Statement as S;
    !matches!(
        statement,
        S::Expect(_) | S::Accept(_) | S::Step(_) | S::Record(_) | S::Note(_) | S::Document(_) | S::Source(_)
            | S::Supplier(_) | S::Expires(_) | S::StoredAt(_) | S::UsedAt(_) | S::ReadyAfter(_) | S::UseWithin(_)
            | S::Hazard(_) | S::Use(_)
    )
}

impl Lowering {
    /// The recipe that the lines of a solution or a bottle say.
    pub(super) fn recipe(&mut self, kind: BlockKind, lines: &[Arc<Line>]) -> Recipe {
        let mut recipe = Recipe { sound: true, members: 1, ..Recipe::default() };
        for (index, line, statement) in statements(lines) {
            let understood = self.is_one_amount(kind, index, line, statement) && self.statement(&mut recipe, index, line, statement);
            if !understood && carries_values(statement) {
                recipe.sound = false;
            }
        }
        // Junk inside a block may have been an ingredient; without it no value can be stood behind.
        if lines.iter().any(|line| matches!(line.content, tree::Content::Junk(_))) {
            recipe.sound = false;
        }
        self.series(&mut recipe);
        recipe
    }

    /// A bottle's label may give a range; what goes into a solution is one amount.
    fn is_one_amount(&mut self, kind: BlockKind, index: usize, line: &Line, statement: &Statement) -> bool {
        let (Statement::Ingredient(given) | Statement::Or(given)) = statement else { return true };
        let Some(Amounts::Range(from, to)) = given.amounts.given().filter(|_| kind == BlockKind::Solution) else { return true };
        let at = Anchor::new(index, from.span.to(to.span));
        let (low, high) = (to.unit.from_base(amount(from).value), to.unit.from_base(amount(to).value));
        let digits = |value: f64| crate::units::format::plain(value);
        let middle = format!("{} {}", digits(0.5 * (low + high)), to.unit.symbol());
        let half = format!("{} {}", digits(0.5 * (high - low)), to.unit.symbol());
        let end = line.text.trim_end_matches(['\n', '\r']);
        let end = line.tokens.iter().find(|token| token.kind == tree::TokenKind::Comment).map_or(end, |comment| {
            end.get(..comment.span.start).unwrap_or(end)
        });
        let end = Anchor::new(index, Span::empty(end.trim_end().len()));
        self.findings.push(
            Finding::new(Code::BadNumber, at, "A range does not say how much goes in.")
                .help("Write the amount that is aimed at, and the range as its limit with ±.")
                .fix(Fix::replace(format!("Write {middle} … ± {half}"), at, middle).with(end, format!(", ± {half}"))),
        );
        false
    }

    /// Takes one statement over; false where a part that counts is missing or cannot be read.
    fn statement(&mut self, recipe: &mut Recipe, index: usize, line: &Line, statement: &Statement) -> bool {
        let at = Anchor::new(index, statement_span(line));
        if recipe.series.is_empty() {
            recipe.series = series_values(line, statement).unwrap_or_default();
        }
        let push = |recipe: &mut Recipe, action| recipe.entries.push(Entry { at, action });
        match statement {
            Statement::Ingredient(given) => match addition(index, given) {
                Some(addition) => push(recipe, Action::Add(addition)),
                None => return false,
            },
            Statement::Or(given) => match addition(index, given) {
                Some(addition) => push(recipe, Action::Alternative(addition)),
                None => return false,
            },
            Statement::Pair(given) => match pair(index, given) {
                Some(pair) => push(recipe, Action::Pair(pair)),
                None => return false,
            },
            Statement::QuantumSatis(given) => match make_up(index, given) {
                Some(make_up) => push(recipe, Action::MakeUp(make_up)),
                None => return false,
            },
            Statement::All(name) => match name.given() {
                Some(name) => push(recipe, Action::AddAll(reference(index, name))),
                None => return false,
            },
            Statement::CoolTo(slot) | Statement::WarmTo(slot) => match base_value(slot, Dimension::Temperature) {
                Some(kelvin) => push(recipe, Action::BringTo(kelvin)),
                None => return false,
            },
            Statement::DriveOff(name) => match name.given() {
                Some(name) => push(recipe, Action::DriveOff(reference(index, name))),
                None => return false,
            },
            Statement::Filter => push(recipe, Action::Filter),
            Statement::Wait(slot) => match base_value(slot, Dimension::Time) {
                Some(seconds) => push(recipe, Action::Wait(seconds)),
                None => return false,
            },
            Statement::BeforeUse => push(recipe, Action::Divider(Part::BeforeUse)),
            Statement::AfterAutoclaving => push(recipe, Action::Divider(Part::AfterAutoclaving)),
            Statement::Found(found) => match (found.strength.given(), found.name.given()) {
                (Some(strength), Some(name)) => {
                    let uncertainty = found.tolerance.as_ref().map(|tolerance| {
                        let strength = strength.unit.to_base(strength.number.value);
                        half_width(tolerance, found.strength.given().map(|given| given.unit)).about(strength)
                    });
                    let (what, strength) = (reference(index, name), amount(strength));
                    push(recipe, Action::Found { what, strength, uncertainty });
                }
                _ => return false,
            },
            Statement::Makes(slot) => match slot.given() {
                Some(quantity) => {
                    recipe.makes = Some(Stated { value: amount(quantity), at });
                }
                None => return false,
            },
            Statement::MadeAt(slot) => match stated(index, slot, Dimension::Temperature) {
                Some(kelvin) => self.once(&mut recipe.made_at, kelvin, "made at", &mut recipe.sound),
                None => return false,
            },
            Statement::UsedAt(used) => return self.used_at(recipe, index, at, used),
            Statement::StoredAt(stored) => match storage(at, part(recipe), stored) {
                Some(storage) => recipe.storage.push(storage),
                None => return false,
            },
            Statement::ReadyAfter(slot) => match stated(index, slot, Dimension::Time) {
                Some(seconds) => recipe.ready_after = Some(seconds),
                None => return false,
            },
            Statement::UseWithin(slot) => match stated(index, slot, Dimension::Time) {
                Some(seconds) => recipe.use_within = Some(seconds),
                None => return false,
            },
            Statement::Sealed => self.atmosphere(recipe, Stated { value: Atmosphere::Sealed, at }, false),
            Statement::Open => self.atmosphere(recipe, Stated { value: Atmosphere::Open, at }, false),
            Statement::Under(slot) => match slot.given().and_then(|gas| atmosphere(index, gas)) {
                Some(value) => self.atmosphere(recipe, Stated { value, at }, false),
                None => return false,
            },
            Statement::In(name) => match name.given() {
                Some(name) => recipe.lab = Some(reference(index, name)),
                None => return false,
            },
            Statement::Like(name) => match name.given() {
                Some(name) => recipe.like = Some(reference(index, name)),
                None => return false,
            },
            Statement::Without(name) => match name.given() {
                Some(name) => recipe.without.push(reference(index, name)),
                None => return false,
            },
            Statement::Concentrate(fold) => match fold.given() {
                Some(fold) => recipe.concentrate = Some(Stated { value: fold.value, at }),
                None => return false,
            },
            Statement::Expect(expect) => match expectation(index, at, expect) {
                Some(expectation) => recipe.expectations.push(expectation),
                None => return false,
            },
            Statement::StandardiseAgainst(name) => {
                recipe.standardised_against = name.given().map(|name| reference(index, name));
            }
            Statement::Accept(given) => match acceptance(index, at, given) {
                Some(acceptance) => recipe.accepts.push(acceptance),
                None => return false,
            },
            Statement::Step(text) => {
                if let Some(text) = text.given() {
                    let at = Anchor::new(index, text.span);
                    recipe.steps.push(Stated { value: text.text.clone(), at });
                }
            }
            Statement::Record(text) => {
                if let Some(text) = text.given() {
                    let at = Anchor::new(index, text.span);
                    recipe.records.push(Stated { value: text.text.clone(), at });
                }
            }
            Statement::Document(document) => {
                let text = |slot: &Option<Slot<tree::Text>>| {
                    slot.as_ref().and_then(Slot::given).map(|text| text.text.clone())
                };
                if let Some(code) = document.code.given() {
                    let value = DocumentFields {
                        code: code.text.clone(),
                        revision: text(&document.revision),
                        effective: text(&document.effective),
                    };
                    recipe.document = Some(Stated { value, at });
                }
            }
            Statement::Density(density) => match stated(index, &density.value, Dimension::MassConcentration) {
                Some(density) => self.once(&mut recipe.density, density, "density", &mut recipe.sound),
                None => return false,
            },
            Statement::Activity(slot) => match stated(index, slot, Dimension::EnzymeActivityConcentration) {
                Some(activity) => recipe.activity = Some(activity),
                None => return false,
            },
            Statement::Hazard(codes) => recipe.hazards.extend(codes.iter().map(|code| code.text.clone())),
            Statement::Also(names) => self.also.extend(names.iter().map(defined_name)),
            _ => {}
        }
        true
    }

    /// Takes a condition that can be stated once; a second, different one leaves the block without values.
    fn once(&mut self, slot: &mut Option<Stated<f64>>, new: Stated<f64>, words: &str, sound: &mut bool) {
        match slot {
            Some(old) if (old.value - new.value).abs() > 1e-9 => {
                *sound = false;
                for (one, other) in [(old.at, new.at), (new.at, old.at)] {
                    self.findings.push(
                        Finding::new(
                            Code::SaidTwiceDifferently,
                            one,
                            format!("`{words}` is stated twice with different values."),
                        )
                        .help("Keep the one that holds.")
                        .related(other, "the other one"),
                    );
                }
            }
            Some(_) => {}
            None => *slot = Some(new),
        }
    }

    fn atmosphere(&mut self, recipe: &mut Recipe, new: Stated<Atmosphere>, in_use_only: bool) {
        recipe.gas_in_use_only = in_use_only && (recipe.atmosphere.is_none() || recipe.gas_in_use_only);
        match &recipe.atmosphere {
            Some(old) if old.value != new.value => {
                recipe.sound = false;
                let (old, new) = (old.at, new.at);
                for (one, other) in [(old, new), (new, old)] {
                    self.findings.push(
                        Finding::new(
                            Code::SaidTwiceDifferently,
                            one,
                            "What stands above the liquid is stated twice and differently.",
                        )
                        .help("Keep the line that holds.")
                        .related(other, "the other one"),
                    );
                }
            }
            Some(_) => {}
            None => recipe.atmosphere = Some(new),
        }
    }

    fn used_at(&mut self, recipe: &mut Recipe, index: usize, at: Anchor, used: &tree::UsedAt) -> bool {
        let mut kelvins = Vec::new();
        for slot in &used.temperatures {
            match stated(index, slot, Dimension::Temperature) {
                Some(kelvin) => kelvins.push(kelvin),
                None => return false,
            }
        }
        if let (true, [from, to]) = (used.is_range, kelvins.as_slice()) {
            // Both ends and every 5 °C between.
            let mut between = Vec::new();
            let mut kelvin = from.value;
            while kelvin < to.value - 1e-6 && between.len() < 40 {
                between.push(Stated { value: kelvin, at: from.at });
                kelvin += 5.0;
            }
            between.push(*to);
            kelvins = between;
        }
        for kelvin in kelvins {
            if !recipe.used_at.iter().any(|old| (old.value - kelvin.value).abs() < 1e-9) {
                recipe.used_at.push(kelvin);
            }
        }
        match &used.under {
            None => true,
            Some(slot) => match slot.given().and_then(|gas| atmosphere(index, gas)) {
                Some(value) => {
                    self.atmosphere(recipe, Stated { value, at }, true);
                    true
                }
                None => false,
            },
        }
    }

    /// Finds how many members the solution has; lists of different lengths cannot go along in step.
    fn series(&mut self, recipe: &mut Recipe) {
        let mut first: Option<(usize, Anchor)> = None;
        for entry in &recipe.entries {
            let length = match &entry.action {
                Action::Add(addition) | Action::Alternative(addition) => addition.amounts.len(),
                Action::MakeUp(make_up) => make_up.goals.len(),
                Action::Pair(pair) => pair.goals.len(),
                _ => 1,
            };
            match first {
                _ if length <= 1 => {}
                None => {
                    first = Some((length, entry.at));
                    recipe.members = length;
                }
                Some((expected, at)) if expected != length => {
                    recipe.sound = false;
                    self.findings.push(
                        Finding::new(
                            Code::SaidTwiceDifferently,
                            entry.at,
                            format!("This list has {length} values, the other {expected}."),
                        )
                        .help("Lists of one series go along in step; give them as many values.")
                        .related(at, "the other list"),
                    );
                }
                Some(_) => {}
            }
        }
    }
}
