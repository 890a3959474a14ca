//! How long one equilibrium takes: a five-component buffer, the same with a chelated metal, and what is derived from the first.
#![allow(missing_docs, non_snake_case, clippy::expect_used, reason = "a bench is a program of its own")]

use criterion::{Criterion, criterion_group, criterion_main};
use scruple::chemistry::{
    Chemistry, ChemistryBuilder, Component, ComponentId, Constant, ConstantValue, Interaction, Mixture, Settings, Species,
};

/// A component with the pKa of its acids, from the least acidic up.
fn acid(b: &mut ChemistryBuilder, name: &str, charge: i32, acidities: &[f64]) -> ComponentId {
    let component = Component { name: name.into(), charge, molar_mass_kg_per_mol: 0.1 };
    let id = b.add_component(component);
    let mut log_beta = Vec::new();
    for (n, pKa) in (1..).zip(acidities) {
        log_beta.push((-1.0, constant(b, -pKa)));
        b.add_species(Species {
            name: format!("{name} with {n} hydrogen"),
            charge: charge + n,
            parts: vec![(id, 1)],
            hydrogen: n,
            water: 0,
            log_beta: log_beta.clone(),
        });
    }
    id
}

fn constant(b: &mut ChemistryBuilder, log10_k: f64) -> scruple::chemistry::ConstantId {
    let value = ConstantValue::VantHoff {
        log10_k,
        enthalpy_J_per_mol: Some(5000.0),
        heat_capacity_J_per_mol_K: Some(-200.0),
    };
    b.add_constant(Constant { name: "constant".into(), value, standard_uncertainty: 0.01 })
}

/// Sodium, potassium, chloride, phosphate, Tris, calcium and EDTA.
fn laboratory() -> (Chemistry, [ComponentId; 7]) {
    let mut b = ChemistryBuilder::new();
    let sodium = acid(&mut b, "sodium", 1, &[]);
    let potassium = acid(&mut b, "potassium", 1, &[]);
    let chloride = acid(&mut b, "chloride", -1, &[]);
    let phosphate = acid(&mut b, "phosphate", -3, &[12.35, 7.198, 2.148]);
    let tris = acid(&mut b, "Tris", 0, &[8.072]);
    let calcium = acid(&mut b, "calcium", 2, &[]);
    let edta = acid(&mut b, "EDTA", -4, &[11.2, 6.8, 3.1, 2.2]);
    let log_beta = vec![(1.0, constant(&mut b, 12.4))];
    let parts = vec![(calcium, 1), (edta, 1)];
    b.add_species(Species { name: "calcium EDTA".into(), charge: -2, parts, hydrogen: 0, water: 0, log_beta });
    for (one, other, epsilon_kg_per_mol) in [(sodium, chloride, 0.03), (sodium, phosphate, -0.25), (calcium, chloride, 0.14)] {
        if let (Some(one), Some(other)) = (b.base_species(one), b.base_species(other)) {
            b.add_interaction(one, other, Interaction { epsilon_kg_per_mol, uncertainty: 0.01 });
        }
    }
    let chemistry = b.finish().expect("the rows hang together");
    (chemistry, [sodium, potassium, chloride, phosphate, tris, calcium, edta])
}

fn solve(c: &mut Criterion) {
    let (chemistry, [sodium, potassium, chloride, phosphate, tris, calcium, edta]) = laboratory();
    let settings = Settings::default();
    let saline = Mixture::water(1.0)
        .with(sodium, 0.157)
        .with(potassium, 0.0045)
        .with(chloride, 0.1447)
        .with(phosphate, 0.0118)
        .with(tris, 0.005);
    let saline = saline.clone().with_hydrogen(-saline.charge_mol(&chemistry));
    let chelated = saline.clone().with(calcium, 0.002).with(edta, 0.005).with(sodium, 0.016);
    let state = chemistry.solve(&saline, 298.15, &settings).expect("a buffer has an equilibrium");
    c.bench_function("buffer of five components", |b| b.iter(|| chemistry.solve(&saline, 298.15, &settings)));
    c.bench_function("with a chelated metal", |b| b.iter(|| chemistry.solve(&chelated, 298.15, &settings)));
    c.bench_function("sensitivities", |b| b.iter(|| state.sensitivity().dpH_dT_per_K()));
}

criterion_group!(benches, solve);
criterion_main!(benches);
