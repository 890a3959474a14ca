//! The equilibrium of a solution: all mass balances and mass-action laws together, with activity coefficients.
//!
//! Unknowns are the logarithms of the component activities and of the molalities. A guess ([`guess`]) is brought near by a descent
//! with frozen activity coefficients, which cannot fail where a solution exists ([`descent`]), and finished by Newton's method on the
//! whole system ([`newton`]). Where that fails, the totals are raised step by step from a dilute start. Phases beside the solution make a
//! smaller system of it ([`reduction`]).

#![allow(clippy::indexing_slicing, reason = "matrices are indexed by the sizes they were made with, never by input")]

pub(crate) mod action;
pub(crate) mod descent;
pub(crate) mod guess;
pub(crate) mod linear_algebra;
pub(crate) mod newton;
pub(crate) mod reduction;
pub(crate) mod system;

use super::Failure;
pub(crate) use system::{Point, System};

/// How long the solver may try.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Limits {
    /// Newton steps in all, over every stage.
    pub steps: usize,
}

impl Default for Limits {
    fn default() -> Self {
        Self { steps: 2000 }
    }
}

/// Largest relative mass-balance residual of a solution.
pub(crate) const RESIDUAL: f64 = 1e-10;

/// Solves a system; also tells how many Newton steps it took.
pub(crate) fn solve(system: &System, limits: Limits) -> Result<(Point, usize), Failure> {
    let mut budget = limits.steps;
    let mut point = guess::start(system);
    if direct(system, &mut point, &mut budget) {
        return Ok((point, limits.steps - budget));
    }
    if let Some(point) = continuation(system, &mut budget) {
        return Ok((point, limits.steps - budget));
    }
    let residual = system.residual(&point);
    Err(Failure::NotConverged {
        steps: limits.steps.saturating_sub(budget),
        residual: if residual.is_finite() { residual } else { f64::MAX },
    })
}

/// Descent with activity coefficients renewed a few times, then Newton's method.
fn direct(system: &System, point: &mut Point, budget: &mut usize) -> bool {
    for round in 0..4 {
        let passes = 1 + 4 * round;
        for _ in 0..passes {
            if !descent::settle(system, point, budget) {
                return false;
            }
            system.renew_activities(point, if round < 2 { 1.0 } else { 0.5 });
        }
        let mut trial = point.clone();
        if newton::finish(system, &mut trial, budget) {
            *point = trial;
            return true;
        }
    }
    false
}

/// Raises the totals from a dilute start, where the solution is nearly ideal, following the solution.
fn continuation(system: &System, budget: &mut usize) -> Option<Point> {
    let mut scale = 1e-4;
    let mut scaled = system.scaled(scale);
    let mut point = guess::start(&scaled);
    if !direct(&scaled, &mut point, budget) {
        return None;
    }
    let mut factor: f64 = 4.0;
    while scale < 1.0 {
        let next = (scale * factor).min(1.0);
        scaled = system.scaled(next);
        let mut trial = point.clone();
        trial.shift(libm::log(next / scale));
        if newton::finish(&scaled, &mut trial, budget) {
            point = trial;
            scale = next;
            factor = (factor * 1.5).min(4.0);
        } else {
            factor = libm::sqrt(factor);
            if factor < 1.001 || *budget == 0 {
                return None;
            }
        }
    }
    Some(point)
}
