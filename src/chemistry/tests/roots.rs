//! Root finding.

use proptest::prelude::*;

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
