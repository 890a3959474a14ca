//! A starting point: every component on its own with hydrogen, and the hydrogen balance by a bracketed secant; then complexes that come
//! out larger than their components are taken back.

use core::ops::Range;

use super::system::{Point, System};

/// Bounds of ln a(H⁺) within which any solution lies: pH −9 to 23.
const BOUNDS: (f64, f64) = (-23.0 * core::f64::consts::LN_10, 9.0 * core::f64::consts::LN_10);

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
    let mut groups = Groups::new(system);
    let ideal = groups.hydrogen(system, &mut point, BOUNDS, 0.1);
    // Early activity coefficients are kept within what a real solution has.
    system.renew_activities(&mut point, 1.0);
    point.ln_gamma.iter_mut().for_each(|g| *g = g.clamp(-10.0, 10.0));
    point.ln_water_activity = point.ln_water_activity.max(-1.0);
    groups.hydrogen(system, &mut point, (ideal - 4.0, ideal + 4.0), 0.01);
    groups.finish(system, &mut point);
    point
}

/// A form of a component at a reference activity of hydrogen.
struct Member {
    row: usize,
    hydrogen: i32,
    weight: f64,
}

/// The species that consist of one of a component, with hydrogen.
struct Groups {
    members: Vec<Member>,
    /// Members of each balance; those of water first.
    ranges: Vec<Range<usize>>,
    /// Everything else.
    complexes: Vec<usize>,
}

impl Groups {
    fn new(system: &System) -> Self {
        let columns = system.totals_mol.len();
        let mut home = Vec::with_capacity(system.species.len());
        let mut complexes = Vec::new();
        for row in 0..system.species.len() {
            let mut parts = system.parts(row).iter().filter(|(column, _)| *column > 0);
            home.push(match (parts.next(), parts.next()) {
                (None, _) => 0,
                (Some(&(column, 1.0)), None) => column,
                _ => {
                    complexes.push(row);
                    usize::MAX
                }
            });
        }
        let mut groups =
            Self { members: Vec::with_capacity(home.len()), ranges: Vec::with_capacity(columns), complexes };
        for column in 0..columns {
            let start = groups.members.len();
            for (row, _) in home.iter().enumerate().filter(|(_, h)| **h == column) {
                // Counts of hydrogen are whole numbers of a few units.
                groups.members.push(Member { row, hydrogen: system.counts[(row, 0)] as i32, weight: 0.0 });
            }
            groups.ranges.push(start..groups.members.len());
        }
        groups
    }

    /// ln a(H⁺) at which the hydrogen balance is met, leaving the molalities there.
    fn hydrogen(&mut self, system: &System, point: &mut Point, bounds: (f64, f64), tolerance: f64) -> f64 {
        let reference = 0.5 * (bounds.0 + bounds.1);
        for (column, range) in self.ranges.iter().enumerate() {
            let mut top = f64::NEG_INFINITY;
            for member in &mut self.members[range.clone()] {
                member.weight = system.ln_beta[member.row] - point.ln_gamma[member.row]
                    + f64::from(member.hydrogen) * reference
                    + system.water[member.row] * point.ln_water_activity;
                top = top.max(member.weight);
            }
            for member in &mut self.members[range.clone()] {
                member.weight = libm::exp(if column == 0 { member.weight } else { member.weight - top });
            }
        }
        let (mut low, mut high) = bounds;
        let (mut at_low, mut at_high) = (f64::NEG_INFINITY, f64::INFINITY);
        let mut x = reference;
        let mut side = 0;
        for step in 0..24 {
            let excess = self.excess(system, point, libm::exp(x - reference));
            if excess > 0.0 {
                (high, at_high) = (x, excess);
                // Halving the value at an end that stays (the Illinois rule) keeps the secant from creeping.
                if side == 1 {
                    at_low *= 0.5;
                }
                side = 1;
            } else {
                (low, at_low) = (x, excess);
                if side == -1 {
                    at_high *= 0.5;
                }
                side = -1;
            }
            if high - low < tolerance || excess.abs() < 1e-6 {
                break;
            }
            let secant = low - at_low * (high - low) / (at_high - at_low);
            let bisect = step % 4 == 3 || !(secant > low && secant < high);
            let next = if bisect { 0.5 * (low + high) } else { secant };
            if !bisect && (next - x).abs() < 0.2 * tolerance {
                break;
            }
            x = next;
        }
        point.ln_activity[0] = x;
        self.spread(system, point, libm::exp(x - reference));
        x
    }

    /// ln(hydrogen found / hydrogen there is) at this a(H⁺) relative to the reference, with negative counts on the other side.
    fn excess(&self, system: &System, point: &Point, hydrogen: f64) -> f64 {
        let total = system.totals_mol[0] / point.water_kg;
        let (mut found, mut wanted) = ((-total).max(0.0), total.max(0.0));
        for (column, range) in self.ranges.iter().enumerate() {
            let members = &self.members[range.clone()];
            let (mut sum, mut positive, mut negative) = (0.0, 0.0, 0.0);
            for member in members {
                let weight = member.weight * power(hydrogen, member.hydrogen);
                sum += weight;
                if member.hydrogen > 0 {
                    positive += f64::from(member.hydrogen) * weight;
                } else {
                    negative -= f64::from(member.hydrogen) * weight;
                }
            }
            let factor = if column == 0 { 1.0 } else { system.totals_mol[column] / point.water_kg / sum };
            found += factor * positive;
            wanted += factor * negative;
        }
        libm::log(found / wanted)
    }

    /// Molalities of the members, and component activities, at this a(H⁺) relative to the reference.
    fn spread(&self, system: &System, point: &mut Point, hydrogen: f64) {
        for (column, range) in self.ranges.iter().enumerate() {
            let members = &self.members[range.clone()];
            let weight = |member: &Member| member.weight * power(hydrogen, member.hydrogen);
            let sum: f64 = members.iter().map(weight).sum();
            let factor = if column == 0 { 1.0 } else { system.totals_mol[column] / point.water_kg / sum };
            for member in members {
                point.molality[member.row] = factor * weight(member);
            }
        }
    }

    /// Component activities from the molalities, and complexes within what there is of their components.
    fn finish(&self, system: &System, point: &mut Point) {
        for (column, range) in self.ranges.iter().enumerate().skip(1) {
            // The most plentiful form tells the activity of the component best.
            let members = self.members[range.clone()].iter();
            let Some(best) = members.max_by(|a, b| point.molality[a.row].total_cmp(&point.molality[b.row])) else { continue };
            point.ln_activity[column] = libm::log(point.molality[best.row]) + point.ln_gamma[best.row]
                - system.ln_beta[best.row]
                - f64::from(best.hydrogen) * point.ln_activity[0]
                - system.water[best.row] * point.ln_water_activity;
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

/// xⁿ by multiplication.
fn power(x: f64, n: i32) -> f64 {
    let base = if n < 0 { 1.0 / x } else { x };
    (0..n.unsigned_abs()).fold(1.0, |product, _| product * base)
}
