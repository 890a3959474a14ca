//! How the numbers of a solution came about, as a sheet for an audit.

use super::reasons::{ReasonsReport, reasons_report};
use super::sheet::{Column, Part, Sheet, Table};
use super::Subject;
use crate::units::format;

/// Species below this molality (mol/kg) are only counted.
const LEAST_MOLALITY: f64 = 1e-9;

/// The sections that say how the numbers came about, on a sheet of their own.
pub fn reasons_sheet(subject: &Subject) -> Sheet {
    let title = format!("{}: how the numbers came about", subject.member.name);
    let mut sheet = Sheet { title, identity: vec![subject.place()], sections: Vec::new() };
    let Some(reasons) = reasons_report(subject) else {
        sheet.section("", vec![Part::Paragraph("This recipe has no state; its findings say why.".to_owned())]);
        return sheet;
    };
    sheet.section("", vec![Part::Facts(facts(&reasons))]);
    sheet.section("Constants, those that move the pH most first", vec![constants(&reasons), weak_constants(&reasons)]);
    sheet.section("Activity coefficients", activities(&reasons));
    sheet.section("Interactions of ions", vec![interactions(&reasons), weak_interactions(&reasons)]);
    sheet.section("Balances", vec![balances(&reasons), Part::Paragraph(closing(&reasons))]);
    sheet.section("Taken for granted", vec![Part::List(reasons.assumptions)]);
    sheet
}

fn facts(reasons: &ReasonsReport) -> Vec<(String, String)> {
    let slope = reasons.debye_hueckel_slope.map(|slope| format!(", Debye–Hückel slope {} (kg/mol)^½", format::fixed(slope, 4)));
    let mut facts = vec![
        ("program".to_owned(), format!("scruple {}, built-in library {}", reasons.program, reasons.library)),
        ("model".to_owned(), format!("{}{}", reasons.activity_model, slope.unwrap_or_default())),
    ];
    if let Some(second) = &reasons.second_model {
        let pH = second.pH.map_or_else(|| "no value".to_owned(), format::ph);
        facts.push(("second view".to_owned(), format!("pH {pH} by {}", second.name)));
    }
    facts.push(("solved in".to_owned(), format!("{} steps", reasons.solver_steps)));
    facts
}

fn shown(value: Option<f64>, decimals: usize) -> String {
    value.map(|value| format::fixed(value, decimals)).unwrap_or_default()
}

fn signed(value: Option<f64>, decimals: usize) -> String {
    value.map(|value| format!("{}{}", if value > 0.0 { "+" } else { "" }, format::fixed(value, decimals))).unwrap_or_default()
}

fn source(source: Option<&String>, place: Option<&String>) -> String {
    let words: Vec<&str> = source.into_iter().chain(place).map(String::as_str).collect();
    words.join("; ")
}

fn constants(reasons: &ReasonsReport) -> Part {
    let rows = reasons.constants.iter().map(|used| {
        let beyond = if used.within_its_range { "" } else { ", used beyond it" };
        vec![
            used.name.clone(),
            shown(used.value, 3),
            shown(used.at_25_C, 3),
            shown(used.standard_uncertainty, 3),
            signed(used.pH_per_unit, 3),
            format!("{}{beyond}", used.course),
            source(used.source.as_ref(), used.place.as_ref()),
        ]
    });
    Part::Table(Table {
        columns: vec![
            Column::words("constant"),
            Column::numbers("here"),
            Column::numbers("at 25 °C"),
            Column::numbers("u"),
            Column::numbers("pH per unit"),
            Column::words("over temperature"),
            Column::words("source"),
        ],
        rows: rows.collect(),
    })
}

fn weak_constants(reasons: &ReasonsReport) -> Part {
    Part::Paragraph(match reasons.constants_without_influence {
        0 => String::new(),
        1 => "1 more constant takes part and hardly moves the pH.".to_owned(),
        count => format!("{count} more constants take part and hardly move the pH."),
    })
}

fn activities(reasons: &ReasonsReport) -> Vec<Part> {
    let plenty: Vec<_> = reasons.activities.iter().filter(|activity| activity.mol_per_kg >= Some(LEAST_MOLALITY)).collect();
    let rows = plenty.iter().map(|activity| {
        vec![
            activity.species.clone(),
            activity.mol_per_kg.map(|molality| format::molality(molality, 4)).unwrap_or_default(),
            shown(activity.activity_coefficient, 3),
            shown(activity.log10_activity, 3),
        ]
    });
    let table = Table {
        columns: vec![
            Column::words("species"),
            Column::numbers("molality"),
            Column::numbers("γ"),
            Column::numbers("log activity"),
        ],
        rows: rows.collect(),
    };
    let rest = reasons.activities.len() - plenty.len();
    let words = match rest {
        0 => String::new(),
        1 => "1 more species is there at less than 1 nmol/kg.".to_owned(),
        _ => format!("{rest} more species are there at less than 1 nmol/kg each."),
    };
    vec![Part::Table(table), Part::Paragraph(words)]
}

fn interactions(reasons: &ReasonsReport) -> Part {
    let rows = reasons.interactions.iter().map(|used| {
        let [one, other] = &used.between;
        vec![
            format!("{one} with {other}"),
            signed(used.epsilon_kg_per_mol, 3),
            shown(used.standard_uncertainty, 3),
            shown(used.largest_effect, 4),
            source(used.source.as_ref(), used.place.as_ref()),
        ]
    });
    Part::Table(Table {
        columns: vec![
            Column::words("between"),
            Column::numbers("ε, kg/mol"),
            Column::numbers("u"),
            Column::numbers("log γ by up to"),
            Column::words("source"),
        ],
        rows: rows.collect(),
    })
}

fn weak_interactions(reasons: &ReasonsReport) -> Part {
    Part::Paragraph(match reasons.interactions_without_influence {
        0 => String::new(),
        1 => "1 more coefficient takes part and changes no log γ by 0.001.".to_owned(),
        count => format!("{count} more coefficients take part and change no log γ by 0.001."),
    })
}

fn balances(reasons: &ReasonsReport) -> Part {
    let rows = reasons.balances.iter().map(|balance| {
        vec![
            balance.of.clone(),
            balance.given_mol.map(|amount| format::amount(amount, 6)).unwrap_or_default(),
            balance.found_mol.map(|amount| format::amount(amount, 6)).unwrap_or_default(),
            balance.relative_residual.map(residual).unwrap_or_default(),
        ]
    });
    Part::Table(Table {
        columns: vec![
            Column::words("balance of"),
            Column::numbers("went in"),
            Column::numbers("in the species"),
            Column::numbers("difference"),
        ],
        rows: rows.collect(),
    })
}

/// A relative difference by its order of magnitude; the last bits of a sum say nothing.
fn residual(relative: f64) -> String {
    if relative < 1e-15 { "below 1e-15".to_owned() } else { format!("{relative:.0e}") }
}

fn closing(reasons: &ReasonsReport) -> String {
    match reasons.relative_charge {
        Some(charge) if charge.abs() >= 1e-15 => {
            format!("The charges of all species cancel but for {} of their sum.", residual(charge.abs()))
        }
        _ => "The charges of all species cancel.".to_owned(),
    }
}
