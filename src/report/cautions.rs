//! What a sheet warns of: the hazards of what goes in, in the words of the Globally Harmonized System, and what must not meet.

use serde::Serialize;

use super::Subject;
use super::sheet::{Column, Part, Table};
use crate::evaluate::Outcome;
use crate::library::hazard_statement;
use crate::model::{Block, Body};

/// What every sheet with hazards ends in.
pub const DEFERENCE: &str = "These are hazards of the substances as they are bought, from the lists that their entries name; dilution can \
lessen them, and mixing can bring others. The list need not be complete. Read the safety data sheets; local rules and qualified staff decide.";

/// The hazards of one thing that goes in.
#[derive(Debug, PartialEq, Serialize)]
pub struct Hazard {
    /// The substance or bottle.
    pub name: String,
    /// GHS codes.
    pub codes: Vec<String>,
    /// What it must be kept away from.
    pub keep_away_from: Vec<String>,
}

/// The hazards of everything that goes in, stocks looked into, each once, in bench order.
pub fn hazards(subject: &Subject, outcome: &Outcome) -> Vec<Hazard> {
    let lines = outcome.lines.iter().map(|line| &line.definition);
    let keys = lines.chain(outcome.solutes.iter().map(|solute| &solute.definition));
    let mut hazards: Vec<Hazard> = Vec::new();
    for key in keys {
        let Some(hazard) = subject.selection.definition(key).and_then(|block| hazard(block)) else { continue };
        if !hazards.contains(&hazard) {
            hazards.push(hazard);
        }
    }
    hazards
}

/// The hazards of a block, where it names any.
pub fn hazard(block: &Block) -> Option<Hazard> {
    let (codes, away) = match &block.body {
        Body::Substance(substance) => {
            (substance.hazards.clone(), substance.keep_away_from.iter().map(|other| other.text.clone()).collect())
        }
        Body::Bottle(recipe) | Body::Solution(recipe) => (recipe.hazards.clone(), Vec::new()),
        _ => return None,
    };
    let hazard = Hazard { name: block.name.as_ref()?.text.clone(), codes, keep_away_from: away };
    (!hazard.codes.is_empty() || !hazard.keep_away_from.is_empty()).then_some(hazard)
}

/// Hazards as a sheet shows them; nothing where there are none.
pub fn cautions(hazards: &[Hazard]) -> Vec<Part> {
    if hazards.is_empty() {
        return Vec::new();
    }
    let mut codes: Vec<&String> = hazards.iter().flat_map(|hazard| &hazard.codes).collect();
    codes.sort();
    codes.dedup();
    let named: Vec<Vec<String>> = hazards
        .iter()
        .map(|hazard| vec![hazard.name.clone(), hazard.codes.join(", "), hazard.keep_away_from.join(", ")])
        .collect();
    let statements: Vec<String> = codes
        .iter()
        .map(|code| match hazard_statement(code) {
            Some(wording) => format!("{code}: {wording}"),
            None => format!("{code}: see the safety data sheet."),
        })
        .collect();
    vec![
        Part::Table(Table {
            columns: vec![Column::words("substance"), Column::words("GHS"), Column::words("keep away from")],
            rows: named,
        }),
        Part::List(statements),
        Part::Paragraph(DEFERENCE.to_owned()),
    ]
}
