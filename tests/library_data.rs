//! The built-in library held to what can be checked without a laboratory: formulas, charges, hydrates, registry numbers,
//! names, sources and ranges.

use std::collections::{BTreeMap, BTreeSet};

use scruple::library::{built_in, definitions};
use scruple::model::{Body, Constant, ConstantValue, DefinitionKey, Ion, Solid, Substance};

fn substances() -> impl Iterator<Item = (DefinitionKey, String, &'static Substance)> {
    built_in().files.iter().flat_map(|file| definitions(&file.model)).filter_map(|(key, block)| match &block.body {
        Body::Substance(substance) => Some((key, block.name.as_ref()?.text.clone(), substance)),
        _ => None,
    })
}

fn ions() -> impl Iterator<Item = (String, &'static Ion)> {
    built_in().files.iter().flat_map(|file| definitions(&file.model)).filter_map(|(_, block)| match &block.body {
        Body::Ion(ion) => Some((block.name.as_ref()?.text.clone(), ion)),
        _ => None,
    })
}

fn solids() -> impl Iterator<Item = (String, &'static Solid)> {
    built_in().files.iter().flat_map(|file| definitions(&file.model)).filter_map(|(_, block)| match &block.body {
        Body::Solid(solid) => Some((block.name.as_ref()?.text.clone(), solid)),
        _ => None,
    })
}

#[test]
fn the_library_is_as_large_as_promised() {
    assert!(ions().count() >= 100, "{} ions", ions().count());
    assert!(substances().count() >= 450, "{} substances", substances().count());
}

#[test]
fn what_a_substance_gives_adds_up_to_its_formula_and_has_no_charge() {
    let constituents = &built_in().constituents;
    let mut wrong = Vec::new();
    for (key, name, substance) in substances().filter(|(_, _, substance)| !substance.inert && !substance.gives.is_empty()) {
        let (mixture, crystal_water) = match constituents.per_mole(&key, substance) {
            Ok(known) => known,
            Err(why) => {
                wrong.push(format!("{name}: {why:?}"));
                continue;
            }
        };
        let charge = |component| constituents.chemistry.component(component).map_or(0, |one| one.charge);
        let charges: f64 = mixture.amounts_mol.iter().map(|(component, amount)| amount * f64::from(charge(*component))).sum();
        if (charges + mixture.hydrogen_mol).abs() > 1e-9 {
            wrong.push(format!("{name}: charges come to {}", charges + mixture.hydrogen_mol));
        }
        let mass = mixture.mass_kg(&constituents.chemistry);
        let molar_mass = substance.molar_mass.expect("a formula gives a molar mass");
        if (mass / molar_mass - 1.0).abs() > 1e-4 || crystal_water < 0.0 {
            wrong.push(format!("{name}: gives {mass} kg/mol of {molar_mass}"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn hydrates_agree_with_their_anhydrous_twin() {
    // Of each composition without its water there is one set of what is given, whatever the hydrate.
    let water = 0.018_015_28;
    let mut twins: BTreeMap<String, (String, Vec<(String, String)>, f64)> = BTreeMap::new();
    let mut pairs = 0;
    let mut wrong = Vec::new();
    let of_hydrate = ["hemihydrate", "monohydrate", "sesquihydrate", "dihydrate", "trihydrate", "tetrahydrate", "pentahydrate", "hexahydrate", "heptahydrate", "octahydrate", "nonahydrate", "decahydrate", "dodecahydrate"];
    let all: Vec<_> = substances().filter(|(_, _, substance)| !substance.inert && substance.molar_mass.is_some()).collect();
    let gives = |name: &str, substance: &Substance| -> Vec<(String, String)> {
        let mut gives: Vec<_> = substance.gives.iter().map(|(count, what)| (what.key.as_str().to_owned(), format!("{count}"))).collect();
        if gives.is_empty() {
            gives.push((name.to_lowercase(), "1".to_owned()));
        }
        gives.sort();
        gives
    };
    for (_, name, substance) in &all {
        twins.insert(name.to_lowercase(), (name.clone(), gives(name, substance), substance.molar_mass.unwrap_or_default()));
    }
    for (_, name, substance) in &all {
        let Some((base, _)) = of_hydrate.iter().find_map(|word| name.strip_suffix(&format!(" {word}")).map(|base| (base, word))) else { continue };
        let Some((twin, of_twin, mass)) = twins.get(&base.to_lowercase()) else { continue };
        pairs += 1;
        let waters = (substance.molar_mass.unwrap_or_default() - mass) / water;
        if gives(name, substance) != *of_twin || (2.0 * waters - (2.0 * waters).round()).abs() > 0.01 || waters < 0.4 {
            wrong.push(format!("{name} and {twin}: {waters:.3} waters, {:?} and {of_twin:?}", gives(name, substance)));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
    assert!(pairs > 60, "{pairs} pairs");
}

#[test]
fn registry_numbers_have_their_check_digit_and_stand_once() {
    let mut seen: BTreeMap<&str, String> = BTreeMap::new();
    let mut wrong = Vec::new();
    for (_, name, substance) in substances() {
        let Some(cas) = substance.cas.as_deref() else { continue };
        let digits: Vec<u32> = cas.chars().filter_map(|c| c.to_digit(10)).collect();
        // The last digit is the sum of the others times their place from the right, modulo ten (CAS registry).
        let Some((check, others)) = digits.split_last() else { continue };
        let sum: u32 = others.iter().rev().zip(1..).map(|(digit, place)| digit * place).sum();
        let parts: Vec<usize> = cas.split('-').map(str::len).collect();
        if sum % 10 != *check || !matches!(parts.as_slice(), [2..=7, 2, 1]) {
            wrong.push(format!("{name}: {cas}"));
        }
        // Polymers of every length share the number of their kind.
        let other = if substance.inert { None } else { seen.insert(cas, name.clone()) };
        if let Some(other) = other {
            wrong.push(format!("{name} and {other}: {cas}"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

/// The names that the head of a file declares to belong to several substances.
fn declared_shared() -> BTreeSet<String> {
    let mut declared = BTreeSet::new();
    for file in &built_in().files {
        let text = file.source.as_str();
        let Some((_, rest)) = text.split_once("belong to several substances on purpose:") else { continue };
        let list: Vec<&str> = rest.lines().enumerate().take_while(|(number, line)| *number == 0 || line.starts_with('#')).map(|(_, line)| line.trim_start_matches('#')).collect();
        let list = list.join(" ");
        let list = list.split(". ").next().unwrap_or_default().trim_end_matches('.').to_owned();
        declared.extend(list.split(',').map(|name| name.split_whitespace().collect::<Vec<_>>().join(" ").trim_end_matches('.').to_lowercase()));
    }
    declared
}

#[test]
fn no_name_is_shared_except_as_declared() {
    let declared = declared_shared();
    let mut bearers: BTreeMap<String, BTreeSet<String>> = BTreeMap::new();
    for file in &built_in().files {
        for (_, block) in definitions(&file.model).filter(|(_, block)| matches!(block.body, Body::Substance(_))) {
            let Some(header) = &block.name else { continue };
            for name in std::iter::once(header).chain(&block.also) {
                bearers.entry(name.key.as_str().to_owned()).or_default().insert(header.text.clone());
            }
        }
    }
    let shared: Vec<String> = bearers
        .iter()
        .filter(|(name, bearers)| bearers.len() > 1 && !declared.contains(*name))
        .map(|(name, bearers)| format!("{name}: {bearers:?}"))
        .collect();
    assert!(shared.is_empty(), "{}", shared.join("\n"));
}

fn constants(ion: &Ion) -> impl Iterator<Item = (&'static str, &Constant)> {
    ion.pka
        .iter()
        .map(|one| ("pKa", one))
        .chain(ion.complexes.iter().map(|one| ("log K", &one.log_k)))
        .chain(ion.interactions.iter().map(|one| ("interaction", &one.constant)))
        .chain(ion.molar_volumes.iter().map(|one| ("molar volume", one)))
        .chain(ion.molar_conductivities.iter().map(|one| ("molar conductivity", one)))
}

#[test]
fn every_number_has_a_source_and_a_sane_range() {
    let mut wrong = Vec::new();
    for (name, ion) in ions() {
        if !(-8..=4).contains(&ion.charge) {
            wrong.push(format!("{name}: charge {}", ion.charge));
        }
        for (kind, constant) in constants(ion) {
            if constant.source.as_deref().or(ion.source.as_deref()).is_none_or(str::is_empty) {
                wrong.push(format!("{name}: a {kind} without a source"));
            }
            let value = match constant.value {
                ConstantValue::Number { value, .. } => value,
                ConstantValue::Equation { a, b, c, d, .. } => a / 298.15 + b + c * 298.15 + d * 298.15f64.ln(),
            };
            let range = match kind {
                "pKa" => -10.0..=20.0,
                "log K" => -110.0..=110.0,
                "interaction" => -1.5..=1.5,
                // L/mol and S·m²/mol.
                "molar volume" => -0.1..=1.0,
                _ => 0.0..=0.06,
            };
            if !range.contains(&value) {
                wrong.push(format!("{name}: {kind} {value}"));
            }
        }
        // From the most acidic to the least.
        let values: Vec<f64> = ion
            .pka
            .iter()
            .map(|one| match one.value {
                ConstantValue::Number { value, .. } => value,
                ConstantValue::Equation { a, b, c, d, .. } => a / 298.15 + b + c * 298.15 + d * 298.15f64.ln(),
            })
            .collect();
        if values.windows(2).any(|pair| pair[0] >= pair[1] + 0.8) {
            wrong.push(format!("{name}: pKa values {values:?}"));
        }
    }
    for (name, solid) in solids() {
        let source = solid.log_ksp.as_ref().and_then(|constant| constant.source.as_deref()).or(solid.source.as_deref());
        if solid.log_ksp.is_some() && source.is_none_or(str::is_empty) {
            wrong.push(format!("{name}: a solubility product without a source"));
        }
    }
    for (_, name, substance) in substances() {
        if substance.density.is_some_and(|density| !(50.0..=23_000.0).contains(&density) && substance.form.as_deref() != Some("gas")) {
            wrong.push(format!("{name}: density {:?}", substance.density));
        }
        if substance.solubility.iter().any(|(amount, kelvin)| amount.value <= 0.0 || kelvin.is_some_and(|kelvin| !(250.0..=400.0).contains(&kelvin))) {
            wrong.push(format!("{name}: solubility"));
        }
        if substance.aqueous.windows(2).any(|rows| rows[0].0 >= rows[1].0) {
            wrong.push(format!("{name}: the density table does not rise"));
        }
    }
    assert!(wrong.is_empty(), "{} numbers:\n{}", wrong.len(), wrong.join("\n"));
}
