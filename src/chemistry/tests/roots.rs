//! Root finding.

use proptest::prelude::*;

use crate::chemistry::coupled::*;
use crate::chemistry::targets::*;

type Never = std::convert::Infallible;

proptest! {
    #[test]
    fn a_bracketed_root_is_found(root in -50.0..50.0_f64, steep in 0.01..20.0_f64, cubic in 0.0..5.0_f64) {
        let f = |x: f64| Ok::<_, Never>(libm::tanh(steep * (x - root)) + cubic * libm::pow((x - root) / 100.0, 3.0));
        let found = find_root(f, -60.0, 60.0, 1e-9, 60).unwrap();
        prop_assert!((found.x - root).abs() <= 1e-8 * (1.0 + root.abs()), "{found:?} for {root}");
    }

    #[test]
    fn a_root_above_zero_is_found_from_any_first_step(exponent in -9.0..4.0_f64, first in -6.0..0.0_f64) {
        let root = libm::pow(10.0, exponent);
        let f = |x: f64| Ok::<_, Never>(x / root - 1.0);
        let found = find_root_upward(f, libm::pow(10.0, first), 1e5, 1e-12, 60).unwrap();
        prop_assert!((found.x / root - 1.0).abs() < 1e-3 || (found.x - root).abs() < 1e-11);
    }
}

#[test]
fn what_cannot_be_reached_says_how_far_it_gets() {
    let f = |x: f64| Ok::<_, Never>(libm::atan(x) - 2.0);
    match find_root_upward(f, 1.0, 1e6, 1e-9, 60) {
        Err(TargetFailure::NotBracketed { at_high, .. }) => assert!((at_high + 0.43).abs() < 0.01),
        other => panic!("{other:?}"),
    }
    assert!(matches!(find_root(f, 0.0, 1.0, 1e-9, 60), Err(TargetFailure::NotBracketed { .. })));
}

#[test]
fn a_failure_of_the_function_ends_the_search() {
    let f = |x: f64| if x > 0.5 { Err("no") } else { Ok(x - 0.6) };
    assert_eq!(find_root(f, 0.0, 1.0, 1e-9, 60), Err(TargetFailure::Evaluation("no")));
    let nan = |_: f64| Ok::<_, Never>(f64::NAN);
    assert_eq!(find_root(nan, 0.0, 1.0, 1e-9, 60), Err(TargetFailure::NotFinite));
}

proptest! {
    #[test]
    fn coupled_roots_are_found_from_rough_slopes(
        size in 1..6_usize,
        coupling in proptest::collection::vec(-0.15..0.15_f64, 36),
        bend in 0.0..0.3_f64,
        roots in proptest::collection::vec(0.7..1.3_f64, 6),
    ) {
        let root = &roots[..size];
        let f = |x: &[f64]| {
            let linear = |row: usize, at: &[f64]| (0..size).map(|column| coupling[6 * row + column] * at[column]).sum::<f64>() + at[row];
            let bent = |at: f64| bend * libm::sin(at);
            Ok::<_, Never>((0..size).map(|row| linear(row, x) + bent(x[row]) - linear(row, root) - bent(root[row])).collect())
        };
        // Slopes that know nothing of the coupling.
        let slopes: Vec<Vec<f64>> = (0..size).map(|row| (0..size).map(|column| f64::from(u8::from(row == column))).collect()).collect();
        let found = find_coupled_roots(f, vec![1.0; size], &slopes, 1e-12, 60).unwrap().unwrap();
        for (found, root) in found.iter().zip(root) {
            prop_assert!((found - root).abs() < 1e-9, "{found} for {root}");
        }
    }
}

#[test]
fn coupled_functions_without_a_root_come_to_no_end() {
    let f = |x: &[f64]| Ok::<_, Never>(vec![x[0] * x[0] + 1.0]);
    assert_eq!(find_coupled_roots(f, vec![1.0], &[vec![2.0]], 1e-12, 60), Ok(None));
    let fails = |_: &[f64]| Err("no");
    assert_eq!(find_coupled_roots(fails, vec![1.0], &[vec![1.0]], 1e-12, 60), Err("no"));
}
