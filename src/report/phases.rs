//! Solids and gases beside a solution, as machines and people read them.

use serde::Serialize;

use super::Subject;
use super::number::{celsius, number};
use super::sheet::{Column, Part, Table};
use crate::chemistry::{Forming, Phase, PhaseKind, State, phase_mass_kg};
use crate::evaluate::{Outcome, Removed};
use crate::units::format;

/// Solids further from saturation than this are not listed, log₁₀.
const NEAR: f64 = -1.0;

/// Gases of a lower partial pressure are not listed, Pa.
const LEAST_PASCAL: f64 = 0.1;

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct SaturationReport {
    pub solid: String,
    pub saturation_index: Option<f64>,
    pub standard_uncertainty: Option<f64>,
    pub forms: &'static str,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct GasReport {
    pub gas: String,
    pub partial_pressure_kPa: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct RemovedReport {
    pub line: usize,
    pub name: String,
    pub amount_mol: Option<f64>,
    pub mass_g: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct DriftReport {
    pub pH: Option<f64>,
    pub carbon_dioxide_taken_up_mol_per_L: Option<f64>,
    pub why: Option<String>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct SettledReport {
    pub temperature_C: Option<f64>,
    pub pH: Option<f64>,
    pub ionic_strength_mol_per_kg: Option<f64>,
    pub solids: Vec<SettledSolidReport>,
    pub why: Option<String>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct SettledSolidReport {
    pub solid: String,
    pub amount_mol: Option<f64>,
    pub mass_g: Option<f64>,
}

fn forms(phase: &Phase) -> &'static str {
    match phase.kind {
        PhaseKind::Solid(Forming::Readily) => "readily",
        PhaseKind::Solid(Forming::Slowly) => "slowly",
        PhaseKind::Solid(Forming::AtOnce) => "at once",
        PhaseKind::Solid(Forming::OnFreezing) => "on freezing",
        PhaseKind::Solid(Forming::InPassing) => "in passing",
        PhaseKind::Gas => "",
    }
}

/// The solids that a state is near to or beyond saturation with, most saturated first.
pub(super) fn saturation(state: &State) -> Vec<SaturationReport> {
    let chemistry = state.chemistry();
    let mut found: Vec<(f64, &Phase)> = (state.saturation_indices().into_iter())
        .filter_map(|(id, index)| Some((index, chemistry.phase(id)?)))
        .filter(|(index, phase)| *index > NEAR && phase.holds_at(chemistry, state.temperature_K))
        .collect();
    found.sort_by(|one, other| other.0.total_cmp(&one.0).then_with(|| one.1.name.cmp(&other.1.name)));
    let report = |(index, phase): (f64, &Phase)| SaturationReport {
        solid: phase.name.clone(),
        saturation_index: number(index),
        standard_uncertainty: number(phase.standard_uncertainty(chemistry)).filter(|uncertainty| *uncertainty > 0.0),
        forms: forms(phase),
    };
    found.into_iter().map(report).collect()
}

/// The gases over a state, greatest pressure first.
pub(super) fn gases(state: &State) -> Vec<GasReport> {
    let chemistry = state.chemistry();
    let mut found: Vec<(f64, &Phase)> = (state.partial_pressures_Pa().into_iter())
        .filter(|(_, pascal)| *pascal >= LEAST_PASCAL)
        .filter_map(|(id, pascal)| Some((pascal, chemistry.phase(id)?)))
        .collect();
    found.sort_by(|one, other| other.0.total_cmp(&one.0).then_with(|| one.1.name.cmp(&other.1.name)));
    found.into_iter().map(|(pascal, gas)| GasReport { gas: gas.name.clone(), partial_pressure_kPa: number(pascal / 1000.0) }).collect()
}

/// What was filtered or driven off.
pub(super) fn removed(subject: &Subject, outcome: &Outcome) -> Vec<RemovedReport> {
    let name = |one: &Removed| {
        let chemistry = outcome.finished.as_ref().ok().map(State::chemistry);
        chemistry.and_then(|chemistry| chemistry.phase(one.phase)).map_or_else(String::new, |phase| phase.name.clone())
    };
    let report = |one: &Removed| RemovedReport {
        line: subject.line(one.at),
        name: name(one),
        amount_mol: number(one.amount_mol),
        mass_g: number(1000.0 * one.mass_kg),
    };
    outcome.removed.iter().map(report).collect()
}

/// Where an open solution drifts.
pub(super) fn drift(outcome: &Outcome) -> Option<DriftReport> {
    let drift = outcome.drift.as_ref()?;
    Some(DriftReport {
        pH: drift.as_ref().ok().and_then(|settled| number(settled.state.pH())),
        carbon_dioxide_taken_up_mol_per_L: (drift.as_ref().ok())
            .and_then(|settled| settled.taken_up.first())
            .and_then(|(_, amount)| number(amount / outcome.volume_L)),
        why: drift.as_ref().err().map(ToString::to_string),
    })
}

/// The solution when everything that forms has settled out.
pub(super) fn settled(outcome: &Outcome) -> Option<SettledReport> {
    let state = outcome.finished.as_ref().ok()?;
    let chemistry = state.chemistry();
    let temperature_C = celsius(state.temperature_K);
    Some(match state.settled(Phase::forms) {
        Ok(settled) => SettledReport {
            temperature_C,
            pH: number(settled.state.pH()),
            ionic_strength_mol_per_kg: number(settled.state.ionic_strength_mol_per_kg),
            solids: (settled.solids.into_iter())
                .filter_map(|(id, amount)| {
                    Some(SettledSolidReport {
                        solid: chemistry.phase(id)?.name.clone(),
                        amount_mol: number(amount),
                        mass_g: number(1000.0 * phase_mass_kg(chemistry, id, amount)),
                    })
                })
                .collect(),
            why: None,
        },
        Err(failure) => {
            SettledReport { temperature_C, pH: None, ionic_strength_mol_per_kg: None, solids: Vec::new(), why: Some(failure.to_string()) }
        }
    })
}

/// Solids and gases for the sheet.
pub(super) fn parts(state: &State) -> Vec<Part> {
    let solids = saturation(state).into_iter().map(|solid| {
        let index = solid.saturation_index.map(|index| format::fixed(index, 2)).unwrap_or_default();
        vec![solid.solid, index, solid.forms.to_owned()]
    });
    let columns = vec![Column::words("solid"), Column::numbers("saturation index"), Column::words("forms")];
    let solids = Table { columns, rows: solids.collect() };
    let gases = gases(state).into_iter().map(|gas| {
        vec![gas.gas, gas.partial_pressure_kPa.map(|pressure| format!("{} kPa", format::significant(pressure, 2))).unwrap_or_default()]
    });
    let gases = Table { columns: vec![Column::words("gas over it"), Column::numbers("partial pressure")], rows: gases.collect() };
    vec![Part::Table(solids), Part::Table(gases)]
}

/// What settles out, for the sheet.
pub(super) fn settled_parts(outcome: &Outcome) -> Vec<Part> {
    let Some(settled) = settled(outcome) else { return Vec::new() };
    if let Some(why) = settled.why {
        return vec![Part::Paragraph(format!("Not worked out: {why}."))];
    }
    if settled.solids.is_empty() {
        return vec![Part::Paragraph("Nothing settles: the solution is saturated with no solid that forms in practice.".to_owned())];
    }
    let rows = settled.solids.into_iter().map(|solid| {
        let mass = solid.mass_g.map(|grams| format::mass(grams / 1000.0, 3)).unwrap_or_default();
        vec![solid.solid, mass, solid.amount_mol.map(|moles| format::amount(moles, 3)).unwrap_or_default()]
    });
    let columns = vec![Column::words("solid"), Column::numbers("mass"), Column::numbers("amount")];
    let table = Part::Table(Table { columns, rows: rows.collect() });
    let left = settled.pH.map(|pH| Part::Paragraph(format!("The liquid that is left has pH {}.", format::ph(pH))));
    std::iter::once(table).chain(left).collect()
}
