//! Two states of a library side by side, as data: `scruple compare --format json`, in the schema `compare.schema.json`. The
//! other formats are written from it.

mod annotations;
mod html;
mod markdown;
mod text;

pub use annotations::annotations;
pub use html::html;
pub use markdown::markdown;
pub use text::text;

use serde::Serialize;

use super::number::number;
use super::selection::Selection;
use crate::library;
use crate::review::{Change, Edit, EditKind, EditedLine, Judged, Place, Reason, Review, Share, Shift, Told};
use crate::syntax::tree::BlockKind;
use crate::text::Columns;

/// The form of the data; it counts up only where a reader of the older form would go wrong.
const FORM: u32 = 1;

/// Everything that is told of a comparison.
#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct ComparisonReport {
    pub form: u32,
    pub old: String,
    pub new: String,
    pub program: &'static str,
    pub library: &'static str,
    pub solutions: usize,
    pub replayed: bool,
    pub changes: Vec<ChangeReport>,
    pub edits: Vec<EditedReport>,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct ChangeReport {
    pub name: String,
    pub file: String,
    pub line: usize,
    pub was_called: Option<String>,
    pub was_in: Option<String>,
    pub told: &'static str,
    pub breaks: bool,
    pub edited: bool,
    pub reasons: Vec<ReasonReport>,
    pub shifts: Vec<ShiftReport>,
    pub smaller: usize,
    pub expectations: Vec<VerdictReport>,
    pub findings: Vec<FindingChangeReport>,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct ReasonReport {
    pub kind: &'static str,
    pub name: Option<String>,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct ShiftReport {
    pub property: String,
    pub unit: &'static str,
    pub was: Option<f64>,
    pub is: Option<f64>,
    pub change: Option<f64>,
    pub shown_was: Option<String>,
    pub shown_is: Option<String>,
    pub shown_change: Option<String>,
    pub shares: Vec<ShareReport>,
    pub remainder: Option<f64>,
    pub shown_remainder: Option<String>,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct ShareReport {
    pub edit: usize,
    pub amount: Option<f64>,
    pub predicted: Option<f64>,
    pub shown: Option<String>,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct VerdictReport {
    pub expected: String,
    pub breaks: bool,
    pub was: Option<JudgedReport>,
    pub is: Option<JudgedReport>,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct JudgedReport {
    pub holds: Option<bool>,
    pub value: Option<String>,
    pub limits: String,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct FindingChangeReport {
    pub came: bool,
    pub code: &'static str,
    pub level: &'static str,
    pub message: String,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct EditedReport {
    pub kind: &'static str,
    pub block_kind: Option<&'static str>,
    pub block: String,
    pub was: Option<LineReport>,
    pub is: Option<LineReport>,
}

#[derive(Clone, Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in compare.schema.json")]
pub struct LineReport {
    pub file: String,
    pub line: usize,
    pub text: String,
}

/// A review with its words, numbers and places. The selections name the files of both states; `old_name` and `new_name` are what
/// the reader calls the states.
pub fn comparison(review: &Review, old: &Selection, new: &Selection, old_name: &str, new_name: &str) -> ComparisonReport {
    ComparisonReport {
        form: FORM,
        old: old_name.to_owned(),
        new: new_name.to_owned(),
        program: env!("CARGO_PKG_VERSION"),
        library: library::VERSION,
        solutions: review.solutions,
        replayed: review.is_replayed,
        changes: review.changes.iter().map(|change| change_report(change, old, new)).collect(),
        edits: review.edits.iter().map(|edit| edited(edit, new)).collect(),
    }
}

impl ComparisonReport {
    /// Whether an expectation that held, or is new, does not hold.
    pub fn breaks(&self) -> bool {
        self.changes.iter().any(|change| change.breaks)
    }

    /// `2 solutions changed, 1 appeared; 1 expectation breaks; 5 solutions in all`.
    fn summary(&self) -> String {
        let count = |told: &[&str]| self.changes.iter().filter(|change| told.contains(&change.told)).count();
        let solutions = |count: usize| if count == 1 { "1 solution".to_owned() } else { format!("{count} solutions") };
        let counts = [
            (count(&["changed", "gained values", "lost values"]), "changed"),
            (count(&["appeared"]), "appeared"),
            (count(&["vanished"]), "vanished"),
            (count(&["words only"]), "changed in words only"),
        ];
        let mut said: Vec<String> =
            counts.iter().filter(|(count, _)| *count > 0).map(|(count, word)| format!("{} {word}", solutions(*count))).collect();
        if said.is_empty() {
            said.push("no solution changed".to_owned());
        }
        let broken = self.changes.iter().flat_map(|change| &change.expectations).filter(|verdict| verdict.breaks).count();
        let broken = match broken {
            0 => "no expectation breaks".to_owned(),
            1 => "1 expectation breaks".to_owned(),
            more => format!("{more} expectations break"),
        };
        format!("{}; {broken}; {} in all", said.join(", "), solutions(self.solutions))
    }
}

impl ChangeReport {
    /// The sentence that stands beside the name.
    fn headline(&self) -> String {
        let mut said = vec![match self.told {
            "appeared" => "is new",
            "vanished" => "is gone",
            "lost values" => "has no values any more",
            "gained values" => "has values now",
            "words only" => "changed in words only",
            _ => "changed",
        }
        .to_owned()];
        if let Some(name) = &self.was_called {
            said.push(format!("was called {name}"));
        }
        if let Some(file) = &self.was_in {
            said.push(format!("was in {file}"));
        }
        if self.breaks {
            said.push("an expectation breaks".to_owned());
        }
        said.join("; ")
    }

    /// `its own lines, the stock Salt stock`.
    fn because(&self) -> String {
        let words = self.reasons.iter().map(|reason| match &reason.name {
            Some(name) => format!("the {} {name}", reason.kind),
            None => match reason.kind {
                "setting" => "a setting in scruple.toml".to_owned(),
                other => format!("its {other}"),
            },
        });
        words.collect::<Vec<_>>().join(", ")
    }

    /// The shift whose shares are told: the first that has some.
    fn shared(&self) -> Option<&ShiftReport> {
        self.shifts.iter().find(|shift| !shift.shares.is_empty())
    }
}

impl ShiftReport {
    /// `7.00 → 7.12 (+0.12)`.
    fn sentence(&self) -> String {
        let none = || "no value".to_owned();
        let change = self.shown_change.as_ref().map(|change| format!(" ({change})")).unwrap_or_default();
        format!("{} → {}{change}", self.shown_was.clone().unwrap_or_else(none), self.shown_is.clone().unwrap_or_else(none))
    }

    /// The shares that are told: those that show, each with its edit; and whether others were left out.
    fn told_shares<'a>(&'a self, edits: &'a [EditedReport]) -> (Vec<(&'a ShareReport, &'a EditedReport)>, usize) {
        let whole = self.change.unwrap_or(0.0).abs();
        let is_told = |share: &&ShareReport| share.amount.is_none_or(|amount| amount.abs() >= 0.005 * whole);
        let told: Vec<_> = self.shares.iter().filter(is_told).filter_map(|share| Some((share, edits.get(share.edit)?))).collect();
        let left_out = self.shares.len() - told.len();
        (told, left_out)
    }
}

impl VerdictReport {
    /// `pH at 25 °C: 7.00 was within 6.60 to 7.00, 6.05 is not`.
    fn sentence(&self) -> String {
        let judged = |judged: &JudgedReport| match (judged.holds, &judged.value) {
            (Some(true), Some(value)) => format!("{value} is within {}", judged.limits),
            (Some(false), Some(value)) => format!("{value} is not within {}", judged.limits),
            _ => format!("not judged against {}", judged.limits),
        };
        let was = self.was.as_ref().map_or("not expected".to_owned(), judged);
        let is = self.is.as_ref().map_or("not expected any more".to_owned(), judged);
        format!("{}: {was} → {is}", self.expected)
    }
}

impl EditedReport {
    /// `stocks.prep, line 11: 35.60 g … → 5.60 g …`.
    fn sentence(&self) -> String {
        let line = self.is.as_ref().or(self.was.as_ref());
        let place = line.map(|line| format!("{}, line {}: ", line.file, line.line)).unwrap_or_default();
        let words = match (&self.was, &self.is) {
            _ if self.kind == "setting" => "settings".to_owned(),
            (Some(was), Some(_)) if self.kind == "moved" => format!("{} (moved)", was.text),
            (Some(was), Some(is)) => format!("{} → {}", was.text, is.text),
            (None, Some(is)) => format!("{} (new)", is.text),
            (Some(was), None) => format!("{} (gone)", was.text),
            (None, None) => String::new(),
        };
        format!("{place}{words}")
    }
}

fn change_report(change: &Change, old: &Selection, new: &Selection) -> ChangeReport {
    let both = change.old.as_ref().zip(change.new.as_ref());
    let (selection, place) = match (&change.new, &change.old) {
        (Some(place), _) => (new, Some(place)),
        (None, place) => (old, place.as_ref()),
    };
    let name = |selection: &Selection, place: &Place| selection.snapshot.file(place.file).map(|file| selection.file_name(file));
    ChangeReport {
        name: place.map(|place| place.name.clone()).unwrap_or_default(),
        file: place.and_then(|place| name(selection, place)).unwrap_or_default(),
        line: place.map_or(1, |place| line(selection, place)),
        was_called: both.filter(|(before, now)| before.name != now.name).map(|(before, _)| before.name.clone()),
        was_in: both.filter(|(before, now)| before.file != now.file).and_then(|(before, _)| name(old, before)),
        told: match change.told() {
            Told::Appeared => "appeared",
            Told::Vanished => "vanished",
            Told::LostValues => "lost values",
            Told::GainedValues => "gained values",
            Told::Changed => "changed",
            Told::WordsOnly => "words only",
        },
        breaks: change.breaks(),
        edited: change.is_edited,
        reasons: change.reasons.iter().map(reason).collect(),
        shifts: change.shifts.iter().map(shift).collect(),
        smaller: change.smaller,
        expectations: change
            .verdicts
            .iter()
            .map(|verdict| VerdictReport {
                expected: verdict.name.clone(),
                breaks: verdict.breaks(),
                was: verdict.old.as_ref().map(judged),
                is: verdict.new.as_ref().map(judged),
            })
            .collect(),
        findings: change
            .findings
            .iter()
            .map(|finding| FindingChangeReport {
                came: finding.is_new,
                code: finding.code.name(),
                level: finding.level,
                message: finding.message.clone(),
            })
            .collect(),
    }
}

/// The line of a solution's header, counted from 1.
fn line(selection: &Selection, place: &Place) -> usize {
    let file = selection.snapshot.file(place.file);
    let header = file.and_then(|file| Some((file, file.model.blocks.get(place.block)?.header_anchor())));
    header.map_or(1, |(file, anchor)| 1 + file.source.position(file.absolute(place.block, anchor).start, Columns::Characters).line)
}

fn reason(reason: &Reason) -> ReasonReport {
    let (kind, name) = match reason {
        Reason::OwnLines => ("own lines", None),
        Reason::Stock(name) => ("stock", Some(name)),
        Reason::Constant(name) => ("constants of", Some(name)),
        Reason::Lab(name) => ("lab", Some(name)),
        Reason::Setting => ("setting", None),
    };
    ReasonReport { kind, name: name.cloned() }
}

fn shift(shift: &Shift) -> ShiftReport {
    let (shown_was, shown_is) = shift.measure.shown(shift.old, shift.new);
    let change = shift.old.zip(shift.new).map(|(old, new)| new - old);
    let difference = |value: f64| shift.measure.difference(value);
    // What is left is told where it shows beside the shift itself.
    let remainder = shift.remainder.filter(|_| !shift.shares.is_empty());
    let is_told = |rest: &f64| rest.abs() >= 0.005 * change.unwrap_or(0.0).abs() && !shift.measure.is_equal(*rest, 0.0);
    let share = |share: &Share| ShareReport {
        edit: share.edit,
        amount: share.amount.and_then(number),
        predicted: share.predicted.and_then(number),
        shown: share.amount.map(difference),
    };
    ShiftReport {
        property: shift.name.clone(),
        unit: shift.measure.unit(),
        was: shift.old.and_then(number),
        is: shift.new.and_then(number),
        change: change.and_then(number),
        shown_was,
        shown_is,
        shown_change: change.map(difference),
        shares: shift.shares.iter().map(share).collect(),
        remainder: remainder.and_then(number),
        shown_remainder: remainder.filter(is_told).map(difference),
    }
}

fn judged(judged: &Judged) -> JudgedReport {
    JudgedReport { holds: judged.holds, value: judged.value.clone(), limits: judged.limits.clone() }
}

fn edited(edit: &Edit, new: &Selection) -> EditedReport {
    let line = |line: &EditedLine| LineReport { file: new.name(&line.path), line: line.line, text: line.words.clone() };
    EditedReport {
        kind: match edit.kind {
            EditKind::Changed => "changed",
            EditKind::Added => "added",
            EditKind::Removed => "removed",
            EditKind::Moved => "moved",
            EditKind::Setting => "setting",
        },
        block_kind: edit.owner.kind.map(|kind| match kind {
            BlockKind::Solution => "solution",
            BlockKind::Bottle => "bottle",
            BlockKind::Substance => "substance",
            BlockKind::Ion => "ion",
            BlockKind::Solid => "solid",
            BlockKind::Danger => "danger",
            BlockKind::Group => "group",
            BlockKind::Lab => "lab",
        }),
        block: edit.owner.name.clone(),
        was: edit.old.as_ref().map(line),
        is: edit.new.as_ref().map(line),
    }
}

/// Text in which no control character is left, so that a name cannot move a terminal's cursor or begin a line.
fn plain(text: &str) -> String {
    text.chars().map(|character| if character.is_control() { ' ' } else { character }).collect()
}
