//! Conductivities against standards and tables.

use super::laboratory::laboratory;
use crate::chemistry::*;

/// Pratt et al. 2001, Pure Appl. Chem. 73:1783 (IUPAC): KCl standards by molality and temperature, µS/cm. Within 1 % up to 0.1 mol/kg; at
/// 1 mol/kg, where KCl makes cold water less viscous, within twice the uncertainty stated.
#[test]
fn potassium_chloride_standards() {
    let lab = laboratory();
    for (molality, t, expected) in [
        (0.01, 0.0, 772.92),
        (0.1, 0.0, 7116.85),
        (1.0, 0.0, 63488.0),
        (0.01, 25.0, 1408.23),
        (0.1, 25.0, 12824.6),
        (1.0, 20.0, 99170.0),
        (1.0, 30.0, 118240.0),
        (0.1, 35.0, 15316.0),
        (0.01, 50.0, 2123.43),
        (0.1, 50.0, 19180.9),
        (1.0, 50.0, 157670.0),
    ] {
        let mixture = Mixture::water(1.0).with(lab.potassium, molality).with(lab.chloride, molality);
        let state = lab.chemistry.solve(&mixture, t + 273.15, &Settings::default()).unwrap();
        let conductivity = state.conductivity();
        let value = conductivity.value_S_per_m * 1e4;
        assert_eq!(conductivity.unknown_share, 0.0);
        let goal = if molality < 0.5 { 0.01 } else { 2.0 * conductivity.relative_uncertainty };
        assert!((value / expected - 1.0).abs() < goal, "{molality} mol/kg, {t} °C: {value} for {expected}");
    }
}

/// CRC Handbook of Chemistry and Physics, 'Equivalent conductivity of electrolytes in aqueous solution', 25 °C (HCl seen, the others from
/// memory), S·cm²/mol of charges. Goal 3 % up to 0.2 mol/L.
#[test]
fn other_electrolytes() {
    let lab = laboratory();
    let settings = Settings::default();
    for (name, cation, anion, charge, table) in [
        ("HCl", None, lab.chloride, 1.0, [(0.01, 411.9), (0.05, 398.9), (0.1, 391.1)]),
        ("NaCl", Some(lab.sodium), lab.chloride, 1.0, [(0.01, 118.45), (0.05, 111.01), (0.1, 106.69)]),
        ("CaCl2", Some(lab.calcium), lab.chloride, 2.0, [(0.005, 120.30), (0.025, 108.42), (0.05, 102.41)]),
        ("sodium acetate", Some(lab.sodium), lab.acetate, 1.0, [(0.01, 83.72), (0.05, 76.88), (0.1, 72.76)]),
    ] {
        for (concentration, expected) in table {
            // The amount in 1 kg of water that gives this concentration, near enough from a first solution.
            let at = |n: f64| {
                let mixture = Mixture::water(1.0).with(anion, charge * n);
                let mixture = match cation {
                    Some(cation) => mixture.with(cation, n),
                    None => mixture.with_hydrogen(n),
                };
                lab.chemistry.solve(&mixture, 298.15, &settings).unwrap()
            };
            let state = at(concentration * at(concentration).volume_L);
            let value = state.conductivity().value_S_per_m * 10.0 / (concentration * charge);
            assert!((value / expected - 1.0).abs() < 0.03, "{name} {concentration}: {value} for {expected}");
        }
    }
}

#[test]
fn an_ion_without_conductivity_says_so() {
    let lab = laboratory();
    let mixture = Mixture::water(1.0).with(lab.sodium, 0.3).with(lab.citrate, 0.1);
    let state = lab.chemistry.solve(&mixture, 298.15, &Settings::default()).unwrap();
    assert!(state.conductivity().unknown_share > 0.5);
}

/// Light & Licht 1987 and ASTM D1125 (from memory): pure water has 0.0550 µS/cm at 25 °C.
#[test]
fn pure_water() {
    let lab = laboratory();
    let state = lab.chemistry.solve(&Mixture::water(1.0), 298.15, &Settings::default()).unwrap();
    assert!((state.conductivity().value_S_per_m * 1e4 - 0.0550).abs() < 0.0005);
}
