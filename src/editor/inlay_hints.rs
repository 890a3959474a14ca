//! Computed values beside the text: short, steady, each of a category that can be switched off.

use std::sync::Arc;

use super::cursor::{block_span, statement_span};
use super::target::definition_of;
use super::values::{Values, filled_up, finished_ph, joined, judged, measured_out, shown_ph};
use crate::evaluate::{LineOutcome, Outcome};
use crate::finding::Anchor;
use crate::model::{Action, Addition, Block, Body, Entry, MakeUp, Pair, is_water};
use crate::syntax::tree::{BlockKind, Line};
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
        if let Some(values) = Values::of(snapshot, file, index).filter(|values| !values.outcomes().is_empty()) {
            Hints { snapshot, state, index, values, now: None, hints: &mut hints }.block();
        } else if let Some(before) = snapshot.remembered(file, index)
            && let Some(recipe) = before.evaluation.recipe.as_deref().or(before.block.recipe())
        {
            let values = Values { block: &before.block, recipe, evaluation: &before.evaluation };
            Hints { snapshot, state, index, values, now: Some(block), hints: &mut hints }.block();
        }
    }
    hints.retain(|hint| range.touches(hint.offset));
    hints.sort_by_key(|hint| hint.offset);
    hints
}

/// The hints of one solution.
struct Hints<'a, 'b> {
    snapshot: &'a Snapshot,
    state: &'a FileState,
    index: usize,
    values: Values<'a>,
    /// The block as it stands, where the values are of its last version without a mistake.
    now: Option<&'a Block>,
    hints: &'b mut Vec<InlayHint>,
}

impl<'a> Hints<'a, '_> {
    fn block(&mut self) {
        let outcomes = self.values.outcomes();
        if outcomes.is_empty() {
            return;
        }
        self.header(&outcomes);
        for (index, entry) in self.values.own_entries() {
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
            // Of the temperatures of use the one that matters: where the pH is farthest from that at the making.
            let made = outcome.finished.as_ref().map_or(f64::NAN, |state| state.pH());
            let uses = outcome.uses.iter().filter_map(|(kelvin, state)| Some((*kelvin, state.as_ref().ok()?)));
            let farthest = uses.max_by(|(_, one), (_, other)| (one.pH() - made).abs().total_cmp(&(other.pH() - made).abs()));
            if let Some((kelvin, state)) = farthest
                && shown_ph(state) != ph
            {
                label.push_str(&format!(", {} at {}", shown_ph(state), format::temperature(kelvin)));
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
        self.place(Anchor::new(0, Span::empty(end)), HintCategory::Solution, "", label, format!("{tooltip}."), None);
    }

    fn addition(&mut self, entry: &Entry, addition: &Addition, lines: &[&'a LineOutcome]) {
        if self.values.states_concentration(addition) {
            let from = addition.qualifiers.from.as_ref().map_or(addition.what.text.as_str(), |from| from.text.as_str());
            let what = format!("How much {from} to measure out.");
            self.push(entry.at.line, HintCategory::Measure, "=", shown(lines, |line| measured_out(line, 4)), &what, None);
            return;
        }
        let is_water = |line: &&LineOutcome| {
            definition_of(self.snapshot, &line.definition)
                .is_some_and(|definition| matches!(&definition.block.body, Body::Substance(substance) if is_water(substance)))
        };
        if addition.about || lines.iter().all(is_water) {
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
        let value = shown(lines, |line| filled_up(line, make_up, 3));
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
        self.place(Anchor::new(line, Span::empty(end)), category, sign, value, tooltip.to_owned(), write);
    }

    /// Adds a hint at a place of the block that has the values. Where these are of an earlier version, they stand only beside
    /// lines that have not changed since, and say so.
    fn place(
        &mut self,
        at: Anchor,
        category: HintCategory,
        sign: &str,
        value: String,
        tooltip: String,
        write: Option<String>,
    ) {
        let place = |line| self.state.absolute(self.index, Anchor::new(line, at.span)).start;
        let hint = match self.now {
            None => {
                let offset = place(at.line);
                let label = format!("{sign} {value}").trim_start().to_owned();
                InlayHint { offset, label, tooltip, category, text_edit: write.map(|text| (Span::empty(offset), text)) }
            }
            Some(now) => {
                let Some(line) = unchanged(self.values.block, now, at.line) else { return };
                let tooltip = format!("{tooltip}\nThis was so before the mistake that now keeps the recipe from being worked out.");
                InlayHint { offset: place(line), label: format!("was {value}"), tooltip, category, text_edit: None }
            }
        };
        self.hints.push(hint);
    }
}

/// Where a line of the old block stands in the new one, if it lies in what both begin with or in what both end with.
fn unchanged(old: &Block, new: &Block, line: usize) -> Option<usize> {
    let same = |(one, other): &(&Arc<Line>, &Arc<Line>)| one.text == other.text;
    let (before, now) = (old.lines.len(), new.lines.len());
    let begin = old.lines.iter().zip(&new.lines).take_while(same).count();
    let end = old.lines.iter().rev().zip(new.lines.iter().rev()).take_while(same).count().min(before.min(now) - begin);
    match line {
        line if line < begin => Some(line),
        line if line >= before - end => Some(line + now - before),
        _ => None,
    }
}

fn shown(lines: &[&LineOutcome], show: impl Fn(&LineOutcome) -> String) -> Option<String> {
    joined(&lines.iter().map(|line| show(line)).collect::<Vec<String>>())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    /// The text with every hint in brackets where it is shown.
    fn check(text: &str) -> String {
        let fixture = fixture(text);
        let mut shown = fixture.text.clone();
        let hints = inlay_hints(&fixture.snapshot, fixture.file, Span::new(0, fixture.text.len()));
        for hint in hints.iter().rev() {
            shown.insert_str(hint.offset, &format!(" ⟨{}⟩", hint.label));
        }
        shown
    }

    #[test]
    fn values_stand_behind_what_they_belong_to() {
        // 50 mmol of Tris (121.136 g/mol), 5 mmol of NaCl (58.44 g/mol).
        let shown = check("solution Buffer # ours\n    made at    25 °C\n    800 mL     water\n    50 mmol/L  Tris        # base\n    0.2922 g   sodium chloride\n    q.s.       1 mol/L hydrochloric acid to pH 8.10\n    q.s.       water to 1 L\n    expect     pH 8.0 to 8.2\n");
        let lines: Vec<&str> = shown.lines().collect();
        assert!(lines[0].starts_with("solution Buffer ⟨pH 8.") && lines[0].contains(" · I 0.03") && lines[0].ends_with(" mol/L⟩ # ours"), "{shown}");
        assert_eq!(lines[2], "    800 mL     water", "{shown}");
        assert_eq!(lines[3], "    50 mmol/L  Tris ⟨= 6.057 g⟩        # base", "{shown}");
        assert_eq!(lines[4], "    0.2922 g   sodium chloride ⟨= 5.00 mmol/L⟩", "{shown}");
        assert!(lines[5].contains("to pH 8.10 ⟨took 2") && lines[5].ends_with(" mL⟩"), "{shown}");
        assert!(lines[6].starts_with("    q.s.       water to 1 L ⟨took 1"), "{shown}");
        assert!(lines[7].starts_with("    expect     pH 8.0 to 8.2 ⟨now 8."), "{shown}");
    }

    #[test]
    fn a_pair_shows_both_amounts() {
        let shown = check("solution P\n    made at    25 °C\n    25 mmol/L  sodium dihydrogen phosphate / disodium hydrogen phosphate to pH 7.00\n    q.s.       water to 1 L\n");
        let line = shown.lines().nth(2).unwrap();
        assert!(line.contains("to pH 7.00 ⟨= ") && line.contains(" g / ") && line.ends_with(" g⟩"), "{shown}");
    }

    #[test]
    fn a_series_shows_its_first_and_last() {
        let shown = check("solution Stock\n    made at    25 °C\n    5.844 g    sodium chloride\n    q.s.       water to 1 L\n\nsolution Level\n    made at    25 °C\n    1, 2, 4 mL  Stock\n    q.s.       water to 100 mL\n");
        assert!(shown.contains("1, 2, 4 mL  Stock ⟨= 1.00 to 4.00 mmol/L⟩"), "{shown}");
    }

    #[test]
    fn a_computed_amount_can_be_written_down() {
        let fixture = fixture("solution Buffer\n    made at    25 °C\n    800 mL     water\n    50 mmol/L  Tris\n    q.s.       1 mol/L hydrochloric acid to pH 8.10\n    q.s.       water to 1 L\n");
        let hints = inlay_hints(&fixture.snapshot, fixture.file, Span::new(0, fixture.text.len()));
        let with_edit: Vec<&InlayHint> = hints.iter().filter(|hint| hint.text_edit.is_some()).collect();
        let [took] = with_edit.as_slice() else { panic!("{hints:?}") };
        assert_eq!(took.category, HintCategory::Taken);
        assert!(took.text_edit.as_ref().unwrap().1.starts_with(", about 2"), "{took:?}");
    }

    #[test]
    fn what_was_known_before_a_mistake_stays_beside_the_lines_that_did_not_change() {
        let good = "solution A\n    made at    25 °C\n    0.2922 g   sodium chloride\n    1 g        sucrose\n    q.s.       water to 1 L\n\nsolution B\n    1 g        sucrose\n    q.s.       water to 1 L\n";
        let mut fixture = fixture(good);
        let mut shown = |text: &str| -> Vec<String> {
            let snapshot = fixture.retyped(text);
            let hints = inlay_hints(&snapshot, fixture.file, Span::new(0, text.len()));
            assert!(hints.iter().all(|hint| !hint.label.starts_with("was") || hint.text_edit.is_none()));
            hints.into_iter().map(|hint| format!("{}: {}", text[..hint.offset].matches('\n').count(), hint.label)).collect()
        };
        let before = shown(good);
        assert!(before.contains(&"2: = 5.00 mmol/L".to_owned()), "{before:?}");
        // A line half written, then another: lines keep what was known of them, and the other solution its own values.
        let half = shown(&good.replacen("    1 g        sucrose\n", "    1 g        suc\n    2 \n", 1));
        assert!(half.contains(&"2: was 5.00 mmol/L".to_owned()), "{half:?}");
        assert!(half.iter().all(|hint| !hint.starts_with("3:") && !hint.starts_with("4:")), "{half:?}");
        assert!(half.iter().any(|hint| hint.starts_with("5: was ")), "{half:?}");
        assert!(half.iter().any(|hint| hint.starts_with("8: = ")), "{half:?}");
        let other = shown(&good.replacen("0.2922 g ", "0.29 ", 1));
        assert!(other.iter().all(|hint| !hint.starts_with("2:")), "{other:?}");
        assert_eq!(shown(good), before);
    }

    #[test]
    fn nothing_is_shown_of_a_recipe_without_values() {
        assert_eq!(check("solution A\n    1 g        water of nowhere\n    q.s.       water to 1 L\n").matches('⟨').count(), 0);
    }
}
