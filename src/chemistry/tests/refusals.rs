//! Input that has no answer gets a reason.

use super::laboratory::laboratory;
use crate::chemistry::*;

#[test]
fn every_refusal_names_its_reason() {
    let lab = laboratory();
    let settings = Settings::default();
    let salt = Mixture::water(1.0).with(lab.sodium, 0.1).with(lab.chloride, 0.1);
    let solve = |mixture: &Mixture, t: f64| lab.chemistry.solve(mixture, t, &settings).unwrap_err();
    assert!(matches!(solve(&Mixture::default(), 298.15), Failure::NoWater { .. }));
    assert!(matches!(solve(&Mixture::water(f64::NAN), 298.15), Failure::NotFinite { .. }));
    assert!(matches!(solve(&salt, f64::INFINITY), Failure::NotFinite { .. }));
    assert!(matches!(solve(&salt, 250.0), Failure::TemperatureOutOfRange { .. }));
    assert!(matches!(solve(&salt, 400.0), Failure::TemperatureOutOfRange { .. }));
    assert!(matches!(solve(&salt.clone().with(lab.sodium, 0.1), 298.15), Failure::Charged { .. }));
    let negative = Mixture::water(1.0).with(lab.tris, -0.1);
    assert!(matches!(solve(&negative, 298.15), Failure::NegativeAmount { .. }));
    let not_finite = Mixture::water(1.0).with(lab.tris, f64::NAN);
    assert!(matches!(solve(&not_finite, 298.15), Failure::NotFinite { .. }));
    let few = Settings { limits: Limits { steps: 1 }, ..settings };
    assert!(matches!(lab.chemistry.solve(&salt, 298.15, &few), Err(Failure::NotConverged { .. }) | Ok(_)));
    assert!(!solve(&negative, 298.15).to_string().is_empty());
}

#[test]
fn an_inconsistent_species_is_refused() {
    let mut b = ChemistryBuilder::new();
    let id = b.add_component(Component { name: "chloride".into(), charge: -1, molar_mass_kg_per_mol: 0.03545 });
    b.add_species(Species { name: "HCl".into(), charge: 1, parts: vec![(id, 1)], hydrogen: 1, water: 0, log_beta: vec![] });
    assert_eq!(b.finish().unwrap_err(), Inconsistency::Charge { species: "HCl".into(), stated: 1, of_parts: 0 });
}

#[test]
fn strong_solutions_carry_a_warning() {
    let lab = laboratory();
    let at = |m: f64| {
        let mixture = Mixture::water(1.0).with(lab.sodium, m).with(lab.chloride, m);
        lab.chemistry.solve(&mixture, 298.15, &Settings::default()).unwrap().warnings
    };
    assert!(at(1.0).is_empty());
    assert!(matches!(at(4.0)[..], [Warning::IonicStrengthBeyondModel { .. }]));
    let acetate = Mixture::water(1.0).with(lab.potassium, 1.0).with(lab.acetate, 1.0);
    let state = lab.chemistry.solve(&acetate, 298.15, &Settings::default()).unwrap();
    assert!(matches!(state.warnings[..], [Warning::NoInteraction { .. }]));
}
