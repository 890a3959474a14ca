//! What the built-in library says of a name, as people read it: formula, what it gives in water, constants with their sources,
//! hazards.

use super::cautions::DEFERENCE;
use super::sheet::{Column, Part, Sheet, Table};
use super::substance::{ConstantReport, Counted, Entry, IonReport, LibraryReport, SolidReport, SubstanceReport};
use crate::units::format;

/// A sheet for each thing that was found.
pub fn library_sheets(report: &LibraryReport) -> Vec<Sheet> {
    let substances = report.substances.iter().map(substance_sheet);
    let ions = report.ions.iter().map(ion_sheet);
    let solids = report.solids.iter().map(solid_sheet);
    substances.chain(ions).chain(solids).collect()
}

fn sheet<T>(entry: &Entry<T>, kind: &str) -> Sheet {
    Sheet {
        title: entry.name.clone(),
        identity: vec![format!("{kind} of the built-in library"), format!("{}, line {}", entry.file, entry.line)],
        sections: Vec::new(),
    }
}

fn substance_sheet(entry: &Entry<SubstanceReport>) -> Sheet {
    let mut sheet = sheet(entry, "substance");
    let facts = &entry.facts;
    let mut rows = Vec::new();
    add(&mut rows, "also", (!entry.also.is_empty()).then(|| entry.also.join(", ")));
    add(&mut rows, "formula", facts.formula.clone());
    add(&mut rows, "molar mass", facts.molar_mass_g_per_mol.map(|mass| format!("{} g/mol", format::fixed(mass, 3))));
    add(&mut rows, "CAS", facts.CAS.clone());
    add(&mut rows, "form", facts.form.clone());
    add(&mut rows, "density", facts.density_g_per_mL.map(|density| format!("{} g/mL", format::plain(density))));
    for solubility in &facts.solubility {
        let at = solubility.temperature_C.map(|celsius| format!(" at {} °C", format::plain(celsius))).unwrap_or_default();
        add(&mut rows, "solubility", solubility.value.map(|value| format!("{} {}{at}", format::plain(value), solubility.unit)));
    }
    add(&mut rows, "gives in water", gives(facts));
    add(&mut rows, "keep away from", (!facts.keep_away_from.is_empty()).then(|| facts.keep_away_from.join(", ")));
    add(&mut rows, "source", entry.source.clone());
    sheet.section("", vec![Part::Facts(rows)]);
    let density = facts.aqueous.iter().map(|row| {
        vec![
            row.mass_fraction.map(|fraction| format!("{} % w/w", format::plain(100.0 * fraction))).unwrap_or_default(),
            row.density_g_per_mL.map(|density| format!("{} g/mL", format::fixed(density, 4))).unwrap_or_default(),
            row.temperature_C.map(|celsius| format!("{} °C", format::plain(celsius))).unwrap_or_default(),
        ]
    });
    let henry = facts.log10_KH.iter().map(|constant| constant_row("log KH".to_owned(), constant)).collect();
    sheet.section("From the gas into water, per bar", vec![Part::Table(constants_table("constant", henry))]);
    let columns = vec![Column::numbers("strength"), Column::numbers("density"), Column::numbers("at")];
    sheet.section("Its solutions in water", vec![Part::Table(Table { columns, rows: density.collect() })]);
    if !facts.hazards.is_empty() {
        let statement = |hazard: &super::substance::HazardReport| match hazard.statement {
            Some(wording) => format!("{}: {wording}", hazard.code),
            None => format!("{}: see the safety data sheet.", hazard.code),
        };
        let statements = facts.hazards.iter().map(statement).collect();
        sheet.section("Cautions", vec![Part::List(statements), Part::Paragraph(DEFERENCE.to_owned())]);
    }
    sheet
}

fn add(rows: &mut Vec<(String, String)>, name: &str, value: Option<String>) {
    rows.extend(value.map(|value| (name.to_owned(), value)));
}

fn gives(facts: &SubstanceReport) -> Option<String> {
    if facts.inert {
        return Some("nothing that counts: it is inert".to_owned());
    }
    if facts.gives.is_empty() {
        return Some("itself, as it is".to_owned());
    }
    let mut parts = counted(&facts.gives);
    match facts.water_mol_per_mol {
        Some(water) if water > 0.0 => parts.push_str(&format!(", with {} water", format::plain(water))),
        Some(water) if water < 0.0 => parts.push_str(&format!(", taking up {} water", format::plain(-water))),
        _ => {}
    }
    Some(parts)
}

fn counted(parts: &[Counted]) -> String {
    let one = |part: &Counted| {
        if part.count == 1.0 { part.name.clone() } else { format!("{} {}", format::plain(part.count), part.name) }
    };
    parts.iter().map(one).collect::<Vec<_>>().join(", ")
}

fn ion_sheet(entry: &Entry<IonReport>) -> Sheet {
    let mut sheet = sheet(entry, "ion");
    let facts = &entry.facts;
    let mut rows = Vec::new();
    add(&mut rows, "also", (!entry.also.is_empty()).then(|| entry.also.join(", ")));
    add(&mut rows, "formula", facts.formula.clone());
    add(&mut rows, "charge", Some(facts.charge.to_string()));
    add(&mut rows, "molar mass", facts.molar_mass_g_per_mol.map(|mass| format!("{} g/mol", format::fixed(mass, 3))));
    add(&mut rows, "source", entry.source.clone());
    sheet.section("", vec![Part::Facts(rows)]);
    let constants = facts.pKa.iter().map(|constant| constant_row(constant.of.clone().unwrap_or_default(), constant)).collect();
    sheet.section("pKa at 25 °C and zero ionic strength", vec![Part::Table(constants_table("acid", constants))]);
    let complexes = facts
        .complexes
        .iter()
        .map(|complex| {
            let own = if complex.itself == 1.0 { String::new() } else { format!(", {} {}", format::plain(complex.itself), entry.name) };
            let parts = format!("{}{own}", counted(&complex.partners));
            let name = complex.name.as_ref().map_or(parts.clone(), |name| format!("{name} ({parts})"));
            constant_row(name, &complex.log10_K)
        })
        .collect();
    sheet.section("Complexes: log K of the overall formation", vec![Part::Table(constants_table("complex", complexes))]);
    let interactions = facts.interactions.iter().map(|interaction| {
        vec![
            interaction.of.clone().unwrap_or_else(|| entry.name.clone()),
            interaction.with.clone(),
            interaction.epsilon_kg_per_mol.map(|value| format!("{} kg/mol", format::plain(value))).unwrap_or_default(),
            interaction.standard_uncertainty.map(|u| format!("± {}", format::plain(u))).unwrap_or_default(),
            interaction.source.clone().unwrap_or_default(),
        ]
    });
    let columns = vec![
        Column::words("of"),
        Column::words("with"),
        Column::numbers("epsilon"),
        Column::words(""),
        Column::words("source"),
    ];
    sheet.section("Specific interactions", vec![Part::Table(Table { columns, rows: interactions.collect() })]);
    for (heading, unit, values) in [
        ("Molar volume in water", "cm³/mol", &facts.molar_volumes_cm3_per_mol),
        ("Limiting molar conductivity", "S·cm²/mol", &facts.molar_conductivities_S_cm2_per_mol),
    ] {
        let rows = values.iter().map(|value| {
            vec![
                value.of.clone().unwrap_or_else(|| entry.name.clone()),
                value.value.map(|number| format!("{} {unit}", format::plain(number))).unwrap_or_default(),
                value.source.clone().unwrap_or_default(),
            ]
        });
        let columns = vec![Column::words("of"), Column::numbers("value"), Column::words("source")];
        sheet.section(heading, vec![Part::Table(Table { columns, rows: rows.collect() })]);
    }
    sheet
}

fn solid_sheet(entry: &Entry<SolidReport>) -> Sheet {
    let mut sheet = sheet(entry, "solid");
    let facts = &entry.facts;
    let mut rows = Vec::new();
    add(&mut rows, "formula", facts.formula.clone());
    add(&mut rows, "dissolves to", Some(counted(&facts.gives)));
    add(&mut rows, "forms", Some(facts.forms.to_owned()));
    add(&mut rows, "source", entry.source.clone());
    sheet.section("", vec![Part::Facts(rows)]);
    let constants = facts.log10_Ksp.iter().map(|constant| constant_row("log Ksp".to_owned(), constant)).collect();
    sheet.section("Solubility product", vec![Part::Table(constants_table("constant", constants))]);
    sheet
}

fn constants_table(of: &'static str, rows: Vec<Vec<String>>) -> Table {
    let columns = vec![
        Column::words(of),
        Column::numbers("value"),
        Column::words(""),
        Column::words("over temperature"),
        Column::words("source"),
    ];
    Table { columns, rows }
}

fn constant_row(name: String, constant: &ConstantReport) -> Vec<String> {
    let value = match constant.standard_uncertainty {
        Some(uncertainty) => constant.at_25_C.map(|value| format::with_uncertainty(value, uncertainty).0),
        None => constant.at_25_C.map(format::plain),
    };
    let uncertainty = constant.standard_uncertainty.map(|u| format!("± {}", format::plain(u))).unwrap_or_default();
    vec![name, value.unwrap_or_default(), uncertainty, course(constant), constant.source.clone().unwrap_or_default()]
}

/// How the constant changes with temperature.
fn course(constant: &ConstantReport) -> String {
    if let Some(equation) = &constant.equation {
        let range = match (equation.from_C, equation.to_C) {
            (Some(low), Some(high)) => format!(", {} °C to {} °C", format::plain(low), format::plain(high)),
            _ => String::new(),
        };
        let mut terms = format!("{}/T + {}", equation.a, equation.b);
        if equation.c != 0.0 {
            terms.push_str(&format!(" + {} T", equation.c));
        }
        if equation.d != 0.0 {
            terms.push_str(&format!(" + {} ln T", equation.d));
        }
        return format!("{}{range}", terms.replace("+ -", "- "));
    }
    match (constant.enthalpy_kJ_per_mol, constant.heat_capacity_J_per_mol_K) {
        (Some(enthalpy), Some(capacity)) => format!("{} kJ/mol, {} J/(mol·K)", format::plain(enthalpy), format::plain(capacity)),
        (Some(enthalpy), None) => format!("{} kJ/mol", format::plain(enthalpy)),
        _ => "not known".to_owned(),
    }
}
