//! What a thing is, in a line.

use std::sync::Arc;

use super::values::{Values, finished_ph};
use crate::model::{Block, Body, Ion, Substance};
use crate::syntax::tree::BlockKind;
use crate::text::FileId;
use crate::units::format;
use crate::workspace::Snapshot;

/// The word for a kind of block.
pub fn kind_word(kind: BlockKind) -> &'static str {
    match kind {
        BlockKind::Solution => "solution",
        BlockKind::Bottle => "bottle",
        BlockKind::Substance => "substance",
        BlockKind::Ion => "ion",
        BlockKind::Solid => "solid",
        BlockKind::Danger => "danger",
        BlockKind::Group => "group",
        BlockKind::Lab => "lab",
    }
}

/// What stands beside a block's name in lists: a solution's pH, a substance's formula and molar mass.
pub fn detail(snapshot: &Snapshot, file: FileId, index: usize, block: &Arc<Block>) -> String {
    match &block.body {
        Body::Solution(_) => {
            let ph = Values::of(snapshot, file, index).and_then(|values| finished_ph(&values.outcomes()));
            ph.map_or_else(String::new, |ph| format!("pH {ph}"))
        }
        Body::Bottle(recipe) => match recipe.entries.first() {
            Some(entry) => block.lines.get(entry.at.line).map_or_else(String::new, |line| {
                entry.at.span.of(&line.text).split_whitespace().collect::<Vec<_>>().join(" ")
            }),
            None => String::new(),
        },
        Body::Substance(substance) => substance_detail(substance),
        Body::Ion(ion) => ion_detail(ion),
        Body::Solid(solid) => solid.formula.as_ref().map_or_else(String::new, |(formula, _)| formula.clone()),
        Body::Danger(danger) => danger.raises.map_or_else(String::new, |code| code.name().to_owned()),
        Body::Group(group) => format!("{} things", group.holds.len()),
        Body::Lab(lab) => lab.room.map_or_else(String::new, |room| {
            let (low, high) = room.value;
            format!("{} to {}", format::temperature(low), format::temperature(high))
        }),
        Body::None => String::new(),
    }
}

/// Formula and molar mass of a substance.
pub fn substance_detail(substance: &Substance) -> String {
    let formula = substance.formula.as_ref().map(|(formula, _)| formula.clone());
    let mass = substance.molar_mass.map(molar_mass);
    let inert = substance.inert.then(|| "not modelled".to_owned());
    formula.into_iter().chain(mass).chain(inert).collect::<Vec<_>>().join(", ")
}

/// Formula and charge of an ion.
pub fn ion_detail(ion: &Ion) -> String {
    let formula = ion.formula.as_ref().map(|(formula, _)| formula.clone());
    let charge = format!("charge {}", charge(ion.charge));
    formula.into_iter().chain([charge]).collect::<Vec<_>>().join(", ")
}

/// A charge number with its sign, a real minus.
pub fn charge(charge: i32) -> String {
    match charge {
        0 => "0".to_owned(),
        1.. => format!("+{charge}"),
        _ => format!("−{}", charge.unsigned_abs()),
    }
}

/// A molar mass, g/mol.
pub fn molar_mass(kg_per_mol: f64) -> String {
    format!("{} g/mol", format::fixed(1000.0 * kg_per_mol, 2))
}

/// The caution that belongs to a substance with hazard statements.
pub fn caution(name: &str, hazards: &[String]) -> Option<String> {
    if hazards.is_empty() {
        return None;
    }
    Some(format!("Caution: {name} carries GHS {} – see the safety data sheet and the local rules.", hazards.join(", ")))
}
