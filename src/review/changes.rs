//! What came out differently for each solution: values, verdicts, findings.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use super::pairs::{Pair, block_at, body, renamed, words};
use super::replay::Share;
use super::values::{Measure, Renamed, Value, values};
use crate::evaluate::{Outcome, Verdict};
use crate::finding::Code;
use crate::model::{Block, Body, NameKey};
use crate::text::FileId;
use crate::units::format;
use crate::workspace::{Located, Snapshot};

/// Where a solution stands in one of the states.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Place {
    /// The file.
    pub file: FileId,
    /// Index of its block.
    pub block: usize,
    /// Which member of a series it is; 0 otherwise.
    pub member: usize,
    /// Its name, with the value in brackets in a series.
    pub name: String,
}

/// What became of a solution.
#[derive(Clone, Debug)]
pub struct Change {
    /// Where it was; none where it is new.
    pub old: Option<Place>,
    /// Where it is; none where it vanished.
    pub new: Option<Place>,
    /// Whether its own lines changed.
    pub is_edited: bool,
    /// The numbers that changed visibly, or that there were or are not; the most telling first.
    pub shifts: Vec<Shift>,
    /// How many numbers changed too little to show.
    pub smaller: usize,
    /// What became of expectations whose verdict changed.
    pub verdicts: Vec<VerdictChange>,
    /// Findings that came or went.
    pub findings: Vec<FindingChange>,
    /// Why it changed, from the edits that had an effect; empty where none was replayed.
    pub reasons: Vec<Reason>,
}

/// A number that changed.
#[derive(Clone, Debug)]
pub struct Shift {
    /// What it is.
    pub name: String,
    /// What it measures.
    pub measure: Measure,
    /// What it was.
    pub old: Option<f64>,
    /// What it is.
    pub new: Option<f64>,
    /// What each edit alone does to it.
    pub shares: Vec<Share>,
    /// What is left over: edits that act on each other, or cannot stand alone; none where no edit was replayed.
    pub remainder: Option<f64>,
}

/// An expectation whose verdict changed.
#[derive(Clone, Debug)]
pub struct VerdictChange {
    /// The expectation, as the property's words with temperature and dilution.
    pub name: String,
    /// What was told of it.
    pub old: Option<Judged>,
    /// What is told of it.
    pub new: Option<Judged>,
}

/// What was judged.
#[derive(Clone, Debug, PartialEq)]
pub struct Judged {
    /// Whether it holds; none where it could not be judged.
    pub holds: Option<bool>,
    /// The value, with its unit.
    pub value: Option<String>,
    /// The limits, with their unit.
    pub limits: String,
    /// Index of the logical line in the block.
    pub line: usize,
}

/// A finding that came or went.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FindingChange {
    /// Whether it came; it went otherwise.
    pub is_new: bool,
    /// Its code.
    pub code: Code,
    /// Its level.
    pub level: &'static str,
    /// Its message.
    pub message: String,
}

/// Why a solution changed.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Reason {
    /// Its own lines.
    OwnLines,
    /// Another solution or a bottle that it is made from.
    Stock(String),
    /// A constant or a property of a substance, ion or solid.
    Constant(String),
    /// The lab that it is made in.
    Lab(String),
    /// What `scruple.toml` sets.
    Setting,
}

/// What is told of a change at a glance.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Told {
    /// The solution is new.
    Appeared,
    /// It is no longer there.
    Vanished,
    /// It had values and has none.
    LostValues,
    /// It had no values and has some.
    GainedValues,
    /// Something came out differently.
    Changed,
    /// Only words changed, or its name or place.
    WordsOnly,
}

impl Change {
    /// What is told of it at a glance.
    pub fn told(&self) -> Told {
        match (&self.old, &self.new) {
            (None, _) => Told::Appeared,
            (_, None) => Told::Vanished,
            _ => match self.shifts.first() {
                Some(shift) if shift.name == VALUES && shift.new.is_none() => Told::LostValues,
                Some(shift) if shift.name == VALUES => Told::GainedValues,
                None if self.verdicts.is_empty() && self.findings.is_empty() && self.smaller == 0 => Told::WordsOnly,
                _ => Told::Changed,
            },
        }
    }

    /// Whether an expectation that held, or is new, does not hold.
    pub fn breaks(&self) -> bool {
        self.verdicts.iter().any(VerdictChange::breaks)
    }
}

impl VerdictChange {
    /// Whether it held, or is new, and does not hold.
    pub fn breaks(&self) -> bool {
        let failed = |judged: &Option<Judged>| judged.as_ref().is_some_and(|judged| judged.holds == Some(false));
        failed(&self.new) && !failed(&self.old)
    }
}

/// Stands in the place of a number for a solution that has or had no values at all.
pub(super) const VALUES: &str = "values";

/// The changes of all solutions, those that nothing reached left out.
pub(super) fn changes(pairs: &[Pair], old: &Snapshot, new: &Snapshot) -> Vec<Change> {
    let is_solution = |snapshot: &Snapshot, at: Option<(FileId, usize)>| {
        at.and_then(|at| block_at(snapshot, at)).is_some_and(|block| matches!(block.body, Body::Solution(_)))
    };
    let solutions = pairs.iter().filter(|pair| is_solution(new, pair.new) || is_solution(old, pair.old));
    let reached = solutions.filter(|pair| !is_untouched(pair, old, new));
    let renamed = renamed(pairs, old, new);
    reached.flat_map(|pair| of_pair(pair, old, new, &renamed)).collect()
}

fn is_untouched(pair: &Pair, old: &Snapshot, new: &Snapshot) -> bool {
    let (Some(before), Some(now)) = (pair.old, pair.new) else { return false };
    let same_known = match (old.checked(before.0, before.1), new.checked(now.0, now.1)) {
        (Some(one), Some(other)) => Arc::ptr_eq(one, other),
        _ => false,
    };
    same_known && before.0 == now.0 && findings(old, before) == findings(new, now)
}

/// The members of a pair: of a series, those with the same value belong together.
fn of_pair(pair: &Pair, old: &Snapshot, new: &Snapshot, renamed: &Renamed) -> Vec<Change> {
    let mut olds = pair.old.map(|at| places(old, at)).unwrap_or_default();
    let mut changes = Vec::new();
    for place in pair.new.map(|at| places(new, at)).unwrap_or_default() {
        let value = |place: &Place| place.name.rsplit_once('(').map(|(_, value)| value.to_owned());
        let partner = olds.iter().position(|candidate| value(candidate) == value(&place));
        let partner = partner.map(|at| olds.remove(at));
        changes.extend(change(partner, Some(place), old, new, renamed));
    }
    changes.extend(olds.into_iter().filter_map(|place| change(Some(place), None, old, new, renamed)));
    changes
}

fn places(snapshot: &Snapshot, (file, block): (FileId, usize)) -> Vec<Place> {
    let checked = snapshot.checked(file, block);
    let members = checked.into_iter().flat_map(|checked| checked.evaluation.members.iter().enumerate());
    members.map(|(member, found)| Place { file, block, member, name: found.name.clone() }).collect()
}

/// The outcome at a place.
pub(super) fn outcome<'a>(snapshot: &'a Snapshot, place: &Place) -> Option<&'a Arc<Outcome>> {
    snapshot.checked(place.file, place.block)?.evaluation.members.get(place.member)?.outcome.as_ref()
}

fn change(
    old_place: Option<Place>,
    new_place: Option<Place>,
    old: &Snapshot,
    new: &Snapshot,
    renamed: &Renamed,
) -> Option<Change> {
    let (before, now) = (old_place.as_ref(), new_place.as_ref());
    let (was, is) = (before.and_then(|place| outcome(old, place)), now.and_then(|place| outcome(new, place)));
    let mut change = Change {
        is_edited: is_edited(before, now, old, new),
        shifts: Vec::new(),
        smaller: 0,
        verdicts: Vec::new(),
        findings: Vec::new(),
        reasons: Vec::new(),
        old: None,
        new: None,
    };
    if before.is_some() && now.is_some() {
        match (was, is) {
            (Some(was), Some(is)) => shifts(&values(was, renamed), &values(is, &Renamed::new()), &mut change),
            (None, None) => {}
            (was, is) => change.shifts.push(Shift {
                name: VALUES.to_owned(),
                measure: Measure::Ph,
                // Values without a state are values all the same.
                old: was.map(|outcome| outcome.finished.as_ref().map_or(f64::NAN, |state| state.pH())),
                new: is.map(|outcome| outcome.finished.as_ref().map_or(f64::NAN, |state| state.pH())),
                shares: Vec::new(),
                remainder: None,
            }),
        }
    }
    if now.is_some() {
        change.verdicts = verdicts(judged(old, before, was), judged(new, now, is));
        change.findings = finding_changes(before.map(|place| findings(old, (place.file, place.block))), findings_of(new, now));
    }
    let has_moved = match (before, now) {
        (Some(before), Some(now)) => before.file != now.file || before.name != now.name,
        _ => true,
    };
    let is_silent = change.shifts.is_empty() && change.smaller == 0 && change.verdicts.is_empty() && change.findings.is_empty();
    (change.old, change.new) = (old_place, new_place);
    (has_moved || change.is_edited || !is_silent).then_some(change)
}

fn is_edited(before: Option<&Place>, now: Option<&Place>, old: &Snapshot, new: &Snapshot) -> bool {
    let lines = |snapshot: &Snapshot, place: &Place| -> Vec<String> {
        let block = block_at(snapshot, (place.file, place.block));
        block.map(body).unwrap_or_default().into_iter().map(|(_, words)| words).collect()
    };
    match (before, now) {
        (Some(before), Some(now)) => lines(old, before) != lines(new, now),
        _ => true,
    }
}

fn shifts(was: &[Value], is: &[Value], change: &mut Change) {
    let find = |values: &[Value], name: &str| values.iter().find(|value| value.name == name).and_then(|value| value.value);
    let gone = was.iter().filter(|value| !is.iter().any(|other| other.name == value.name));
    for value in is.iter().chain(gone) {
        let (old, new) = (find(was, &value.name), find(is, &value.name));
        let shift = Shift { name: value.name.clone(), measure: value.measure, old, new, shares: Vec::new(), remainder: None };
        match (old, new) {
            (None, None) => {}
            (Some(old), Some(new)) if value.measure.is_equal(old, new) => {}
            (Some(old), Some(new)) if !value.measure.is_worth_showing(old, new) => change.smaller += 1,
            _ => change.shifts.push(shift),
        }
    }
}

/// What was judged at a place, by what is expected.
fn judged(snapshot: &Snapshot, place: Option<&Place>, outcome: Option<&Arc<Outcome>>) -> BTreeMap<(String, usize), Judged> {
    let mut all = BTreeMap::new();
    let Some((place, outcome)) = place.zip(outcome) else { return all };
    let checked = snapshot.checked(place.file, place.block);
    let merged = checked.and_then(|checked| checked.evaluation.recipe.as_deref());
    let block = block_at(snapshot, (place.file, place.block));
    let recipe = merged.or(block.and_then(Block::recipe));
    for verdict in &outcome.verdicts {
        let expectation = recipe.and_then(|recipe| recipe.expectations.get(verdict.expectation));
        let as_formula = expectation.and_then(|expectation| expectation.as_formula.as_ref()).map(|(written, _)| format!(" as {written}"));
        let diluted = if verdict.fold == 1.0 { String::new() } else { format!(" diluted {}-fold", format::plain(verdict.fold)) };
        let name = format!(
            "{}{} at {}{diluted}",
            verdict.property.words(),
            as_formula.unwrap_or_default(),
            format::temperature(verdict.temperature_K)
        );
        let ordinal = all.keys().filter(|(known, _)| *known == name).count();
        let judged = Judged {
            holds: verdict.holds,
            value: verdict.value.map(|value| format::with_unit(value, verdict.unit)),
            limits: limits(verdict),
            line: verdict.at.line,
        };
        all.insert((name, ordinal), judged);
    }
    all
}

fn limits(verdict: &Verdict) -> String {
    let with_unit = |value: f64| format::with_unit(value, verdict.unit);
    match (verdict.low, verdict.high) {
        (Some(low), Some(high)) => format!("{} to {}", with_unit(low), with_unit(high)),
        (Some(low), None) => format!("at least {}", with_unit(low)),
        (None, Some(high)) => format!("at most {}", with_unit(high)),
        (None, None) => String::new(),
    }
}

fn verdicts(mut olds: BTreeMap<(String, usize), Judged>, news: BTreeMap<(String, usize), Judged>) -> Vec<VerdictChange> {
    let mut changes = Vec::new();
    for (key, new) in news {
        let old = olds.remove(&key);
        let is_same = old.as_ref().is_some_and(|old| old.holds == new.holds && old.limits == new.limits);
        // A new expectation that holds is no news.
        let is_quiet = old.is_none() && new.holds == Some(true);
        if !is_same && !is_quiet {
            changes.push(VerdictChange { name: key.0, old, new: Some(new) });
        }
    }
    changes.extend(olds.into_iter().map(|(key, old)| VerdictChange { name: key.0, old: Some(old), new: None }));
    changes.sort_by_key(|change| (!change.breaks(), change.new.as_ref().map_or(usize::MAX, |new| new.line)));
    changes
}

fn findings_of<'a>(snapshot: &'a Snapshot, place: Option<&Place>) -> Option<Vec<&'a Located>> {
    place.map(|place| snapshot.findings(place.file).iter().filter(|located| located.block == place.block).collect())
}

/// What is said of a block, as text.
fn findings(snapshot: &Snapshot, at: (FileId, usize)) -> Vec<(Code, String, &'static str)> {
    let of_block = snapshot.findings(at.0).iter().filter(|located| located.block == at.1);
    of_block.map(|located| (located.finding.code, located.finding.message.clone(), located.finding.level.word())).collect()
}

fn finding_changes(before: Option<Vec<(Code, String, &'static str)>>, now: Option<Vec<&Located>>) -> Vec<FindingChange> {
    // Expectations are told on their own.
    let told = |code: Code| !matches!(code, Code::ExpectationFails | Code::ExpectationWithoutValue);
    let key = |code: Code, message: &str, seen: &mut BTreeSet<(Code, String, usize)>| {
        let kept: String = message.chars().filter(|character| !character.is_ascii_digit()).collect();
        let ordinal = (0..).find(|ordinal| seen.insert((code, kept.clone(), *ordinal))).unwrap_or(0);
        (code, kept, ordinal)
    };
    let mut seen = BTreeSet::new();
    let mut olds: BTreeMap<_, _> = BTreeMap::new();
    for (code, message, level) in before.unwrap_or_default().into_iter().filter(|(code, ..)| told(*code)) {
        olds.insert(key(code, &message, &mut seen), (message, level));
    }
    let mut seen = BTreeSet::new();
    let mut changes = Vec::new();
    for located in now.unwrap_or_default().into_iter().filter(|located| told(located.finding.code)) {
        let (code, level) = (located.finding.code, located.finding.level.word());
        if olds.remove(&key(code, &located.finding.message, &mut seen)).is_none() {
            changes.push(FindingChange { is_new: true, code, level, message: located.finding.message.clone() });
        }
    }
    changes.extend(olds.into_iter().map(|((code, ..), (message, level))| FindingChange { is_new: false, code, level, message }));
    changes
}

/// Whether a definition is called otherwise than before.
pub(super) fn is_renamed(old: &Block, new: &Block) -> bool {
    let key = |block: &Block| block.name.as_ref().map(|name| NameKey::new(&name.text));
    key(old) != key(new)
}

/// The header line of a block as one reads it.
pub(super) fn header(block: &Block) -> String {
    block.lines.first().map(|line| words(line)).unwrap_or_default()
}
