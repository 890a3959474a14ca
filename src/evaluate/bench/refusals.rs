//! What is said of a target that the beaker cannot meet.

use super::Bench;
use crate::evaluate::goods::Goods;
use crate::evaluate::names::listed;
use crate::evaluate::plan::Planned;
use crate::evaluate::Refusal;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Goal, GoalKind, Property};
use crate::units::{Unit, format};

impl Bench<'_, '_> {
    pub(super) fn nothing_to_set(&self, line: &Planned) -> Refusal {
        Finding::new(Code::NoSolvent, line.at, "There is no liquid in the beaker whose pH could be set.")
            .help("Write the water above this line, or make up to a volume or mass below it.")
            .into()
    }

    pub(super) fn wrong_way(&self, line: &Planned, goal: &Goal, titrants: &[Goods], before: f64, aim: f64) -> Refusal {
        let names: Vec<&str> = titrants.iter().map(|titrant| titrant.name.as_str()).collect();
        let (direction, needed) = if aim > before { ("lowers", "base") } else { ("raises", "acid") };
        Finding::new(
            Code::WrongWayTitrant,
            goal.at,
            format!(
                "Before this line the pH is {before:.2}; {} {direction} it, so pH {} is not reached.",
                listed(&names),
                format::plain(aim)
            ),
        )
        .help(format!("Adjust with {} {needed} instead, or change what is above.", if needed == "base" { "a" } else { "an" }))
        .related(line.at, "the line that adjusts")
        .into()
    }

    pub(super) fn out_of_reach(&self, line: &Planned, goal: &Goal, titrant: &Goods, before: f64, aim: f64, furthest: f64) -> Refusal {
        Finding::new(
            Code::TargetOutOfReach,
            goal.at,
            format!(
                "{} takes the pH from {before:.2} to {furthest:.2} and no further, so pH {} is not reached.",
                titrant.name,
                format::plain(aim)
            ),
        )
        .help(if aim > before { "Use a stronger base." } else { "Use a stronger acid." })
        .related(line.at, "the line that adjusts")
        .into()
    }

    pub(super) fn pair_out_of_reach(&self, line: &Planned, goal: &Goal, property: &Property, one: f64, other: f64) -> Refusal {
        let unit = unit_of(goal);
        let (low, high) = (one.min(other), one.max(other));
        Finding::new(
            Code::TargetOutOfReach,
            goal.at,
            format!(
                "The two members reach {} {} to {}, not {}.",
                property.words(),
                format::with_unit(low, unit),
                format::with_unit(high, unit),
                format::with_unit(aim_of(goal), unit)
            ),
        )
        .help("Choose another pair, or another target.")
        .related(line.at, "the pair")
        .into()
    }

    pub(super) fn already_passed(&self, goal: &Goal, property: &Property, value: f64) -> Refusal {
        let unit = unit_of(goal);
        Finding::new(
            Code::TargetAlreadyPassed,
            goal.at,
            format!(
                "Without this line the {} is already {}, more than {}.",
                property.words(),
                format::with_unit(value, unit),
                format::with_unit(aim_of(goal), unit)
            ),
        )
        .help("Raise the target, or lower what the other lines bring.")
        .into()
    }

    pub(super) fn adjust_out_of_reach(&self, goal: &Goal, property: &Property, reached: f64) -> Refusal {
        let unit = unit_of(goal);
        Finding::new(
            Code::TargetOutOfReach,
            goal.at,
            format!(
                "However much goes in, the {} comes to {} and not to {}.",
                property.words(),
                format::with_unit(reached, unit),
                format::with_unit(aim_of(goal), unit)
            ),
        )
        .help("Adjust with something that brings more of it.")
        .into()
    }
}

pub(super) fn unit_of(goal: &Goal) -> Option<Unit> {
    match &goal.kind {
        GoalKind::Property { unit, .. } => *unit,
        _ => None,
    }
}

pub(super) fn aim_of(goal: &Goal) -> f64 {
    match &goal.kind {
        GoalKind::Property { aim, .. } => *aim,
        _ => f64::NAN,
    }
}

pub(super) fn overfull(at: Anchor, holds: &str, mark: &str) -> Refusal {
    Finding::new(Code::Overfull, at, format!("The beaker already holds {holds} at this line, more than {mark}."))
        .help("Begin with less liquid, use stronger stocks, or make more.")
        .into()
}
