//! pH standards, from constants alone.

use super::laboratory::{celsius, laboratory};
use crate::chemistry::*;

#[test]
fn pure_water_is_neutral() {
    let lab = laboratory();
    let state = lab.chemistry.solve(&Mixture::water(1.0), celsius(25.0), &Settings::default()).unwrap();
    assert!((state.pH() - 6.9973).abs() < 1e-3, "{}", state.pH());
}

/// Buck et al. 2002, Pure Appl. Chem. 74:2169 (IUPAC Recommendations): primary standards, molalities.
#[test]
fn phosphate_standards() {
    let lab = laboratory();
    for (k, na, t, expected) in [
        (0.025, 0.025, 5.0, 6.951),
        (0.025, 0.025, 25.0, 6.865),
        (0.025, 0.025, 50.0, 6.833),
        (0.008695, 0.03043, 5.0, 7.500),
        (0.008695, 0.03043, 25.0, 7.413),
        (0.008695, 0.03043, 37.0, 7.386),
    ] {
        let mixture = Mixture::water(1.0)
            .with(lab.potassium, k)
            .with(lab.sodium, 2.0 * na)
            .with(lab.phosphate, k + na)
            .with_hydrogen(2.0 * k + na);
        let state = lab.chemistry.solve(&mixture, celsius(t), &Settings::default()).unwrap();
        println!("{k} {t} {expected} {:.4}", state.pH());
        assert!((state.pH() - expected).abs() < 0.02, "{t} °C: {} for {expected}", state.pH());
    }
}
