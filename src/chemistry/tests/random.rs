//! Random systems: whatever the ions, the solver converges to a solution that is one, or says that it did not.

use proptest::prelude::*;

use super::laboratory::{acid, pKa};
use crate::chemistry::*;

/// A random database and a recipe in it.
#[derive(Clone, Debug)]
struct Random {
    chemistry: Chemistry,
    mixture: Mixture,
    temperature_K: f64,
}

/// One component: charge, its pKa from the least acidic down, log₁₀ of its molality, ε with sodium or chloride.
type Part = (i32, Vec<f64>, f64, f64);

fn part(molality: std::ops::Range<f64>) -> impl Strategy<Value = Part> {
    (-4..=3_i32, proptest::collection::vec(0.3..13.5_f64, 0..4), molality, -0.2..0.3_f64)
}

fn random(parts: Vec<Part>, complexes: Vec<(usize, usize, f64)>, acidity: f64, t: f64) -> Random {
    let mut b = ChemistryBuilder::new();
    let (sodium, na) = acid(&mut b, "sodium", 1, 22.99, &[]);
    let (chloride, cl) = acid(&mut b, "chloride", -1, 35.45, &[]);
    b.add_interaction(na[0], cl[0], Interaction { epsilon_kg_per_mol: 0.03, uncertainty: 0.0 });
    b.add_interaction(ChemistryBuilder::HYDROGEN, cl[0], Interaction { epsilon_kg_per_mol: 0.12, uncertainty: 0.0 });
    let mut mixture = Mixture::water(1.0);
    let mut ids = Vec::new();
    for (n, (charge, mut acidities, molality, epsilon)) in parts.into_iter().enumerate() {
        acidities.sort_by(|a, b| b.total_cmp(a));
        let constants: Vec<_> =
            acidities.iter().map(|&k| pKa(&mut b, "acid", k, 1000.0 * k, -100.0)).collect();
        let (id, species) = acid(&mut b, &format!("component {n}"), charge, 100.0, &constants);
        for (n, &species) in species.iter().enumerate() {
            let counter = if charge + n as i32 > 0 { cl[0] } else { na[0] };
            if charge + n as i32 != 0 {
                b.add_interaction(species, counter, Interaction { epsilon_kg_per_mol: epsilon, uncertainty: 0.0 });
            }
        }
        ids.push((id, charge));
        mixture = mixture.with(id, libm::pow(10.0, molality));
    }
    for (i, j, log_k) in complexes {
        let ((one, z1), (other, z2)) = (ids[i % ids.len()], ids[j % ids.len()]);
        let constant = pKa(&mut b, "complex", -log_k, -5000.0, 0.0);
        let parts = if one == other { vec![(one, 3)] } else { vec![(one, 1), (other, 1)] };
        let charge = if one == other { 3 * z1 } else { z1 + z2 };
        // No ion has a charge of more than 6 or so; a model of point charges has no stable solution with it.
        if charge.abs() > 6 {
            continue;
        }
        b.add_species(Species { name: "complex".into(), charge, parts, hydrogen: 0, water: 0, log_beta: vec![(1.0, constant)] });
    }
    let chemistry = b.finish().unwrap();
    // Strong acid or base as the draw will have it, then sodium or chloride to make the recipe neutral.
    mixture.hydrogen_mol = acidity;
    mixture.water_kg -= 0.018015268 * acidity.min(0.0);
    let charge = mixture.charge_mol(&chemistry);
    let mixture = if charge > 0.0 { mixture.with(chloride, charge) } else { mixture.with(sodium, -charge) };
    Random { chemistry, mixture, temperature_K: t + 273.15 }
}

fn anything() -> impl Strategy<Value = Random> {
    (
        proptest::collection::vec(part(-12.0..1.3), 1..38),
        proptest::collection::vec((0..40_usize, 0..40_usize, 0.0..18.0_f64), 0..8),
        -5.0..5.0_f64,
        0.0..100.0_f64,
    )
        .prop_map(|(parts, complexes, acidity, t)| random(parts, complexes, acidity, t))
}

/// What a laboratory makes: up to eight ions and 0.3 mol/kg.
fn usual() -> impl Strategy<Value = Random> {
    (
        proptest::collection::vec(part(-5.0..-0.5), 1..8),
        proptest::collection::vec((0..40_usize, 0..40_usize, 0.0..12.0_f64), 0..3),
        -0.3..0.3_f64,
        0.0..60.0_f64,
    )
        .prop_map(|(parts, complexes, acidity, t)| random(parts, complexes, acidity, t))
}

/// Balances, charge and mass action of a solved state, from its public face alone.
fn check(state: &State) {
    let chemistry = state.chemistry();
    let mut totals: std::collections::BTreeMap<ComponentId, f64> = Default::default();
    let (mut hydrogen, mut hydrogen_size, mut charge, mut charge_size) = (0.0, 0.0, 0.0, 0.0);
    for (id, molality, log10_gamma) in state.species() {
        assert!(molality.is_finite() && molality >= 0.0 && log10_gamma.is_finite());
        let species = chemistry.species(id).unwrap();
        let amount = molality * state.water_kg;
        for &(part, count) in &species.parts {
            *totals.entry(part).or_insert(0.0) += amount * f64::from(count);
        }
        hydrogen += amount * f64::from(species.hydrogen);
        hydrogen_size += amount * f64::from(species.hydrogen.abs());
        charge += amount * f64::from(species.charge);
        charge_size += amount * f64::from(species.charge.abs());
        if molality > 1e-250 {
            let mut action = f64::from(species.hydrogen) * -state.pH()
                + f64::from(species.water) * libm::log10(state.water_activity());
            for &(part, count) in &species.parts {
                action += f64::from(count) * state.log10_activity(chemistry.base_species(part).unwrap()).unwrap();
            }
            for &(factor, constant) in &species.log_beta {
                action += factor * chemistry.constant(constant).unwrap().log10_k(state.temperature_K);
            }
            let error = (libm::log10(molality) + log10_gamma - action).abs();
            // A base species of less than 1e-300 mol/kg has lost its digits.
            let underflow = species.parts.iter().any(|&(part, _)| {
                state.molality_mol_per_kg(chemistry.base_species(part).unwrap()) < 1e-250
            });
            assert!(underflow || error < 1e-8, "{} is off mass action by {error}", species.name);
        }
    }
    for (id, total) in totals {
        let wanted = state.mixture().amounts_mol[&id];
        assert!((total - wanted).abs() <= 1e-10 * wanted, "{total} for {wanted}");
    }
    assert!((hydrogen - state.mixture().hydrogen_mol).abs() <= 1e-10 * hydrogen_size.max(1e-20));
    assert!(charge.abs() <= 1e-8 * charge_size);
    for value in [state.pH(), state.volume_L, state.density_kg_per_m3(), state.osmolality_mol_per_kg(), state.ionic_strength_mol_per_L()] {
        assert!(value.is_finite());
    }
}

proptest! {
    // Few enough for every run; 4000 of each have passed.
    #![proptest_config(ProptestConfig { cases: 80, ..ProptestConfig::default() })]

    #[test]
    fn anything_converges_or_says_so(random in anything()) {
        let settings = Settings::default();
        match random.chemistry.solve(&random.mixture, random.temperature_K, &settings) {
            Ok(state) => check(&state),
            Err(Failure::NotConverged { residual, steps }) => {
                prop_assert!(residual.is_finite() && steps <= settings.limits.steps);
            }
            Err(other) => prop_assert!(false, "{other}"),
        }
    }

    #[test]
    fn usual_solutions_converge_in_few_steps(random in usual()) {
        let state = random.chemistry.solve(&random.mixture, random.temperature_K, &Settings::default());
        let state = state.map_err(|e| TestCaseError::fail(e.to_string()))?;
        check(&state);
        prop_assert!(state.steps <= 200, "{} steps", state.steps);
    }

    #[test]
    fn every_model_converges_without_interactions(random in usual()) {
        for model in [ActivityModel::BatesGuggenheim, ActivityModel::Davies] {
            let settings = Settings { model, ..Settings::default() };
            match random.chemistry.solve(&random.mixture, random.temperature_K, &settings) {
                Ok(state) => check(&state),
                Err(error) => prop_assert!(model == ActivityModel::Davies, "{error}"),
            }
        }
    }

    #[test]
    fn same_input_same_bits(random in usual()) {
        let solve = || random.chemistry.solve(&random.mixture, random.temperature_K, &Settings::default()).unwrap();
        let (one, other) = (solve(), solve());
        prop_assert_eq!(one.pH().to_bits(), other.pH().to_bits());
        prop_assert_eq!(one, other);
    }

    #[test]
    fn less_hydrogen_is_a_higher_pH(random in usual(), step in -6.0..-1.0_f64) {
        // At constant other ions, so that the change of ionic strength is only that of the reactions.
        let solve = |mixture: &Mixture| random.chemistry.solve_ions(mixture, random.temperature_K, &Settings::default()).unwrap();
        let before = solve(&random.mixture);
        let after = solve(&random.mixture.clone().with_hydrogen(-libm::pow(10.0, step)));
        prop_assert!(before.buffer_capacity_mol_per_L() > 0.0);
        prop_assert!(after.pH() > before.pH(), "{} then {}", before.pH(), after.pH());
    }

    #[test]
    fn derivatives_are_those_of_differences(random in usual(), component in 0..10_usize) {
        let base = random.chemistry.solve(&random.mixture, random.temperature_K, &Settings::default()).unwrap();
        let sensitivity = base.sensitivity();
        let ids: Vec<ComponentId> = random.mixture.amounts_mol.keys().copied().collect();
        let id = ids[component % ids.len()];
        let amount = random.mixture.amounts_mol[&id];
        let mut directions = vec![
            (Mixture::default().with(id, 1.0), amount * 1e-4),
            (Mixture::water(1.0), 1e-4),
        ];
        directions.retain(|(_, step)| *step > 0.0);
        // A hydrogen step that moves the pH by a thousandth.
        directions.push((Mixture::default().with_hydrogen(1.0), 1e-3 / sensitivity.pH_derivative(&Mixture::default().with_hydrogen(1.0)).abs()));
        for (direction, step) in directions {
            let expected = sensitivity.pH_derivative(&direction);
            let difference = |h: f64| {
                let at = |factor: f64| {
                    let mut mixture = random.mixture.clone();
                    mixture.add(&direction, factor);
                    random.chemistry.solve_ions(&mixture, random.temperature_K, &Settings::default()).unwrap().pH()
                };
                (at(h) - at(-h)) / (2.0 * h)
            };
            // Two steps tell how good the difference itself is.
            let (coarse, fine) = (difference(step), difference(step / 4.0));
            let doubt = 2.0 * (coarse - fine).abs() + 1e-10 / step;
            prop_assert!((fine - expected).abs() <= 1e-5 * expected.abs() + doubt, "{expected} but {fine} ± {doubt}");
        }
        let at = |t: f64| random.chemistry.solve(&random.mixture, t, &Settings::default()).unwrap().pH();
        let t = random.temperature_K.clamp(273.5, 372.0);
        let here = random.chemistry.solve(&random.mixture, t, &Settings::default()).unwrap().dpH_dT_per_K();
        let (coarse, fine) = ((at(t + 0.1) - at(t - 0.1)) / 0.2, (at(t + 0.05) - at(t - 0.05)) / 0.1);
        let doubt = 2.0 * (coarse - fine).abs() + 1e-7;
        prop_assert!((fine - here).abs() <= 1e-4 * here.abs() + doubt, "dpH/dT {here} but {fine} ± {doubt}");
    }
}

/// Towards a component that the solution has none of, with acids, a complex and interactions of its own.
#[test]
fn derivative_towards_something_new() {
    let lab = super::laboratory::laboratory();
    let settings = Settings::default();
    let phosphate = |m: Mixture| m.with(lab.sodium, 0.15).with(lab.phosphate, 0.1).with_hydrogen(0.15);
    let calcium = |m: Mixture| m.with(lab.calcium, 0.01).with(lab.chloride, 0.02).with(lab.tris, 0.01);
    for (start, new, amount) in [
        (phosphate(Mixture::water(1.0)), lab.citrate, 1e-5),
        (calcium(Mixture::water(1.0)), lab.citrate, 1e-6),
        (calcium(Mixture::water(1.0)), lab.borate, 1e-6),
        (Mixture::water(1.0), lab.acetate, 1e-9),
    ] {
        let solve = |amount: f64| lab.chemistry.solve_ions(&start.clone().with(new, amount), 310.0, &settings).unwrap();
        let expected = solve(0.0).pH_derivative(&Mixture::default().with(new, 1.0));
        let difference = (4.0 * solve(amount).pH() - solve(2.0 * amount).pH() - 3.0 * solve(0.0).pH()) / (2.0 * amount);
        assert!((difference / expected - 1.0).abs() < 2e-3, "{difference} {expected}");
    }
}

/// The pH answers to a constant as the sensitivity says.
#[test]
fn sensitivity_to_constants() {
    let solve = |shift: [f64; 3]| {
        let mut b = ChemistryBuilder::new();
        let constants: Vec<_> = [6.396, 4.761, 3.128]
            .iter()
            .zip(shift)
            .map(|(k, d)| pKa(&mut b, "citric acid", k + d, 0.0, 0.0))
            .collect();
        let (citrate, _) = acid(&mut b, "citrate", -3, 189.1, &constants);
        let (sodium, _) = acid(&mut b, "sodium", 1, 22.99, &[]);
        let chemistry = b.finish().unwrap();
        let mixture = Mixture::water(1.0).with(citrate, 0.05).with(sodium, 0.09).with_hydrogen(0.06);
        let state = chemistry.solve(&mixture, 298.15, &Settings::default()).unwrap();
        let derivatives = state.sensitivity().to_constants();
        (state.pH(), constants, derivatives)
    };
    let (_, constants, derivatives) = solve([0.0; 3]);
    for n in 0..3 {
        let mut shift = [0.0; 3];
        shift[n] = 1e-4;
        let up = solve(shift).0;
        shift[n] = -1e-4;
        let down = solve(shift).0;
        let (_, derivative) = derivatives.iter().find(|(id, _)| *id == constants[n]).unwrap();
        // log₁₀ K = −pKa.
        let difference = -(up - down) / 2e-4;
        assert!((difference - derivative).abs() < 1e-6, "{difference} {derivative}");
    }
    // Between the second and third pKa the pH follows their mean.
    let sum: f64 = derivatives.iter().map(|(_, d)| d).sum();
    assert!((sum + 1.0).abs() < 0.01, "{sum}");
}
