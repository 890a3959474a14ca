//! What a defined thing is: substance, bottle, solution, ion, solid, lab.

use super::super::describe;
use super::super::page::Page;
use super::super::target::{find, locate, spelling};
use super::solutions;
use crate::chemistry::Forming;
use crate::model::*;
use crate::text::FileId;
use crate::units::{Unit, format};
use crate::workspace::Snapshot;

/// The temperature at which constants are shown, K.
const SHOWN_AT_K: f64 = 298.15;
/// How many entries of a long list are shown.
const SHOWN: usize = 6;

/// The page of a thing. `used` is the name by which a line calls it, and what the line does with it.
pub fn page(snapshot: &Snapshot, from: FileId, definition: &Definition, used: Option<(&str, Page)>) -> Page {
    let block = &definition.block;
    let kind = block.kind().map_or("", describe::kind_word);
    let place = locate(snapshot, definition);
    let origin = match &place {
        Some((file, _)) if !snapshot.files.contains_key(&file.id) => ", built-in library".to_owned(),
        Some((file, _)) if file.id != from => format!(", {}", file.shown_path()),
        _ => String::new(),
    };
    let is_header = used.is_none();
    let (called, line) = match used {
        Some((called, line)) => (called, line),
        None => (definition.name(), Page::new()),
    };
    let mut page = Page::new();
    let key = NameKey::new(called);
    if spelling(definition, &key).is_none() && matches!(block.body, Body::Ion(_)) {
        page.title(called, format!("form of the ion {}{origin}", definition.name()));
    } else if key == definition.key.name {
        page.title(definition.name(), format!("{kind}{origin}"));
    } else {
        page.title(called, format!("{kind} {}{origin}", definition.name()));
    }
    page.append(line);
    match &block.body {
        Body::Solution(_) => {
            if let Some((file, index)) = place {
                solutions::rows(snapshot, file.id, index, is_header, &mut page);
            }
        }
        Body::Bottle(recipe) => bottle(snapshot, definition, recipe, &mut page),
        Body::Substance(substance) => self::substance(snapshot, from, definition, substance, &mut page),
        Body::Ion(ion) => self::ion(ion, &key, &mut page),
        Body::Solid(solid) => self::solid(solid, &mut page),
        Body::Danger(danger) => self::danger(danger, &mut page),
        Body::Group(group) => self::group(group, &mut page),
        Body::Lab(lab) => self::lab(lab, &mut page),
        Body::None => {}
    }
    page
}

/// What stands beside a definition's name in lists.
pub fn detail(snapshot: &Snapshot, definition: &Definition) -> String {
    match locate(snapshot, definition) {
        Some((file, index)) => describe::detail(snapshot, file.id, index, &definition.block),
        None => String::new(),
    }
}

/// Hydrogen, hydroxide and water are known to the chemistry without a block.
pub fn constituent_without_block(snapshot: &Snapshot, from: FileId, name: &str) -> Option<Page> {
    let constituents = snapshot.constituents(from);
    let constituent = constituents.named(&NameKey::new(name))?;
    let mut page = Page::new();
    page.title(constituent.name.clone(), "known to the chemistry");
    page.row_if("molar mass", constituent.molar_mass.map(describe::molar_mass));
    Some(page)
}

fn substance(snapshot: &Snapshot, from: FileId, definition: &Definition, substance: &Substance, page: &mut Page) {
    page.row_if("formula", substance.formula.as_ref().map(|(formula, _)| formula.clone()));
    page.row_if("molar mass", substance.molar_mass.map(describe::molar_mass));
    page.row_if("CAS", substance.cas.clone());
    let also: Vec<&str> = definition.block.also.iter().map(|name| name.text.as_str()).take(4).collect();
    page.row_if("also called", (!also.is_empty()).then(|| also.join(", ")));
    let gives: Vec<String> = substance
        .gives
        .iter()
        .map(|(count, what)| if *count == 1.0 { what.text.clone() } else { format!("{} {}", format::plain(*count), what.text) })
        .collect();
    page.row_if("gives", (!gives.is_empty()).then(|| gives.join(", ")));
    page.row_if("pKa", pka_of(snapshot, from, substance));
    page.row_if("density", substance.density.map(|density| format::density(density, 4)));
    page.row_if("solubility", nearest_solubility(substance).map(|(amount, kelvin)| {
        let value = format::with_unit(amount.value, Some(amount.unit));
        kelvin.map_or(value.clone(), |kelvin| format!("{value} at {}", format::temperature(kelvin)))
    }));
    page.row_if("log KH at 25 °C", substance.log_kh.as_ref().map(constant_text));
    if substance.inert {
        page.sentence("It has mass and volume; what it does to the pH is not worked out.");
    }
    if let Some(caution) = describe::caution(definition.name(), &substance.hazards) {
        page.sentence(caution);
    }
    if !substance.keep_away_from.is_empty() {
        let names: Vec<&str> = substance.keep_away_from.iter().map(|name| name.text.as_str()).take(SHOWN).collect();
        let more = if substance.keep_away_from.len() > SHOWN { " and others" } else { "" };
        page.sentence(format!("Keep away from {}{more}.", names.join(", ")));
    }
}

/// The pKa values of the acids and bases that a substance gives.
pub fn pka_of(snapshot: &Snapshot, from: FileId, substance: &Substance) -> Option<String> {
    let mut values: Vec<String> = Vec::new();
    for (_, what) in &substance.gives {
        for definition in find(snapshot, from, Namespace::Constituent, &what.key, &what.text, true) {
            if let Body::Ion(ion) = &definition.block.body {
                values.extend(ion.pka.iter().map(|constant| {
                    value_at(constant, SHOWN_AT_K).map_or_else(String::new, format::ph)
                }));
            }
        }
    }
    values.retain(|value| !value.is_empty());
    (!values.is_empty()).then(|| values.join(", "))
}

/// The solubility nearest to the temperature at which constants are shown.
fn nearest_solubility(substance: &Substance) -> Option<&(Amount, Option<f64>)> {
    let distance = |(_, kelvin): &&(Amount, Option<f64>)| (kelvin.unwrap_or(SHOWN_AT_K) - SHOWN_AT_K).abs();
    substance.solubility.iter().min_by(|one, other| distance(one).total_cmp(&distance(other)))
}

fn bottle(snapshot: &Snapshot, definition: &Definition, recipe: &Recipe, page: &mut Page) {
    for entry in &recipe.entries {
        if let Some(line) = definition.block.lines.get(entry.at.line) {
            page.row("holds", entry.at.span.of(&line.text).split_whitespace().collect::<Vec<_>>().join(" "));
        }
    }
    page.row_if("density", recipe.density.map(|density| format::density(density.value, 4)));
    let outcome = snapshot.evaluation(&definition.key).and_then(|evaluation| evaluation.outcome());
    if let Some(outcome) = outcome {
        for solute in outcome.solutes.iter().filter(|_| outcome.volume_L > 0.0) {
            let strength = solute.amount_mol.map(|moles| format::concentration(moles / outcome.volume_L, 4));
            page.row_if(&solute.name, strength);
        }
    }
    if let Some(caution) = describe::caution(definition.name(), &recipe.hazards) {
        page.sentence(caution);
    }
}

fn ion(ion: &Ion, called: &NameKey, page: &mut Page) {
    page.row_if("formula", ion.formula.as_ref().map(|(formula, _)| formula.clone()));
    page.row("charge", describe::charge(ion.charge));
    // Asked of a form, its own constant is what matters.
    let own: Vec<&Constant> = ion.pka.iter().filter(|constant| constant.of.as_ref().is_some_and(|of| of.key == *called)).collect();
    let shown: Vec<&Constant> = if own.is_empty() { ion.pka.iter().collect() } else { own };
    for constant in shown {
        page.row("pKa at 25 °C", constant_text(constant));
    }
    for complex in ion.complexes.iter().take(SHOWN) {
        let partners: Vec<String> = complex
            .partners
            .iter()
            .map(|(count, what)| if *count == 1.0 { what.text.clone() } else { format!("{} {}", format::plain(*count), what.text) })
            .collect();
        page.row(format!("log K with {}", partners.join(", ")), constant_text(&complex.log_k));
    }
    if ion.complexes.len() > SHOWN {
        page.row(format!("and {} more complexes", ion.complexes.len() - SHOWN), "");
    }
    let mut sources: Vec<&str> = ion.pka.iter().filter_map(|constant| constant.source.as_deref()).chain(ion.source.as_deref()).collect();
    sources.dedup();
    sources.truncate(3);
    if !sources.is_empty() {
        page.sentence(format!("Sources: {}.", sources.join("; ")));
    }
}

fn solid(solid: &Solid, page: &mut Page) {
    page.row_if("formula", solid.formula.as_ref().map(|(formula, _)| formula.clone()));
    page.row_if("forms", match solid.forming {
        Forming::Readily => None,
        Forming::Slowly => Some("slowly: not while a solution is kept".to_owned()),
        Forming::AtOnce => Some("at once".to_owned()),
        Forming::OnFreezing => Some("first of all when the solution freezes".to_owned()),
        Forming::InPassing => Some("in passing, on the way to a less soluble solid".to_owned()),
    });
    page.row_if("log Ksp at 25 °C", solid.log_ksp.as_ref().map(constant_text));
    if let Some(source) = solid.log_ksp.as_ref().and_then(|constant| constant.source.as_ref()).or(solid.source.as_ref()) {
        page.sentence(format!("Source: {source}."));
    }
}

fn danger(danger: &Danger, page: &mut Page) {
    for side in &danger.sides {
        let names: Vec<&str> = side.names.iter().map(|name| name.text.as_str()).collect();
        page.row_if("with", Some(names.join(", ")));
    }
    page.row_if("raises", danger.raises.map(|code| code.name().to_owned()));
    if !danger.because.is_empty() {
        page.sentence(format!("{}.", danger.because));
    }
    if let Some(source) = &danger.source {
        page.sentence(format!("Source: {source}."));
    }
}

fn group(group: &Group, page: &mut Page) {
    let names: Vec<&str> = group.holds.iter().map(|name| name.text.as_str()).collect();
    page.row_if("holds", Some(names.join(", ")));
    if let Some(source) = &group.source {
        page.sentence(format!("Source: {source}."));
    }
}

fn lab(lab: &Lab, page: &mut Page) {
    page.row_if("room", lab.room.map(|room| {
        format!("{} to {}", format::temperature(room.value.0), format::temperature(room.value.1))
    }));
    for balance in &lab.balances {
        let range = balance.least.zip(balance.greatest).map(|(least, greatest)| {
            format!(", {} to {}", plain_mass(least), plain_mass(greatest))
        });
        page.row("balance", format!("readability {}{}", plain_mass(balance.readability), range.unwrap_or_default()));
    }
    page.row_if("volumetric ware", (!lab.wares.is_empty()).then(|| format::plain(lab.wares.len() as f64)));
}

/// A round mass in the unit in which it is written shortest, as balances state theirs: a tenth of a milligram is `0.1 mg`.
fn plain_mass(kilograms: f64) -> String {
    let units = ["g", "mg", "µg", "kg"].into_iter().filter_map(Unit::parse);
    let written = units.map(|unit| format!("{} {}", format::plain(unit.from_base(kilograms)), unit.symbol()));
    written.min_by_key(|text| text.chars().count()).unwrap_or_default()
}

/// A constant at 25 °C with its uncertainty and what it belongs to.
fn constant_text(constant: &Constant) -> String {
    let Some(value) = value_at(constant, SHOWN_AT_K) else { return String::new() };
    let number = match constant.uncertainty.map(|uncertainty| format::with_uncertainty(value, uncertainty)) {
        Some((value, uncertainty)) if !uncertainty.is_empty() => format!("{value} ± {uncertainty}"),
        _ => format::fixed(value, 3),
    };
    let of = constant.of.as_ref().map_or_else(String::new, |of| format!(", {}", of.text));
    let strength = match constant.ionic_strength {
        0.0 => String::new(),
        strength => format!(", at ionic strength {}", format::plain(strength)),
    };
    format!("{number}{of}{strength}")
}

/// The value of a constant at 25 °C, where it stands as a number, or of its equation there.
fn value_at(constant: &Constant, kelvin: f64) -> Option<f64> {
    let value = match constant.value {
        ConstantValue::Number { value, .. } => value,
        ConstantValue::Equation { a, b, c, d, .. } => a / kelvin + b + c * kelvin + d * kelvin.ln(),
    };
    value.is_finite().then_some(value)
}
