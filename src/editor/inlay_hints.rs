//! Computed values beside the text: short, steady, each of a category that can be switched off.

use super::cursor::{block_span, statement_span};
use super::values::{Values, finished_ph, joined, judged, measured_out};
use crate::evaluate::{LineOutcome, Outcome};
use crate::finding::Anchor;
use crate::model::{Action, Addition, Entry, MakeUp, Pair};
use crate::syntax::tree::BlockKind;
use crate::text::{FileId, Span};
use crate::units::{Unit, format};
use crate::workspace::{FileState, Snapshot};

/// The kinds of hint, each with a switch of its own.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum HintCategory {
    /// pH and ionic strength beside a solution's header.
    Solution,
    /// What to weigh or measure out where a line states a concentration or an amount.
    Measure,
    /// What concentration results where a line states a mass or a volume.
    Concentration,
    /// What a `q.s.` line took.
    Taken,
    /// What both members of a pair come to.
    Pair,
    /// The present value of what is expected.
    Expectation,
}

impl HintCategory {
    /// Every category.
    pub const ALL: &'static [HintCategory] = &[
        HintCategory::Solution,
        HintCategory::Measure,
        HintCategory::Concentration,
        HintCategory::Taken,
        HintCategory::Pair,
        HintCategory::Expectation,
    ];

    /// The name of its switch.
    pub fn name(self) -> &'static str {
        match self {
            HintCategory::Solution => "solution",
            HintCategory::Measure => "measure",
            HintCategory::Concentration => "concentration",
            HintCategory::Taken => "taken",
            HintCategory::Pair => "pair",
            HintCategory::Expectation => "expectation",
        }
    }
}

/// A value beside the text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct InlayHint {
    /// Where it is shown, after the characters of a statement.
    pub offset: usize,
    /// What is shown.
    pub label: String,
    /// What the value is.
    pub tooltip: String,
    /// Which kind it is.
    pub category: HintCategory,
    /// The replacement that writes the value into the text.
    pub text_edit: Option<(Span, String)>,
}

/// The hints of the lines that touch a range, in order.
pub fn inlay_hints(snapshot: &Snapshot, file: FileId, range: Span) -> Vec<InlayHint> {
    let Some(state) = snapshot.file(file) else { return Vec::new() };
    let mut hints = Vec::new();
    for (index, block) in state.model.blocks.iter().enumerate() {
        let span = block_span(state, index);
        if block.kind() != Some(BlockKind::Solution) || span.end < range.start || range.end < span.start {
            continue;
        }
        if let Some(values) = Values::of(snapshot, file, index) {
            Hints { state, index, values, hints: &mut hints }.block();
        }
    }
    hints.retain(|hint| range.touches(hint.offset));
    hints.sort_by_key(|hint| hint.offset);
    hints
}

/// The hints of one solution.
struct Hints<'a, 'b> {
    state: &'a FileState,
    index: usize,
    values: Values<'a>,
    hints: &'b mut Vec<InlayHint>,
}

impl<'a> Hints<'a, '_> {
    fn block(&mut self) {
        let outcomes = self.values.outcomes();
        if outcomes.is_empty() {
            return;
        }
        self.header(&outcomes);
        for (index, entry) in self.values.recipe.entries.iter().enumerate() {
            let lines = self.values.lines_of(index);
            if lines.is_empty() {
                continue;
            }
            match &entry.action {
                Action::Add(addition) => self.addition(entry, addition, &lines),
                Action::Pair(pair) => self.pair(entry, pair, &lines),
                Action::MakeUp(make_up) => self.make_up(entry, make_up, &lines),
                Action::AddAll(_) => {
                    let shown = shown(&lines, |line| measured_out(line, 4));
                    self.push(entry.at.line, HintCategory::Measure, "=", shown, "What the whole batch comes to.", None);
                }
                _ => {}
            }
        }
        for expectation in &self.values.recipe.expectations {
            let verdicts = self.values.verdicts_on(expectation.at.line);
            let value = judged(&verdicts);
            let what = format!("The present {}.", expectation.property.words());
            self.push(expectation.at.line, HintCategory::Expectation, "now", value, &what, None);
        }
    }

    fn header(&mut self, outcomes: &[&Outcome]) {
        let Some(ph) = finished_ph(outcomes) else { return };
        let mut label = format!("pH {ph}");
        let mut tooltip = "pH of the finished solution where it is made".to_owned();
        if let [outcome] = outcomes {
            let elsewhere = outcome.uses.iter().find(|(kelvin, _)| (kelvin - outcome.made_at_K).abs() > 0.05);
            if let Some((kelvin, Ok(state))) = elsewhere {
                label.push_str(&format!(", {} at {}", format::ph(state.pH()), format::temperature(*kelvin)));
                tooltip.push_str(" and where it is used");
            }
            if let (Ok(state), Some(unit)) = (&outcome.finished, Unit::parse("mol/L")) {
                label.push_str(&format!(" · I {}", format::quantity(state.ionic_strength_mol_per_L(), unit, 2)));
                tooltip.push_str("; I is the ionic strength");
            }
        } else {
            tooltip.push_str(", from the first to the last of the series");
        }
        let end = self.values.block.header_anchor().span.end;
        let offset = self.state.absolute(self.index, Anchor::new(0, Span::empty(end))).start;
        self.hints.push(InlayHint {
            offset,
            label,
            tooltip: format!("{tooltip}."),
            category: HintCategory::Solution,
            text_edit: None,
        });
    }

    fn addition(&mut self, entry: &Entry, addition: &Addition, lines: &[&'a LineOutcome]) {
        if self.values.states_concentration(addition) {
            let from = addition.qualifiers.from.as_ref().map_or(addition.what.text.as_str(), |from| from.text.as_str());
            let what = format!("How much {from} to measure out.");
            self.push(entry.at.line, HintCategory::Measure, "=", shown(lines, |line| measured_out(line, 4)), &what, None);
            return;
        }
        let concentrations: Option<Vec<String>> =
            lines.iter().map(|line| line.concentration_mol_per_L.map(|value| format::concentration(value, 3))).collect();
        let what = format!("What this line brings of {} to the finished solution.", addition.what.text);
        let value = concentrations.and_then(|shown| joined(&shown));
        self.push(entry.at.line, HintCategory::Concentration, "=", value, &what, None);
    }

    fn pair(&mut self, entry: &Entry, pair: &Pair, lines: &[&'a LineOutcome]) {
        // Both members of each solution of a series follow each other.
        let members = |wanted: usize| -> Vec<String> {
            lines.iter().enumerate().filter(|(index, _)| index % 2 == wanted).map(|(_, line)| measured_out(line, 4)).collect()
        };
        let value = joined(&members(0)).zip(joined(&members(1))).map(|(first, second)| format!("{first} / {second}"));
        let what = format!("How much {} and {} to measure out.", pair.first.text, pair.second.text);
        self.push(entry.at.line, HintCategory::Pair, "=", value, &what, None);
    }

    fn make_up(&mut self, entry: &Entry, make_up: &MakeUp, lines: &[&'a LineOutcome]) {
        let value = shown(lines, |line| measured_out(line, 3));
        let is_adjusted = lines.iter().all(|line| self.values.is_adjusted(line));
        let names: Vec<&str> = lines.iter().map(|line| line.name.as_str()).collect();
        let taken = match (&make_up.alternative, names.first()) {
            (Some(_), Some(first)) if names.iter().all(|name| name == first) => value.map(|value| format!("{value} {first}")),
            _ => value,
        };
        let what = if is_adjusted {
            "What it takes to reach the target, as computed. At the bench the measurement decides."
        } else {
            "What it takes to fill up, as computed. At the bench the mark or the balance decides."
        };
        let write = match (self.values.single(), is_adjusted && make_up.qualifiers.about.is_none(), lines) {
            (Some(_), true, [line]) => Some(format!(", about {}", measured_out(line, 3))),
            _ => None,
        };
        self.push(entry.at.line, HintCategory::Taken, "took", taken, what, write);
    }

    /// Adds a hint behind the statement of a line; `write` is inserted there when the hint is accepted.
    fn push(
        &mut self,
        line: usize,
        category: HintCategory,
        sign: &str,
        value: Option<String>,
        tooltip: &str,
        write: Option<String>,
    ) {
        let (Some(value), Some(node)) = (value, self.values.block.lines.get(line)) else { return };
        let end = statement_span(node).end;
        let offset = self.state.absolute(self.index, Anchor::new(line, Span::empty(end))).start;
        self.hints.push(InlayHint {
            offset,
            label: format!("{sign} {value}"),
            tooltip: tooltip.to_owned(),
            category,
            text_edit: write.map(|text| (Span::empty(offset), text)),
        });
    }
}

fn shown(lines: &[&LineOutcome], show: impl Fn(&LineOutcome) -> String) -> Option<String> {
    joined(&lines.iter().map(|line| show(line)).collect::<Vec<String>>())
}

