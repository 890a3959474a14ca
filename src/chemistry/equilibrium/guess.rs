//! A starting point: every component on its own with hydrogen, and the hydrogen balance by bisection.

use nalgebra::DVector;

use super::system::{Point, System};

/// Bounds of ln a(H⁺) within which any solution lies: pH −8 to 22.
const BOUNDS: (f64, f64) = (-22.0 * core::f64::consts::LN_10, 8.0 * core::f64::consts::LN_10);

/// The starting point of a system. Species of more than one component, or of several of one, are left out of the estimate.
pub(crate) fn start(system: &System) -> Point {
    let rows = system.counts.nrows();
    let water_kg = system.water_mol * crate::chemistry::water::MOLAR_MASS_kg_per_mol;
    let mut point = Point {
        ln_activity: DVector::zeros(system.counts.ncols()),
        ln_molality: DVector::from_element(rows, -700.0),
        ln_gamma: DVector::zeros(rows),
        ln_water_activity: 0.0,
        water_kg,
    };
    // For each species the one component that it consists of; 0 for those of water.
    let home: Vec<Option<usize>> = (0..rows)
        .map(|row| {
            let mut parts = (1..system.counts.ncols()).filter(|&column| system.counts[(row, column)] != 0.0);
            match (parts.next(), parts.next()) {
                (None, _) => Some(0),
                (Some(column), None) if system.counts[(row, column)] == 1.0 => Some(column),
                _ => None,
            }
        })
        .collect();
    let (mut low, mut high) = BOUNDS;
    for pass in 0..2 {
        for _ in 0..if pass == 0 { 9 } else { 7 } {
            let middle = 0.5 * (low + high);
            if hydrogen_excess(system, &home, &mut point, middle) > 0.0 {
                high = middle;
            } else {
                low = middle;
            }
        }
        let middle = 0.5 * (low + high);
        hydrogen_excess(system, &home, &mut point, middle);
        if pass == 0 {
            system.renew_activities(&mut point, 1.0);
            point.ln_gamma.iter_mut().for_each(|g| *g = g.clamp(-10.0, 10.0));
            point.ln_water_activity = point.ln_water_activity.max(-1.0);
            (low, high) = (middle - 3.0, middle + 3.0);
        }
    }
    point
}

/// Distributes every component over its forms at this ln a(H⁺), and tells by how much hydrogen then exceeds its total, mol.
fn hydrogen_excess(system: &System, home: &[Option<usize>], point: &mut Point, ln_hydrogen: f64) -> f64 {
    let rows = system.counts.nrows();
    point.ln_activity[0] = ln_hydrogen;
    let mut excess = -system.totals_mol[0];
    let mut weight = vec![0.0_f64; rows];
    for (row, slot) in weight.iter_mut().enumerate() {
        *slot = system.ln_beta[row] + system.counts[(row, 0)] * ln_hydrogen - point.ln_gamma[row];
    }
    for column in 0..system.counts.ncols() {
        let members = || home.iter().zip(&weight).enumerate().filter(|(_, (h, _))| **h == Some(column));
        let ln_free = if column == 0 {
            0.0
        } else {
            let top = members().map(|(_, (_, w))| *w).fold(f64::NEG_INFINITY, f64::max);
            let sum: f64 = members().map(|(_, (_, w))| libm::exp(w - top)).sum();
            libm::log(system.totals_mol[column] / point.water_kg) - top - libm::log(sum)
        };
        if column > 0 {
            point.ln_activity[column] = ln_free;
        }
        for (row, (_, w)) in members() {
            point.ln_molality[row] = (w + ln_free).clamp(-700.0, 100.0);
            excess += system.counts[(row, 0)] * libm::exp(point.ln_molality[row]) * point.water_kg;
        }
    }
    excess
}
