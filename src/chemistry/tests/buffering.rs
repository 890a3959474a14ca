//! Buffer capacity, its interval, dilution and temperature against published values.

use super::laboratory::laboratory;
use crate::chemistry::*;

/// Bates, Determination of pH, 2nd ed. 1973, table 4-4; Buck et al. 2002: equimolal phosphate 0.025 + 0.025 mol/kg has β = 0.029 mol/L,
/// dilution value +0.080 and dpH/dT = −0.0028/K at 25 °C; 0.05 mol/kg hydrogen phosphate standard 1:3.5 has β = 0.016, +0.07, −0.0028.
#[test]
fn phosphate_standards() {
    let lab = laboratory();
    for (k, na, capacity, dilution, slope) in
        [(0.025, 0.025, 0.029, 0.080, -0.0028), (0.008695, 0.03043, 0.016, 0.07, -0.0028)]
    {
        let mixture = Mixture::water(1.0)
            .with(lab.potassium, k)
            .with(lab.sodium, 2.0 * na)
            .with(lab.phosphate, k + na)
            .with_hydrogen(2.0 * k + na);
        let state = lab.chemistry.solve(&mixture, 298.15, &Settings::default()).unwrap();
        assert!((state.buffer_capacity_mol_per_L() - capacity).abs() < 0.0015);
        assert!((state.dilution_value().unwrap() - dilution).abs() < 0.012);
        assert!((state.dpH_dT_per_K() - slope).abs() < 0.0007);
    }
}

/// One acid alone, far from water's own ends: β falls to half of its maximum where the ratio of forms is 3 ± 2√2, at pK ± 0.766.
#[test]
fn interval_of_one_acid() {
    let mut b = ChemistryBuilder::new();
    let constant = super::laboratory::pKa(&mut b, "acid", 7.0, 0.0, 0.0);
    // The acid of a neutral base in a dilute solution, so that activity coefficients hardly change on the way.
    let (base, _) = super::laboratory::acid(&mut b, "base", 0, 100.0, &[constant]);
    let (chloride, _) = super::laboratory::acid(&mut b, "chloride", -1, 35.45, &[]);
    let chemistry = b.finish().unwrap();
    let mixture = Mixture::water(1.0).with(base, 0.002).with(chloride, 0.001).with_hydrogen(0.001);
    let state = chemistry.solve(&mixture, 298.15, &Settings::default()).unwrap();
    let interval = state.buffer_interval().unwrap();
    let (low, high) = (interval.low_pH.unwrap(), interval.high_pH.unwrap());
    assert!((high - low - 2.0 * 0.766).abs() < 0.03, "{low} {high}");
    assert!((0.5 * (low + high) - state.pH()).abs() < 0.03);
}

#[test]
fn a_strong_acid_has_no_lower_end() {
    let lab = laboratory();
    let mixture = Mixture::water(1.0).with(lab.chloride, 0.1).with_hydrogen(0.1);
    let state = lab.chemistry.solve(&mixture, 298.15, &Settings::default()).unwrap();
    let interval = state.buffer_interval().unwrap();
    assert!(interval.low_pH.is_none());
    // Half the capacity is half the hydrogen ions, 0.30 up, less what ionic strength does.
    assert!((interval.high_pH.unwrap() - state.pH() - 0.3).abs() < 0.02);
}
