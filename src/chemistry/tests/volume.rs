//! Densities of solutions against published tables.

use super::laboratory::laboratory;
use crate::chemistry::*;

/// CRC Handbook of Chemistry and Physics, 'Concentrative properties of aqueous solutions' (Wolf 1966; Söhnel & Novotný 1985), 20 °C: mass
/// per cent and density in g/cm³. Goal 0.1 % up to 1 mol/kg.
#[test]
fn densities_of_salts() {
    let lab = laboratory();
    let c = &lab;
    for (name, cation, count, anion, anions, molar_mass, table) in [
        ("KCl", c.potassium, 1.0, c.chloride, 1.0, 74.548, [(1.0, 1.0046), (4.0, 1.0239), (7.0, 1.0434)]),
        ("NaCl", c.sodium, 1.0, c.chloride, 1.0, 58.44, [(1.0, 1.0053), (3.0, 1.0196), (5.0, 1.0340)]),
        ("CaCl2", c.calcium, 1.0, c.chloride, 2.0, 110.978, [(1.0, 1.0065), (5.0, 1.0401), (9.0, 1.0752)]),
    ] {
        for (percent, expected) in table {
            let molality = percent / (100.0 - percent) * 1000.0 / molar_mass;
            let mixture = Mixture::water(1.0).with(cation, count * molality).with(anion, anions * molality);
            let state = lab.chemistry.solve(&mixture, 293.15, &Settings::default()).unwrap();
            let density = state.density_kg_per_m3() / 1000.0;
                assert!((density / expected - 1.0).abs() < 0.001, "{name} {percent} %: {density} for {expected}");
            assert!(!state.volume_is_estimated);
        }
    }
}

#[test]
fn a_volume_without_source_says_so() {
    let lab = laboratory();
    let mixture = Mixture::water(1.0).with(lab.tris, 0.1);
    assert!(lab.chemistry.solve(&mixture, 293.15, &Settings::default()).unwrap().volume_is_estimated);
}

#[test]
fn volume_expands_and_mass_does_not() {
    let lab = laboratory();
    let mixture = Mixture::water(1.0).with(lab.sodium, 0.1).with(lab.chloride, 0.1);
    let at = |t: f64| lab.chemistry.solve(&mixture, t + 273.15, &Settings::default()).unwrap();
    assert!(at(60.0).volume_L > at(20.0).volume_L);
    assert_eq!(at(60.0).mass_kg, at(20.0).mass_kg);
    assert!((at(20.0).mass_kg - 1.005844).abs() < 1e-9);
}
