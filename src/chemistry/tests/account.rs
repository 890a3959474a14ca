//! The account of a state says the same as the state.

use super::laboratory::laboratory;
use crate::chemistry::*;

#[test]
fn what_moves_the_pH_comes_first_and_the_balances_close() {
    let lab = laboratory();
    // 25 mmol/kg of each phosphate, as in the equimolal standard.
    let mixture = Mixture::water(1.0)
        .with(lab.potassium, 0.025)
        .with(lab.sodium, 0.05)
        .with(lab.phosphate, 0.05)
        .with_hydrogen(0.075);
    let state = lab.chemistry.solve(&mixture, 298.15, &Settings::default()).unwrap();
    let account = state.account();
    let first = account.constants.first().unwrap();
    assert_eq!(lab.chemistry.constant(first.id).unwrap().name, "dihydrogen phosphate");
    // A buffer at its pKa moves with it one to one, but for the little that other equilibria take. The constant is log10 K.
    assert!((first.pH_per_log10_k + 1.0).abs() < 0.02, "{}", first.pH_per_log10_k);
    assert!((first.log10_k + 7.198).abs() < 1e-9 && first.holds);
    assert_eq!(account.balances.iter().map(|balance| balance.of.as_str()).collect::<Vec<_>>(), [
        "hydrogen", "sodium", "potassium", "phosphate"
    ]);
    for balance in &account.balances {
        assert!(balance.relative_residual < 1e-10, "{balance:?}");
        assert!((balance.found_mol - balance.given_mol).abs() < 1e-10, "{balance:?}");
    }
    assert!(account.relative_charge.abs() < 1e-10);
    // Sodium with hydrogen phosphate has the largest coefficient, −0.15 kg/mol, on the most plentiful ion, 0.05 mol/kg of sodium.
    let strongest = account.interactions.first().unwrap();
    assert!((strongest.epsilon_kg_per_mol + 0.15).abs() < 1e-12);
    assert!((strongest.largest_effect - 0.15 * 0.05).abs() < 1e-4, "{strongest:?}");
}
