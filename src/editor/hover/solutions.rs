//! A solution in a few rows: its pH first, then what a reviewer asks next.

use super::super::page::Page;
use super::super::target::definition_of;
use super::super::values::{Values, is_hardly_buffered, joined, judged, shown_ph};
use crate::chemistry::State;
use crate::evaluate::{Outcome, Verdict};
use crate::finding::Level;
use crate::model::{Body, Expectation};
use crate::text::FileId;
use crate::units::format;
use crate::workspace::Snapshot;

/// How many members of a series, and how many expectations, are shown.
const SHOWN: usize = 8;

/// The values of a solution; `in_full` where the cursor stands on its own header.
pub fn rows(snapshot: &Snapshot, file: FileId, block: usize, in_full: bool, page: &mut Page) {
    let Some(values) = Values::of(snapshot, file, block) else { return };
    let outcomes = values.outcomes();
    match outcomes.as_slice() {
        [] => no_values(snapshot, file, block, page),
        [outcome] => one(outcome, in_full, page),
        _ => {
            for (member, outcome) in values.evaluation.members.iter().zip(&outcomes).take(SHOWN) {
                let ph = outcome.finished.as_ref().map_or_else(|_| "no pH".to_owned(), |state| format!("pH {}", shown_ph(state)));
                page.row(member.name.clone(), ph);
            }
            if outcomes.len() > SHOWN {
                page.row(format!("and {} more", outcomes.len() - SHOWN), "");
            }
        }
    }
    if in_full {
        for expectation in values.recipe.expectations.iter().take(SHOWN) {
            let verdicts = values.verdicts_on(expectation.at.line);
            page.row_if(&format!("expect {}", expectation.property.words()), verdict(expectation, &verdicts));
        }
        if let [outcome, ..] = outcomes.as_slice() {
            cautions(snapshot, outcome, page);
        }
    }
}

fn no_values(snapshot: &Snapshot, file: FileId, block: usize, page: &mut Page) {
    let of_block = snapshot.findings(file).iter().filter(|located| located.block == block);
    let errors = of_block.filter(|located| located.finding.level == Level::Error).count();
    page.sentence(match errors {
        0 => "It has no values.".to_owned(),
        1 => "It has no values while there is an error in it.".to_owned(),
        _ => format!("It has no values while there are {errors} errors in it."),
    });
}

fn one(outcome: &Outcome, in_full: bool, page: &mut Page) {
    let state = match &outcome.finished {
        Ok(state) => state,
        Err(failure) => {
            page.sentence(format!("No pH: {failure}."));
            return;
        }
    };
    let assumed = if outcome.made_at_half_width_K > 0.0 { " (middle of the room's range)" } else { "" };
    page.row("pH", format!("{} at {}{assumed}", shown_ph(state), format::temperature(outcome.made_at_K)));
    let is_other = |kelvin: f64| outcome.above.is_some() || (kelvin - outcome.made_at_K).abs() > 0.05;
    for (kelvin, used) in outcome.uses.iter().filter(|(kelvin, _)| is_other(*kelvin)).take(4) {
        let value = used.as_ref().map_or_else(|failure| format!("none: {failure}"), shown_ph);
        let under = outcome.above.as_ref().map_or_else(String::new, |above| {
            format!(", under {} kPa {}", format::significant(above.pressure_Pa(*kelvin) / 1000.0, 2), above.name)
        });
        page.row("", format!("{value} at {} (use{under})", format::temperature(*kelvin)));
    }
    for point in &outcome.set_points {
        page.row("", format!("{} as set, from {}", format::ph(point.state.pH()), format::ph(point.pH_before)));
    }
    if let Some(Ok(settled)) = &outcome.drift {
        page.row("", format!("{} in air, to which it is open", shown_ph(&settled.state)));
    }
    page.row("ionic strength", format::concentration(state.ionic_strength_mol_per_L(), 3));
    page.row("buffer capacity", format!("{} per unit of pH", format::concentration(state.buffer_capacity_mol_per_L(), 3)));
    if in_full && !is_hardly_buffered(state) {
        details(state, page);
    }
    if in_full {
        page.row("osmolality", format::osmolality(state.osmolality_mol_per_kg(), 3));
        let conductivity = state.conductivity();
        if conductivity.unknown_share < 0.01 {
            let place = format::temperature(state.temperature_K);
            page.row("conductivity", format!("{} at {place}", format::conductivity(conductivity.value_S_per_m, 3)));
        }
        page.row("density", format!("{}{}", format::density(state.density_kg_per_m3(), 4), if state.volume_is_estimated { " (estimated)" } else { "" }));
    }
    page.row("volume", format!("{} at {}", format::volume(outcome.volume_L, 4), format::temperature(outcome.made_at_K)));
    if in_full {
        page.row("mass", format::mass(outcome.mass_kg, 4));
        solids(state, page);
        if is_hardly_buffered(state) {
            page.sentence("Hardly buffered: the air and traces on the glass decide its pH.");
        }
        if !state.warnings.is_empty() {
            page.sentence("The activity model is at the end of its range here, or beyond it: take the values as a guide.");
        }
    }
}

/// The solids that the solution is nearest to, most saturated first.
fn solids(state: &State, page: &mut Page) {
    let chemistry = state.chemistry();
    let mut near: Vec<(f64, &str)> = (state.saturation_indices().into_iter())
        .filter_map(|(id, index)| Some((index, chemistry.phase(id).filter(|phase| phase.holds_at(chemistry, state.temperature_K))?)))
        .filter(|(index, _)| *index > -1.0)
        .map(|(index, phase)| (index, phase.name.as_str()))
        .collect();
    near.sort_by(|one, other| other.0.total_cmp(&one.0));
    for (index, name) in near.into_iter().take(4) {
        page.row(format!("saturation index of {name}"), signed(index, 2));
    }
}

fn details(state: &State, page: &mut Page) {
    page.row("pH with temperature", format!("{} per °C", signed(state.dpH_dT_per_K(), 4)));
    if let Ok(change) = state.dilution_value() {
        page.row("pH on dilution", format!("{} with an equal volume of water", signed(change, 2)));
    }
}

/// A change with its sign, a real minus.
pub fn signed(value: f64, decimals: usize) -> String {
    let text = format::fixed(value, decimals);
    match text.strip_prefix('-') {
        Some(positive) => format!("−{positive}"),
        None => format!("+{text}"),
    }
}

/// The values of an expectation and whether it holds.
fn verdict(expectation: &Expectation, verdicts: &[&Verdict]) -> Option<String> {
    let value = judged(verdicts)?;
    let holds = verdicts.iter().all(|verdict| verdict.holds == Some(true));
    let word = if holds { "holds" } else { "fails" };
    Some(format!("{value}: {word} ({})", range(expectation)))
}

/// The range of an expectation in words.
pub fn range(expectation: &Expectation) -> String {
    let show = |value: f64| expectation.property.shown(value, expectation.unit);
    match (expectation.low, expectation.high) {
        (Some(low), Some(high)) => joined(&[show(low), show(high)]).unwrap_or_default(),
        (Some(low), None) => format!("at least {}", show(low)),
        (None, Some(high)) => format!("at most {}", show(high)),
        (None, None) => String::new(),
    }
}

/// The hazard statements of what the solution is made from. What the mixture itself must be labelled with is not worked out.
fn cautions(snapshot: &Snapshot, outcome: &Outcome, page: &mut Page) {
    let mut said: Vec<String> = Vec::new();
    for solute in &outcome.solutes {
        let Some(definition) = definition_of(snapshot, &solute.definition) else { continue };
        let hazards = match &definition.block.body {
            Body::Substance(substance) => &substance.hazards,
            Body::Solution(recipe) | Body::Bottle(recipe) => &recipe.hazards,
            _ => continue,
        };
        let text = format!("{} ({})", solute.name, hazards.join(", "));
        if !hazards.is_empty() && !said.contains(&text) {
            said.push(text);
        }
    }
    if said.is_empty() {
        return;
    }
    let rest = said.len().saturating_sub(4);
    let more = if rest > 0 { format!(" and {rest} more") } else { String::new() };
    said.truncate(4);
    page.sentence(format!("Caution: made from substances with GHS hazard statements: {}{more} – see the safety data sheets and the local rules.", said.join("; ")));
}
