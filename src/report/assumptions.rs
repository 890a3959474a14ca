//! What the numbers of a sheet take for granted, one sentence each.

use super::Subject;
use super::reasons::model_name;
use crate::chemistry::{State, Warning};
use crate::evaluate::{DEFAULT_TEMPERATURE_K, Outcome};
use crate::model::Body;
use crate::units::format;

/// What was taken for granted when the solution was worked out.
pub fn assumptions(subject: &Subject, outcome: &Outcome) -> Vec<String> {
    let mut said = vec![temperature(subject, outcome)];
    if let Ok(state) = &outcome.finished {
        said.push(model(state));
    }
    said.push(match &outcome.above {
        Some(above) => format!("The finished solution is closed; in use it is in equilibrium with {} above it, and no solid has formed.", above.name),
        None => "The solution is closed: no gas goes in or out, what is in it has come to equilibrium, and no solid has formed.".to_owned(),
    });
    said.extend(by_count(subject, outcome));
    said.extend(ideal_solutions(subject, outcome));
    for point in &outcome.set_points {
        if let Some(entry) = point.liquid_of.and_then(|entry| subject.recipe.entries.get(entry)) {
            let (set, made_up) = (subject.line(point.at), subject.line(entry.at));
            said.push(format!("The liquid of line {made_up} counts as present when the pH is set on line {set}."));
        }
    }
    if !outcome.made_up {
        said.push("Nothing is made up to a mark: the volume is worked out from mass and density.".to_owned());
    }
    if let Ok(state) = &outcome.finished {
        if state.volume_is_estimated {
            said.push("Some molar volumes are estimated, so that volume and density are less sure than usual.".to_owned());
        }
        said.extend(state.warnings.iter().map(|warning| doubt(state, warning)));
    }
    said
}

/// What goes in by count holds something, and nobody says what.
fn by_count(subject: &Subject, outcome: &Outcome) -> impl Iterator<Item = String> {
    outcome.lines.iter().filter(|line| line.by_count).map(|line| {
        format!("Line {}: what {} holds is not stated, and is not counted.", subject.line(line.at), line.name)
    })
}

/// A strength before a name that no bottle or solution of the library is.
fn ideal_solutions(subject: &Subject, outcome: &Outcome) -> Vec<String> {
    let mut said = Vec::new();
    for line in &outcome.lines {
        let Some(entry) = subject.recipe.entries.get(line.entry) else { continue };
        let has_strength = entry.action.ingredients().iter().any(|reference| reference.text == line.name && reference.strength.is_some());
        let is_substance = subject.selection.definition(&line.definition).is_some_and(|block| matches!(block.body, Body::Substance(_)));
        if has_strength && is_substance {
            said.push(format!(
                "Line {}: no bottle or solution in scope is just that, so {} at that strength in water is taken.",
                subject.line(line.at),
                line.name
            ));
        }
    }
    said
}

fn temperature(subject: &Subject, outcome: &Outcome) -> String {
    let shown = format::temperature(outcome.made_at_K);
    if subject.recipe.made_at.is_some() {
        format!("It is made at {shown}, as stated; volumes are those at that temperature.")
    } else if outcome.made_at_half_width_K > 0.0 {
        let half_width = format::fixed(outcome.made_at_half_width_K, 1);
        format!("It is made at {shown} ± {half_width} °C, the middle of the room's range.")
    } else if outcome.made_at_K == DEFAULT_TEMPERATURE_K {
        format!("Nothing states where it is made; {shown} is assumed.")
    } else {
        format!("It is made at {shown}, the room's temperature.")
    }
}

fn model(state: &State) -> String {
    let model = model_name(state.settings().model);
    format!("Activity coefficients follow {model}; pH is −log a(H⁺) on the molality scale.")
}

/// A reason to doubt, as a sentence.
fn doubt(state: &State, warning: &Warning) -> String {
    let species = |id| state.chemistry().species(id).map_or("an ion", |species| species.name.as_str()).to_owned();
    match warning {
        Warning::IonicStrengthBeyondModel { ionic_strength_mol_per_kg, limit_mol_per_kg } => format!(
            "The ionic strength of {} is beyond the {} up to which the model is trusted.",
            format::molality(*ionic_strength_mol_per_kg, 3),
            format::molality(*limit_mol_per_kg, 2),
        ),
        Warning::NoInteraction { ionic_strength_mol_per_kg, cation, anion } => format!(
            "No interaction coefficient of {} with {} is known, which matters at an ionic strength of {}.",
            species(*cation),
            species(*anion),
            format::molality(*ionic_strength_mol_per_kg, 3),
        ),
        Warning::ConstantBeyondTemperature { constant, temperature_K } => format!(
            "The {} is used beyond the temperatures for which it is known, at {}.",
            state.chemistry().constant(*constant).map_or("constant of a species", |constant| constant.name.as_str()),
            format::temperature(*temperature_K),
        ),
        Warning::MostlyNotWater { water_fraction } => format!(
            "Water makes up only {} of the mass, so that the aqueous model hardly applies.",
            format::percent(*water_fraction, 2),
        ),
    }
}
