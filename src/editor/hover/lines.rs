//! What a line does: what is measured out for it, what it brings, what it took, whether it holds.

use super::super::cursor::Cursor;
use super::super::names::names;
use super::super::page::Page;
use super::super::target::{definition_of, meanings};
use super::super::values::{Values, measured_out};
use super::molar_mass_of;
use super::solutions::range;
use crate::evaluate::{LineOutcome, Outcome, Role, Verdict};
use crate::model::{Body, Definition, Expectation, is_water};
use crate::units::format;
use crate::workspace::Snapshot;

/// What the line under the cursor does, with a title of its own.
pub fn of_line(snapshot: &Snapshot, cursor: &Cursor) -> Option<Page> {
    let values = Values::of(snapshot, cursor.file.id, cursor.block_index)?;
    if let Some(expectation) = values.recipe.expectations.iter().find(|one| cursor.is_on_line(one.at)) {
        return Some(expectation_page(expectation, &values.verdicts_on(cursor.line_index)));
    }
    let (entry, _) = values.entry_on(cursor.line_index)?;
    let outcome = values.outcomes().first().copied()?;
    let mut page = Page::new();
    for line in outcome.lines.iter().filter(|line| line.entry == entry) {
        page.title(line.name.clone(), "");
        rows(snapshot, outcome, line, &mut page);
    }
    series_note(&values, &mut page);
    Some(page)
}

/// What the line under the cursor does with one of the things that it names.
pub fn of_name(snapshot: &Snapshot, cursor: &Cursor, definition: &Definition) -> Page {
    let mut page = Page::new();
    let Some(values) = Values::of(snapshot, cursor.file.id, cursor.block_index) else { return page };
    let (Some((entry, _)), Some(outcome)) = (values.entry_on(cursor.line_index), values.outcomes().first().copied()) else {
        return page;
    };
    let lines: Vec<&LineOutcome> = outcome.lines.iter().filter(|line| line.entry == entry).collect();
    let meant = lines.iter().find(|line| line.definition == definition.key);
    // A strength before a name, and `from`, take the thing out of something else.
    let only = || match lines.as_slice() {
        [line] => Some(line),
        _ => None,
    };
    if let Some(line) = meant.or_else(only) {
        rows(snapshot, outcome, line, &mut page);
        series_note(&values, &mut page);
    }
    page
}

fn series_note(values: &Values, page: &mut Page) {
    if let (Some(first), true) = (values.evaluation.members.first(), values.evaluation.members.len() > 1) {
        page.sentence(format!("Values of {}.", first.name));
    }
}

fn rows(snapshot: &Snapshot, outcome: &Outcome, line: &LineOutcome, page: &mut Page) {
    let label = match (line.role, line.volume_L) {
        (Role::MakesUp | Role::Adjusts, _) => "took",
        (_, Some(_)) => "measure out",
        (_, None) => "weigh",
    };
    let mass = format::mass(line.mass_kg, 4);
    page.row(label, match line.volume_L {
        Some(_) => format!("{} ({mass})", measured_out(line, 4)),
        None => mass,
    });
    let definition = definition_of(snapshot, &line.definition);
    let body = definition.as_ref().map(|definition| &definition.block.body);
    // Of the liquid that fills up nobody asks how many moles it is.
    if !matches!(body, Some(Body::Substance(substance)) if is_water(substance)) {
        let is_stock = definition.as_ref().is_some_and(|definition| definition.block.recipe().is_some());
        let label = if is_stock { "amount dissolved in it" } else { "amount" };
        page.row_if(label, line.amount_mol.map(|moles| format::amount(moles, 4)));
        page.row_if("in the finished solution", line.concentration_mol_per_L.map(|value| format::concentration(value, 4)));
    }
    if let Some(point) = outcome.set_points.iter().find(|point| point.entry == line.entry) {
        page.row("pH before", format::ph(point.pH_before));
        page.row("pH as set", format::ph(point.state.pH()));
        if let Ok(finished) = &outcome.finished {
            page.row("pH when finished", format::ph(finished.pH()));
        }
    }
}

/// What became of an expectation, with its margin to the nearer limit.
fn expectation_page(expectation: &Expectation, verdicts: &[&Verdict]) -> Page {
    let mut page = Page::new();
    page.title(format!("expect {}", expectation.property.words()), range(expectation));
    if verdicts.is_empty() {
        page.sentence("It is judged once the recipe has values.");
    }
    for verdict in verdicts.iter().take(10) {
        let place = format!("at {}", format::temperature(verdict.temperature_K));
        let dilution = if verdict.fold > 1.0 { format!(", diluted {}-fold", format::plain(verdict.fold)) } else { String::new() };
        page.row(format!("{place}{dilution}"), match (verdict.value, verdict.holds) {
            (Some(value), Some(true)) => format!("{}, holds{}", verdict.property.shown(value, verdict.unit), margin(verdict, value)),
            (Some(value), _) => format!("{}, fails", verdict.property.shown(value, verdict.unit)),
            (None, _) => "no value".to_owned(),
        });
    }
    page
}

/// How far a value that holds is from the nearer limit.
fn margin(verdict: &Verdict, value: f64) -> String {
    let above = verdict.low.map(|low| (value - low, "above the lower limit"));
    let below = verdict.high.map(|high| (high - value, "below the upper limit"));
    let nearer = above.into_iter().chain(below).min_by(|one, other| one.0.total_cmp(&other.0));
    nearer.map_or_else(String::new, |(margin, words)| match verdict.unit {
        // A difference of temperatures or of logarithms has no zero to be converted from.
        Some(unit) => format!(", {} {} {words}", format::significant(unit.from_base(margin) - unit.from_base(0.0), 2), unit.symbol()),
        None => format!(", {} {words}", format::ph(margin)),
    })
}

/// The substance that the line under the cursor is about, by its name and molar mass (kg/mol).
pub fn substance_of_line(snapshot: &Snapshot, cursor: &Cursor) -> Option<(String, f64)> {
    let statement = cursor.statement()?;
    let name = names(statement, cursor.block.kind()).into_iter().next()?;
    match meanings(snapshot, cursor.file.id, &name).as_slice() {
        [definition] => Some((definition.name().to_owned(), molar_mass_of(definition)?)),
        _ => None,
    }
}
