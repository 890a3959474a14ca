//! A starting point: every component on its own with hydrogen, and the hydrogen balance by a bracketed secant; then complexes that come
//! out larger than their components are taken back.

use super::system::{Point, System};

/// Bounds of ln a(H⁺) within which any solution lies: pH −9 to 23.
const BOUNDS: (f64, f64) = (-23.0 * core::f64::consts::LN_10, 9.0 * core::f64::consts::LN_10);
/// How well ln a(H⁺) is wanted.
const TOLERANCE: f64 = 0.02;

/// The starting point of a system.
pub(crate) fn start(system: &System) -> Point {
    let rows = system.species.len();
    let mut point = Point {
        ln_activity: vec![0.0; system.totals_mol.len()],
        ln_molality: vec![-700.0; rows],
        molality: vec![0.0; rows],
        ln_gamma: vec![0.0; rows],
        ln_water_activity: 0.0,
        water_kg: system.water_mol * crate::chemistry::water::MOLAR_MASS_kg_per_mol,
    };
    let groups = Groups::new(system);
    let ideal = groups.hydrogen(system, &mut point, BOUNDS);
    // Early activity coefficients are kept within what a real solution has.
    system.renew_activities(&mut point, 1.0);
    point.ln_gamma.iter_mut().for_each(|g| *g = g.clamp(-10.0, 10.0));
    point.ln_water_activity = point.ln_water_activity.max(-1.0);
    groups.hydrogen(system, &mut point, (ideal - 4.0, ideal + 4.0));
    groups.finish(system, &mut point);
    point
}

/// The species that consist of one of a component, with hydrogen.
struct Groups {
    /// Species of each balance, one balance after the other; those of water first.
    members: Vec<(usize, f64)>,
    ends: Vec<usize>,
    /// Everything else.
    complexes: Vec<usize>,
    weights: Vec<f64>,
}

impl Groups {
    fn new(system: &System) -> Self {
        let columns = system.totals_mol.len();
        let mut home = vec![usize::MAX; system.species.len()];
        let mut complexes = Vec::new();
        for (row, home) in home.iter_mut().enumerate() {
            let mut parts = system.parts(row).iter().filter(|(column, _)| *column > 0);
            match (parts.next(), parts.next()) {
                (None, _) => *home = 0,
                (Some(&(column, 1.0)), None) => *home = column,
                _ => complexes.push(row),
            }
        }
        let mut groups =
            Self { members: Vec::with_capacity(home.len()), ends: Vec::with_capacity(columns), complexes, weights: Vec::new() };
        for column in 0..columns {
            for (row, _) in home.iter().enumerate().filter(|(_, h)| **h == column) {
                groups.members.push((row, system.counts[(row, 0)]));
            }
            groups.ends.push(groups.members.len());
        }
        groups.weights = vec![0.0; groups.members.len()];
        groups
    }

    /// ln a(H⁺) at which the hydrogen balance is met, leaving the molalities there.
    fn hydrogen(&self, system: &System, point: &mut Point, bounds: (f64, f64)) -> f64 {
        let mut weights = self.weights.clone();
        let (mut low, mut high) = bounds;
        let (mut at_low, mut at_high) = (f64::NEG_INFINITY, f64::INFINITY);
        let mut x = 0.5 * (low + high);
        let mut side = 0;
        for step in 0..24 {
            let excess = self.excess(system, point, &mut weights, x);
            if excess > 0.0 {
                (high, at_high) = (x, excess);
                // Halving the value at an end that stays (the Illinois rule) keeps the secant from creeping.
                if side == 1 { at_low *= 0.5 }
                side = 1;
            } else {
                (low, at_low) = (x, excess);
                if side == -1 { at_high *= 0.5 }
                side = -1;
            }
            if high - low < TOLERANCE || excess.abs() < 1e-6 {
                break;
            }
            let secant = low - at_low * (high - low) / (at_high - at_low);
            let previous = x;
            x = if step % 4 != 3 && secant > low && secant < high { secant } else { 0.5 * (low + high) };
            if (x - previous).abs() < 0.2 * TOLERANCE && step % 4 != 3 {
                break;
            }
        }
        point.ln_activity[0] = x;
        self.excess(system, point, &mut weights, x);
        x
    }

    /// Distributes every component over its forms at this ln a(H⁺); returns ln(hydrogen found / hydrogen there is), with negative
    /// counts on the other side.
    fn excess(&self, system: &System, point: &mut Point, weights: &mut [f64], ln_hydrogen: f64) -> f64 {
        let total = system.totals_mol[0] / point.water_kg;
        let (mut found, mut wanted) = ((-total).max(0.0), total.max(0.0));
        let mut start = 0;
        for (column, &end) in self.ends.iter().enumerate() {
            let mut top = f64::NEG_INFINITY;
            for (weight, &(row, hydrogen)) in weights.iter_mut().zip(&self.members).take(end).skip(start) {
                *weight = system.ln_beta[row] + hydrogen * ln_hydrogen - point.ln_gamma[row];
                top = top.max(*weight);
            }
            let mut factor = 1.0;
            if column == 0 {
                top = 0.0;
            }
            let single = end - start == 1;
            if column > 0 {
                let mut sum = if single { 1.0 } else { 0.0 };
                if !single {
                    for weight in weights.iter_mut().take(end).skip(start) {
                        *weight = libm::exp(*weight - top);
                        sum += *weight;
                    }
                }
                factor = system.totals_mol[column] / point.water_kg / sum;
            }
            for (weight, &(row, hydrogen)) in weights.iter().zip(&self.members).take(end).skip(start) {
                let molality = match (column, single) {
                    (0, _) => libm::exp(weight.min(100.0)),
                    (_, true) => factor,
                    _ => factor * weight,
                };
                point.molality[row] = molality;
                if hydrogen > 0.0 {
                    found += hydrogen * molality;
                } else {
                    wanted -= hydrogen * molality;
                }
            }
            start = end;
        }
        libm::log(found / wanted)
    }

    /// Component activities from the molalities, and complexes within what there is of their components.
    fn finish(&self, system: &System, point: &mut Point) {
        let mut start = 0;
        for (column, &end) in self.ends.iter().enumerate() {
            // The most plentiful form tells the activity of the component best.
            let best = self.members.iter().take(end).skip(start).max_by(|a, b| point.molality[a.0].total_cmp(&point.molality[b.0]));
            if let (true, Some(&(row, hydrogen))) = (column > 0, best) {
                point.ln_activity[column] = libm::log(point.molality[row]) + point.ln_gamma[row]
                    - system.ln_beta[row]
                    - hydrogen * point.ln_activity[0]
                    - system.water[row] * point.ln_water_activity;
            }
            start = end;
        }
        for _ in 0..3 {
            for &row in &self.complexes {
                let limit = |&(column, count): &(usize, f64)| system.totals_mol[column] / point.water_kg / count;
                let parts = || system.parts(row).iter().filter(|(column, _)| *column > 0);
                let scarcest = parts().map(limit).fold(f64::INFINITY, f64::min);
                let excess = system.mass_action(point, row) - libm::log(scarcest);
                if excess > 0.0 {
                    // What is scarce is shared between the components of which there is little.
                    let scarce: Vec<(usize, f64)> = parts().filter(|part| limit(part) < 3.0 * scarcest).copied().collect();
                    let shares: f64 = scarce.iter().map(|(_, count)| count).sum();
                    for (column, _) in scarce {
                        point.ln_activity[column] -= excess / shares;
                    }
                }
            }
        }
    }
}
