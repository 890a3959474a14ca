//! The words of one line of a sheet: how much is taken of what, and to what.

use super::Subject;
use crate::evaluate::{LineOutcome, Role};
use crate::model::{Action, Addition, Amount, Goal, GoalKind, Reference, StrengthKind};
use crate::units::{Dimension, format};

/// Significant figures of what is weighed and measured.
const FIGURES: usize = 4;

/// How much is taken: as written where the line states it, else worked out.
pub fn amount_taken(subject: &Subject, line: &LineOutcome) -> String {
    let measured = |figures: usize| match line.volume_L {
        Some(volume) => format::volume(volume, figures),
        None => format::mass(line.mass_kg, figures),
    };
    if line.role == Role::Alternative {
        return format!("or {}", measured(FIGURES));
    }
    match subject.recipe.entries.get(line.entry).map(|entry| &entry.action) {
        Some(Action::Add(addition)) => {
            let about = if addition.about { "about " } else { "" };
            let amount = match addition.qualifiers.by_weight {
                true => format::mass(line.mass_kg, FIGURES),
                false => as_stated(subject, line, addition).unwrap_or_else(|| measured(FIGURES)),
            };
            format!("{about}{amount}{}", tolerance(subject, line, addition))
        }
        // What a meter or a mark decides is known only about.
        Some(Action::MakeUp(_)) => format!("about {}", measured(3)),
        _ => measured(FIGURES),
    }
}

/// A mass or volume in the author's own digits; other quantities are worked out.
fn as_stated(subject: &Subject, line: &LineOutcome, addition: &Addition) -> Option<String> {
    let amount = addition.amounts.get(subject.member_index).or(addition.amounts.last())?;
    if !matches!(amount.dimension(), Dimension::Mass | Dimension::Volume | Dimension::Count) {
        return None;
    }
    // In a series the unit stands once, after the last value.
    let is_whole = addition.amounts.len() == 1 && !subject.is_taken_over(line.at);
    Some(if is_whole { subject.written(line.at.line, amount.span) } else { plainly(amount) })
}

fn plainly(amount: &Amount) -> String {
    format!("{} {}", format::plain(amount.unit.from_base(amount.value)), amount.unit.symbol())
}

fn tolerance(subject: &Subject, line: &LineOutcome, addition: &Addition) -> String {
    match addition.qualifiers.tolerance.filter(|_| !subject.is_taken_over(line.at)) {
        Some(stated) => {
            let words = subject.written(stated.at.line, stated.at.span);
            format!(" ± {}", words.trim_start_matches(['±', ' ']))
        }
        None => String::new(),
    }
}

/// What is taken: strength and name as written, the stock that it comes from, what it is taken to.
pub fn name_taken(subject: &Subject, line: &LineOutcome) -> String {
    let Some(entry) = subject.recipe.entries.get(line.entry) else { return line.name.clone() };
    match &entry.action {
        Action::Add(addition) => match &addition.qualifiers.from {
            Some(from) => format!("{}, for {}", with_strength(subject, line, from), addition.what.text),
            None => with_strength(subject, line, &addition.what),
        },
        Action::Alternative(addition) => with_strength(subject, line, &addition.what),
        Action::MakeUp(make_up) => {
            let used = make_up.alternative.as_ref().filter(|other| other.text == line.name).unwrap_or(&make_up.what);
            let name = with_strength(subject, line, used);
            match make_up.goals.get(subject.member_index).or(make_up.goals.last()) {
                Some(goal) => format!("{name} to {}", goal_words(subject, line, goal)),
                None => name,
            }
        }
        Action::Pair(pair) => {
            let name = with_strength(subject, line, if pair.second.text == line.name { &pair.second } else { &pair.first });
            match pair.goals.get(subject.member_index).or(pair.goals.last()) {
                Some(goal) => format!("{name} (both to {})", goal_words(subject, line, goal)),
                None => name,
            }
        }
        _ => line.name.clone(),
    }
}

fn with_strength(subject: &Subject, line: &LineOutcome, reference: &Reference) -> String {
    match reference.strength {
        None => reference.text.clone(),
        Some(strength) if !subject.is_taken_over(line.at) => {
            subject.written(reference.at.line, strength.span.to(reference.at.span))
        }
        Some(strength) => match strength.kind {
            StrengthKind::Concentration(amount) => format!("{} {}", plainly(&amount), reference.text),
            StrengthKind::Ratio { of_it, of_water } => {
                format!("({} + {}) {}", format::plain(of_it), format::plain(of_water), reference.text)
            }
        },
    }
}

fn goal_words(subject: &Subject, line: &LineOutcome, goal: &Goal) -> String {
    let is_only = match subject.recipe.entries.get(line.entry).map(|entry| &entry.action) {
        Some(action) => action.goals().len() == 1,
        None => true,
    };
    if is_only && !subject.is_taken_over(line.at) {
        return subject.written(goal.at.line, goal.at.span).trim_start_matches("to ").to_owned();
    }
    match &goal.kind {
        GoalKind::Volume { litres, .. } => format::volume(*litres, FIGURES),
        GoalKind::Mass { kilograms, .. } => format::mass(*kilograms, FIGURES),
        GoalKind::Property { property, aim, unit, .. } => format!("{} {}", property.words(), property.shown(*aim, *unit)),
        GoalKind::Saturation => "saturation".to_owned(),
        GoalKind::ByEye(words) => format!("\"{words}\""),
    }
}
