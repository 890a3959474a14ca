//! A solution as the author of a method and its reviewer want to read it: what to weigh and measure, what comes out, what was
//! expected of it, and what to mind.

use super::assumptions::assumptions;
use super::cautions::{cautions, hazards};
use super::line_words::{amount_taken, name_taken};
use super::phases;
use super::sheet::{Column, Part, Sheet, Table};
use super::solution::{conductivity, reason};
use super::Subject;
use crate::chemistry::{ALKALINITY_END_POINT_pH, State};
use crate::evaluate::{LineOutcome, Outcome, SetPoint, Verdict, hardness_mol_per_L};
use crate::model::{self, Action, Body, Stated, Storage};
use crate::units::format;

/// Significant figures of what is weighed and measured.
const FIGURES: usize = 4;

/// The sheet of a solution.
pub fn solution_sheet(subject: &Subject) -> Sheet {
    let mut sheet = Sheet { title: subject.member.name.clone(), identity: identity(subject), sections: Vec::new() };
    match subject.member.outcome.as_deref() {
        Some(outcome) => {
            sheet.section("", vec![Part::Facts(facts(subject, outcome))]);
            sheet.section("To weigh and measure", vec![Part::Table(ingredients(subject, outcome))]);
            sheet.section("Setting the pH", outcome.set_points.iter().map(|point| set_point(subject, point)).collect());
            sheet.section("Steps", vec![steps(subject)]);
            sheet.section("To write down", vec![records(subject)]);
            sheet.section("Parts", vec![Part::Table(parts(subject, outcome))]);
            sheet.section("Keeping", vec![Part::List(keeping(subject))]);
            sheet.section("Expected", vec![Part::Table(expected(subject, outcome))]);
            sheet.section("In the finished solution", vec![Part::Table(totals(outcome))]);
            if let Ok(state) = &outcome.finished {
                sheet.section("Solids and gases", phases::parts(state));
            }
            sheet.section("Taken for granted", vec![Part::List(assumptions(subject, outcome))]);
            sheet.section("Cautions", cautions(&hazards(subject, outcome)));
        }
        None => {
            sheet.section("", vec![Part::Paragraph("This recipe has no values; the findings below say why.".to_owned())]);
            sheet.section("Steps", vec![steps(subject)]);
        }
    }
    sheet.section("Findings", vec![Part::List(findings(subject))]);
    sheet
}

/// The same with what settles out of the finished solution.
pub fn settled_sheet(subject: &Subject) -> Sheet {
    let mut sheet = solution_sheet(subject);
    if let Some(outcome) = subject.member.outcome.as_deref() {
        sheet.section("When all that forms has settled", phases::settled_parts(outcome));
    }
    sheet
}

fn identity(subject: &Subject) -> Vec<String> {
    let mut identity = vec![subject.place()];
    if let Some(Stated { value: document, .. }) = &subject.recipe.document {
        let mut words = document.code.clone();
        if let Some(revision) = &document.revision {
            words.push_str(&format!(", revision {revision}"));
        }
        if let Some(effective) = &document.effective {
            words.push_str(&format!(", effective {effective}"));
        }
        identity.push(words);
    }
    identity
}

pub(super) fn facts(subject: &Subject, outcome: &Outcome) -> Vec<(String, String)> {
    let made_at = format::temperature(outcome.made_at_K);
    let mut facts = vec![(
        "makes".to_owned(),
        format!("{} ({}), at {made_at}", format::volume(outcome.volume_L, FIGURES), format::mass(outcome.mass_kg, FIGURES)),
    )];
    let mut fact = |name: &str, value: String| facts.push((name.to_owned(), value));
    if let Some(fold) = subject.recipe.concentrate {
        fact("concentrate", format!("{} times as strong as used", format::plain(fold.value)));
    }
    if let Some(standard) = &subject.recipe.standardised_against {
        fact("standardised", format!("against {}", standard.text));
    }
    if let Some((computed, found)) = outcome.found {
        let computed = format::concentration(computed, FIGURES);
        fact("found strength", format!("{} (by weighing {computed})", format::concentration(found, FIGURES)));
    }
    match &outcome.finished {
        Err(failure) => fact("state", format!("not worked out: {failure}")),
        Ok(state) => {
            let set = outcome.set_points.last().map(|point| point.state.pH());
            let as_set = set.map(|set| format!(", set to {} before the rest", format::ph(set)));
            fact("pH", format!("{} at {made_at}{}", format::ph(state.pH()), as_set.unwrap_or_default()));
            for (temperature_K, state) in &outcome.uses {
                let under = outcome.above.as_ref().map_or_else(String::new, |above| {
                    format!(" under {} kPa {}", format::significant(above.pressure_Pa(*temperature_K) / 1000.0, 3), above.name)
                });
                let name = format!("pH at {}{under}", format::temperature(*temperature_K));
                match state {
                    Ok(state) => fact(&name, format::ph(state.pH())),
                    Err(failure) => fact(&name, format!("not worked out: {failure}")),
                }
            }
            if let Some(Ok(settled)) = &outcome.drift {
                fact("pH in air", format::ph(settled.state.pH()));
            }
            for one in &outcome.removed {
                let name = state.chemistry().phase(one.phase).map_or("", |phase| phase.name.as_str());
                fact(&format!("taken out on line {}", subject.line(one.at)), format!("{} of {name}", format::mass(one.mass_kg, 3)));
            }
            state_facts(state, &mut fact);
        }
    }
    facts
}

fn state_facts(state: &State, fact: &mut impl FnMut(&str, String)) {
    fact("pH per kelvin", signed(state.dpH_dT_per_K(), 3));
    if let Ok(value) = state.dilution_value() {
        fact("dilution value", format!("{} (pH change with an equal volume of water)", signed(value, 2)));
    }
    fact("buffer capacity", format!("{} per unit of pH", format::concentration(state.buffer_capacity_mol_per_L(), 3)));
    let molality = format::molality(state.ionic_strength_mol_per_kg, 3);
    fact("ionic strength", format!("{} ({molality})", format::concentration(state.ionic_strength_mol_per_L(), 3)));
    if let Some(conductivity) = conductivity(state) {
        fact("conductivity", format!("{} at {}", format::conductivity(conductivity, 3), format::temperature(state.temperature_K)));
    }
    fact("osmolality", format::osmolality(state.osmolality_mol_per_kg(), 3));
    fact("water activity", format::fixed(state.water_activity(), 4));
    let holds = |name: &str| state.totals_mol_per_L().any(|(id, _)| state.chemistry().component(id).is_some_and(|one| one.name == name));
    if holds("carbonate")
        && let Ok(alkalinity) = state.alkalinity_mol_per_L()
    {
        fact("alkalinity", format!("{} (strong acid to pH {})", format::concentration(alkalinity, 3), ALKALINITY_END_POINT_pH));
    }
    let hardness = hardness_mol_per_L(state);
    if hardness > 0.0 {
        fact("hardness", format!("{} (calcium and magnesium)", format::concentration(hardness, 3)));
    }
    fact("density", format::density(state.density_kg_per_m3(), FIGURES));
}

fn signed(value: f64, decimals: usize) -> String {
    let shown = format::fixed(value, decimals);
    if value > 0.0 { format!("+{shown}") } else { shown }
}

fn ingredients(subject: &Subject, outcome: &Outcome) -> Table {
    let rows = outcome.lines.iter().map(|line| {
        // How many moles of water there are helps nobody.
        let counts = |value: Option<f64>| value.filter(|_| !is_water(subject, line));
        vec![
            subject.line(line.at).to_string(),
            amount_taken(subject, line),
            name_taken(subject, line),
            counts(line.amount_mol).map(|amount| format::amount(amount, FIGURES)).unwrap_or_default(),
            counts(line.concentration_mol_per_L).map(|brought| format::concentration(brought, FIGURES)).unwrap_or_default(),
        ]
    });
    Table {
        columns: vec![
            Column::numbers("line"),
            Column::numbers("take"),
            Column::words("of"),
            Column::numbers("amount"),
            Column::numbers("finished"),
        ],
        rows: rows.collect(),
    }
}

fn is_water(subject: &Subject, line: &LineOutcome) -> bool {
    let block = subject.selection.definition(&line.definition);
    block.is_some_and(|block| matches!(&block.body, Body::Substance(substance) if model::is_water(substance)))
}

fn set_point(subject: &Subject, point: &SetPoint) -> Part {
    let window = match point.window {
        Some((low, high)) => format!(" ({} to {})", format::ph(low), format::ph(high)),
        None => String::new(),
    };
    let (window, elsewhere) = match point.elsewhere {
        true => (String::new(), format!("; at the temperature or dilution of the target that is {}{window}", format::ph(point.aim))),
        false => (window, String::new()),
    };
    Part::Paragraph(format!(
        "Line {}: from pH {} to {}{window} on the meter, in {}{elsewhere}.",
        subject.line(point.at),
        format::ph(point.pH_before),
        format::ph(point.state.pH()),
        format::volume(point.state.volume_L, 3),
    ))
}

fn steps(subject: &Subject) -> Part {
    Part::List(subject.recipe.steps.iter().map(|step| format!("Line {}: {}", subject.line(step.at), step.value)).collect())
}

fn records(subject: &Subject) -> Part {
    let records = subject.recipe.records.iter();
    Part::List(records.map(|record| format!("Line {}: {} ________", subject.line(record.at), record.value)).collect())
}

/// What a recipe that is divided comes to, part by part, in the words of its dividers.
fn parts(subject: &Subject, outcome: &Outcome) -> Table {
    let divider = |entry: usize| match subject.recipe.entries.get(entry).map(|entry| &entry.action) {
        Some(Action::Divider(model::Part::BeforeUse)) => "before use",
        Some(Action::Divider(model::Part::AfterAutoclaving)) => "after autoclaving",
        _ => "",
    };
    let words = std::iter::once("ahead").chain(outcome.parts.iter().map(|part| divider(part.entry)));
    let states = outcome.parts.iter().map(|part| (part.volume_L, &part.state));
    let states = states.chain((!outcome.parts.is_empty()).then_some((outcome.volume_L, &outcome.finished)));
    let rows = words.zip(states).map(|(words, (volume_L, state))| {
        let pH = state.as_ref().map_or_else(|failure| format!("not worked out: {failure}"), |state| format::ph(state.pH()));
        vec![words.to_owned(), format::volume(volume_L, FIGURES), pH]
    });
    Table { columns: vec![Column::words("part"), Column::numbers("comes to"), Column::numbers("pH")], rows: rows.collect() }
}

fn keeping(subject: &Subject) -> Vec<String> {
    let whole = |line: usize| {
        let text = subject.block.lines.get(line).map_or(0, |line| line.text.len());
        subject.written(line, crate::text::Span::new(0, text))
    };
    let is_divided = subject.recipe.entries.iter().any(|entry| matches!(entry.action, Action::Divider(_)));
    let of_part = |storage: &Storage| match storage.part {
        _ if !is_divided => "",
        0 => "ahead: ",
        _ => "once added to: ",
    };
    let stored = |storage: &Storage| match subject.recipe.like.as_ref().filter(|_| subject.is_taken_over(storage.at)) {
        Some(like) => format!("kept as {}", like.text),
        None => format!("{}{}", of_part(storage), subject.written(storage.at.line, storage.at.span)),
    };
    let mut said: Vec<String> = subject.recipe.storage.iter().map(stored).collect();
    said.extend(subject.recipe.ready_after.iter().map(|stated| without_comment(&whole(stated.at.line))));
    said.extend(subject.recipe.use_within.iter().map(|stated| without_comment(&whole(stated.at.line))));
    said
}

/// A line without the comment at its end.
fn without_comment(line: &str) -> String {
    line.split(" # ").next().unwrap_or_default().trim().to_owned()
}

fn expected(subject: &Subject, outcome: &Outcome) -> Table {
    let rows = outcome.verdicts.iter().map(|verdict| {
        let words = subject.written(verdict.at.line, verdict.at.span);
        vec![
            subject.line(verdict.at).to_string(),
            words.strip_prefix("expect ").unwrap_or(&words).to_owned(),
            format::temperature(verdict.temperature_K),
            verdict.value.map(|value| verdict.property.shown(value, verdict.unit)).unwrap_or_default(),
            judged(subject, verdict),
        ]
    });
    Table {
        columns: vec![
            Column::numbers("line"),
            Column::words("expected"),
            Column::numbers("at"),
            Column::numbers("found"),
            Column::words(""),
        ],
        rows: rows.collect(),
    }
}

fn judged(subject: &Subject, verdict: &Verdict) -> String {
    match verdict.holds {
        Some(true) => "holds".to_owned(),
        Some(false) => "does not hold".to_owned(),
        None => reason(subject, verdict).unwrap_or_default(),
    }
}

fn totals(outcome: &Outcome) -> Table {
    let mut rows = Vec::new();
    if let Ok(state) = &outcome.finished {
        let mut totals: Vec<(f64, &str)> = state
            .totals_mol_per_L()
            .filter_map(|(id, concentration)| Some((concentration, state.chemistry().component(id)?.name.as_str())))
            .filter(|(concentration, _)| *concentration > 0.0)
            .collect();
        totals.sort_by(|one, other| other.0.total_cmp(&one.0).then(one.1.cmp(other.1)));
        rows.extend(totals.into_iter().map(|(concentration, name)| {
            vec![name.to_owned(), format::concentration(concentration, FIGURES)]
        }));
    }
    Table { columns: vec![Column::words("constituent, all forms"), Column::numbers("total")], rows }
}

fn findings(subject: &Subject) -> Vec<String> {
    subject
        .findings()
        .map(|located| {
            let finding = &located.finding;
            let line = subject.line(finding.at);
            let help = if finding.help.is_empty() { String::new() } else { format!(" {}", finding.help) };
            format!("{} {}, line {line}: {}{help}", finding.level.word(), finding.code.name(), finding.message)
        })
        .collect()
}
