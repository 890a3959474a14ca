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
        assert!((state.pH() - expected).abs() < 0.02, "{t} °C: {} for {expected}", state.pH());
    }
}

/// Bates 1962, J. Res. NBS 66A:179 and Buck et al. 2002, secondary standards: 0.1 mol/kg acetic acid + 0.1 mol/kg sodium acetate; 0.05 mol/kg
/// potassium dihydrogen citrate (primary); 0.01 mol/kg borax, here without polyborates, which the built-in library adds.
#[test]
fn acetate_citrate_and_borax() {
    let lab = laboratory();
    let acetate = Mixture::water(1.0).with(lab.acetate, 0.2).with(lab.sodium, 0.1).with_hydrogen(0.1);
    let citrate = Mixture::water(1.0).with(lab.citrate, 0.05).with(lab.potassium, 0.05).with_hydrogen(0.1);
    // Na2B4O7 + 7 H2O = 2 Na+ + 2 B(OH)4- + 2 B(OH)3 = 4 B(OH)4- + 2 H+ - 2 H2O.
    let borax = Mixture::water(1.0 - 0.07 * 0.018015).with(lab.borate, 0.04).with(lab.sodium, 0.02).with_hydrogen(0.02);
    for (name, mixture, t, expected, tolerance) in [
        ("acetate", &acetate, 25.0, 4.644, 0.01),
        ("acetate", &acetate, 5.0, 4.657, 0.01),
        ("acetate", &acetate, 50.0, 4.671, 0.012),
        ("citrate", &citrate, 5.0, 3.840, 0.02),
        ("citrate", &citrate, 25.0, 3.776, 0.02),
        ("citrate", &citrate, 50.0, 3.749, 0.02),
        ("borax", &borax, 25.0, 9.180, 0.02),
        ("borax", &borax, 5.0, 9.395, 0.02),
        ("borax", &borax, 50.0, 9.011, 0.03),
    ] {
        let state = lab.chemistry.solve(mixture, celsius(t), &Settings::default()).unwrap();
        assert!((state.pH() - expected).abs() < tolerance, "{name} {t} °C: {} for {expected}", state.pH());
    }
}
