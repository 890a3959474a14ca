//! Checks of the solid phases: their formulas balance, their constants have a source, and they dissolve as much as handbooks say.

use super::built_in;
use crate::chemistry::{Mixture, Settings};
use crate::model::{Block, Body, ConstantValue, Constituents, Solid, WATER_KG_PER_MOL, molar_mass};

fn solids() -> impl Iterator<Item = (&'static str, &'static Block, &'static Solid)> {
    built_in().files.iter().flat_map(|file| {
        file.model.blocks.iter().filter_map(|block| match &block.body {
            Body::Solid(solid) => Some((file.name, block.as_ref(), solid)),
            _ => None,
        })
    })
}

fn name_of(block: &Block) -> &str {
    block.name.as_ref().map_or("", |name| name.text.as_str())
}

fn constituents() -> &'static Constituents {
    &built_in().constituents
}

/// One mole of a solid as a mixture, without the water that its formula still holds.
fn dissolved(solid: &Solid) -> Mixture {
    let mut mixture = Mixture::default();
    for (count, reference) in &solid.gives {
        let one = constituents().named(&reference.key).unwrap_or_else(|| panic!("no constituent is called {}", reference.text));
        match one.component {
            Some(component) => *mixture.amounts_mol.entry(component).or_insert(0.0) += count,
            // A complex is not counted by one component; hydrogen, hydroxide and water are counted below.
            None => assert!(one.definition.is_none() || ["hydrogen", "hydroxide"].contains(&one.name.as_str()), "{}", reference.text),
        }
        mixture.hydrogen_mol += count * one.hydrogen;
        mixture.water_kg += count * one.water * WATER_KG_PER_MOL;
    }
    mixture
}

#[test]
fn there_are_enough_of_them_and_each_is_complete() {
    let mut count = 0;
    for (file, block, solid) in solids() {
        let name = name_of(block);
        count += 1;
        assert!(file.starts_with("solids-"), "{name} stands in {file}");
        let constant = solid.log_ksp.as_ref().unwrap_or_else(|| panic!("{name} has no log Ksp"));
        assert!(constant.source.is_some(), "{name} has no source");
        assert!(constant.uncertainty.is_some_and(|one| one > 0.0 && one <= 1.0), "{name} has no sensible uncertainty");
        assert!(solid.formula.is_some() && !solid.gives.is_empty(), "{name}");
        let value = match constant.value {
            ConstantValue::Number { value, enthalpy, .. } => {
                assert!(enthalpy.is_none_or(|joules| joules.abs() < 150e3), "{name}: enthalpy {enthalpy:?}");
                value
            }
            ConstantValue::Equation { a, b, c, d, .. } => a / 298.15 + b + c * 298.15 + d * 298.15_f64.ln(),
        };
        // The most soluble is rock salt; for the rest, up to fourteen powers of ten an ion.
        let ions: f64 = solid.gives.iter().map(|(count, _)| count.abs()).sum();
        assert!(value < 1.6 && value > -14.0 * ions, "{name}: log Ksp {value}");
    }
    assert!(count >= 65, "{count} solids");
}

#[test]
fn formulas_charges_and_water_balance() {
    for (_, block, solid) in solids() {
        let name = name_of(block);
        let mixture = dissolved(solid);
        assert!(mixture.charge_mol(&constituents().chemistry).abs() < 1e-9, "{name} leaves a charge");
        let (written, formula) = solid.formula.as_ref().unwrap();
        let mass = molar_mass(formula).unwrap_or_else(|| panic!("{name}: {written}"));
        let water = (mass - mixture.mass_kg(&constituents().chemistry)) / WATER_KG_PER_MOL;
        assert!((2.0 * water - (2.0 * water).round()).abs() < 0.01, "{name}: {written} misses {water} water");
        assert!(water > -6.01, "{name}: {written} misses {water} water");
    }
}

#[test]
fn solids_of_one_formula_have_different_names_and_constants() {
    let mut names = std::collections::BTreeSet::new();
    for (_, block, _) in solids() {
        for name in block.name.iter().chain(&block.also) {
            assert!(names.insert(name.key.clone()), "{} stands twice", name.text);
        }
    }
}

/// Logarithm of the activity product of a solution that holds a molality of a solid alone, less log Ksp.
fn saturation_index(solid: &Solid, molality_mol_per_kg: f64, celsius: f64) -> f64 {
    let kelvin = 273.15 + celsius;
    let chemistry = &constituents().chemistry;
    let mut mixture = dissolved(solid).scaled(molality_mol_per_kg);
    mixture.water_kg = 1.0;
    let state = chemistry.solve(&mixture, kelvin, &Settings::default()).unwrap();
    let constant = solid.log_ksp.as_ref().unwrap();
    let log_ksp = match constant.value {
        ConstantValue::Number { value, enthalpy, heat_capacity } => crate::chemistry::Constant {
            name: String::new(),
            value: crate::chemistry::ConstantValue::VantHoff {
                log10_k: value,
                enthalpy_J_per_mol: enthalpy,
                heat_capacity_J_per_mol_K: heat_capacity,
            },
            standard_uncertainty: 0.0,
        }
        .log10_k(kelvin),
        ConstantValue::Equation { a, b, c, d, .. } => a / kelvin + b + c * kelvin + d * kelvin.ln(),
    };
    let mut product = 0.0;
    for (count, reference) in &solid.gives {
        let one = constituents().named(&reference.key).unwrap();
        product += count * state.log10_activity(one.species.unwrap()).unwrap();
    }
    let (_, formula) = solid.formula.as_ref().unwrap();
    let water = (molar_mass(formula).unwrap() - dissolved(solid).mass_kg(chemistry)) / WATER_KG_PER_MOL;
    product + water * state.water_activity().log10() - log_ksp
}

/// Solid, mass percent of the anhydrous salt in the saturated solution, its molar mass in g/mol, °C, and how far the
/// saturation index may be from zero.
/// Source: CRC Handbook 98th ed., Aqueous Solubility of Inorganic Compounds at Various Temperatures.
const CRC: &[(&str, f64, f64, f64, f64)] = &[
    ("gypsum", 0.205, 136.14, 25.0, 0.05),
    ("gypsum", 0.210, 136.14, 40.0, 0.05),
    ("lead(II) chloride", 1.07, 278.1, 25.0, 0.4),
    ("barium hydroxide octahydrate", 1.67, 171.34, 0.0, 0.1),
    ("potassium perchlorate", 2.04, 138.55, 25.0, 0.1),
    ("potassium perchlorate", 0.70, 138.55, 0.0, 0.1),
    ("disodium hydrogen phosphate dodecahydrate", 1.66, 141.96, 0.0, 0.25),
    ("disodium hydrogen phosphate dodecahydrate", 4.19, 141.96, 10.0, 0.25),
    ("disodium hydrogen phosphate dodecahydrate", 10.55, 141.96, 25.0, 0.25),
    ("potassium dihydrogen phosphate", 11.74, 136.09, 0.0, 0.1),
    ("potassium dihydrogen phosphate", 19.97, 136.09, 25.0, 0.1),
    ("arcanite", 10.7, 174.26, 25.0, 0.15),
    ("mirabilite", 16.13, 142.04, 20.0, 0.25),
    ("natron", 6.44, 105.99, 0.0, 0.3),
    ("borax", 1.71, 201.22, 10.0, 0.2),
    ("borax", 3.07, 201.22, 25.0, 0.1),
    ("lithium carbonate", 1.28, 73.89, 25.0, 0.4),
    ("villiaumite", 3.97, 41.99, 25.0, 0.1),
    ("potassium iodate", 8.44, 214.0, 25.0, 0.1),
    ("potassium permanganate", 7.06, 158.03, 25.0, 0.1),
    ("potassium bromate", 7.55, 167.0, 25.0, 0.1),
    ("calcium iodate hexahydrate", 0.305, 389.88, 25.0, 0.1),
    ("calcium iodate hexahydrate", 0.082, 389.88, 0.0, 0.15),
    ("boric acid", 2.61, 61.83, 0.0, 0.05),
    ("boric acid", 5.48, 61.83, 25.0, 0.05),
    ("boric acid", 8.1, 61.83, 40.0, 0.06),
    ("sodium oxalate", 3.48, 134.0, 25.0, 0.1),
    ("ammonium oxalate monohydrate", 4.94, 124.1, 25.0, 0.15),
];

/// Solid, molality of the saturated solution in mol/kg, °C, how far off it may be, and the source.
const OTHERS: &[(&str, f64, f64, f64, &str)] = &[
    ("silver chloride", 1.34e-5, 25.0, 0.03, "1.92 mg/L, CRC Handbook"),
    ("fluorite", 2.05e-4, 25.0, 0.15, "16 mg/L, CRC Handbook"),
    ("portlandite", 0.0203, 25.0, 0.08, "Bates, Bower and Smith 1956"),
    ("potassium hydrogen tartrate", 0.0341, 25.0, 0.03, "Bates 1973"),
    ("barite", 1.05e-5, 25.0, 0.05, "2.45 mg/L, Blount 1977 (from memory)"),
    ("celestite", 6.2e-4, 25.0, 0.1, "114 mg/L (from memory)"),
    ("benzoic acid", 0.0282, 25.0, 0.03, "3.44 g/L (from memory)"),
    ("salicylic acid", 0.0163, 25.0, 0.05, "2.24 g/L, CRC Handbook"),
    ("nahcolite", 1.22, 25.0, 0.2, "10.2 g in 100 g of water (from memory)"),
    ("sylvite", 4.77, 25.0, 0.2, "26.22 %, CRC Handbook"),
    ("halite", 6.153, 25.0, 0.5, "CRC Handbook; beyond the range of the activity model"),
    ("calcite", 1.2e-4, 25.0, 0.25, "12 mg/L in water free of carbon dioxide (from memory)"),
];

#[test]
fn they_dissolve_as_much_as_handbooks_say() {
    let of = |name: &str| solids().find(|(_, block, _)| name_of(block) == name).unwrap_or_else(|| panic!("{name}")).2;
    let mut wrong = Vec::new();
    let mut check = |name: &str, molality: f64, celsius: f64, within: f64, source: &str| {
        let index = saturation_index(of(name), molality, celsius);
        if index.abs() > within {
            wrong.push(format!("{name}, {molality:.4} mol/kg at {celsius} °C ({source}): {index:+.3}"));
        }
    };
    for &(name, percent, molar_mass, celsius, within) in CRC {
        let molality = 1000.0 * percent / (molar_mass * (100.0 - percent));
        check(name, molality, celsius, within, "CRC Handbook 98th ed.");
    }
    for &(name, molality, celsius, within, source) in OTHERS {
        check(name, molality, celsius, within, source);
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
