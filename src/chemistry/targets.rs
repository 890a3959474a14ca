//! Roots of functions of one variable that may fail: what a target (`q.s.`, a pH to be set) asks for.

use core::fmt;

/// A root.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Root {
    /// Where the function is zero within the tolerance.
    pub x: f64,
    /// The function there.
    pub residual: f64,
    /// How often the function was evaluated.
    pub evaluations: usize,
}

/// Why no root was found.
#[derive(Clone, Debug, PartialEq)]
pub enum TargetFailure<E> {
    /// The function has the same sign at both ends: the target is out of reach. Values at the ends tell how far it gets.
    NotBracketed {
        /// Lower end.
        low: f64,
        /// The function there.
        at_low: f64,
        /// Upper end.
        high: f64,
        /// The function there.
        at_high: f64,
    },
    /// The function itself failed.
    Evaluation(E),
    /// Not a finite bound, tolerance or value.
    NotFinite,
    /// The steps ran out with the root between these bounds.
    Steps {
        /// Lower bound.
        low: f64,
        /// Upper bound.
        high: f64,
    },
}

impl<E: fmt::Display> fmt::Display for TargetFailure<E> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NotBracketed { low, at_low, high, at_high } => write!(
                f,
                "the target is out of reach: from {low} to {high} the difference from it goes from {at_low} to {at_high}"
            ),
            Self::Evaluation(error) => error.fmt(f),
            Self::NotFinite => write!(f, "a bound or value of the search is not a finite number"),
            Self::Steps { low, high } => write!(f, "the search ended with the answer between {low} and {high}"),
        }
    }
}

impl<E: fmt::Debug + fmt::Display> std::error::Error for TargetFailure<E> {}

/// Finds a root of `f` between two bounds at which it has different signs, to a tolerance in x, by Brent's method (Brent 1973).
///
/// # Errors
/// [`TargetFailure`]; a failing `f` ends the search.
pub fn find_root<E>(
    mut f: impl FnMut(f64) -> Result<f64, E>,
    low: f64,
    high: f64,
    tolerance: f64,
    max_steps: usize,
) -> Result<Root, TargetFailure<E>> {
    let mut value = evaluator(&mut f);
    let at_low = value(low)?;
    let at_high = value(high)?;
    brent(value, (low, at_low), (high, at_high), tolerance, max_steps, 2)
}

/// Finds a root of `f` from 0 upward: steps from `first` by factors of four until the sign changes or `limit` is passed.
///
/// # Errors
/// [`TargetFailure::NotBracketed`] with the values at 0 and at the limit where the sign does not change.
pub fn find_root_upward<E>(
    mut f: impl FnMut(f64) -> Result<f64, E>,
    first: f64,
    limit: f64,
    tolerance: f64,
    max_steps: usize,
) -> Result<Root, TargetFailure<E>> {
    if !(first.is_finite() && limit.is_finite() && first > 0.0 && limit > 0.0) {
        return Err(TargetFailure::NotFinite);
    }
    let mut value = evaluator(&mut f);
    let start = (0.0, value(0.0)?);
    let mut evaluations = 1;
    let mut low = start;
    let mut x = first.min(limit);
    while evaluations < max_steps {
        let high = (x, value(x)?);
        evaluations += 1;
        if low.1 == 0.0 || high.1 == 0.0 || (low.1 > 0.0) != (high.1 > 0.0) {
            return brent(value, low, high, tolerance, max_steps, evaluations);
        }
        if x >= limit {
            return Err(TargetFailure::NotBracketed { low: 0.0, at_low: start.1, high: x, at_high: high.1 });
        }
        low = high;
        x = (x * 4.0).min(limit);
    }
    Err(TargetFailure::Steps { low: low.0, high: x })
}

fn evaluator<E>(
    f: &mut impl FnMut(f64) -> Result<f64, E>,
) -> impl FnMut(f64) -> Result<f64, TargetFailure<E>> {
    move |x| {
        if !x.is_finite() {
            return Err(TargetFailure::NotFinite);
        }
        match f(x) {
            Ok(y) if y.is_finite() => Ok(y),
            Ok(_) => Err(TargetFailure::NotFinite),
            Err(error) => Err(TargetFailure::Evaluation(error)),
        }
    }
}

fn brent<E>(
    mut value: impl FnMut(f64) -> Result<f64, TargetFailure<E>>,
    low: (f64, f64),
    high: (f64, f64),
    tolerance: f64,
    max_steps: usize,
    mut evaluations: usize,
) -> Result<Root, TargetFailure<E>> {
    let ((mut a, mut at_a), (mut b, mut at_b)) = (low, high);
    if !(tolerance.is_finite() && tolerance >= 0.0) {
        return Err(TargetFailure::NotFinite);
    }
    if at_a != 0.0 && at_b != 0.0 && (at_a > 0.0) == (at_b > 0.0) {
        return Err(TargetFailure::NotBracketed { low: a, at_low: at_a, high: b, at_high: at_b });
    }
    // b is the best estimate, c the other side of the root, a the estimate before.
    let (mut c, mut at_c) = (a, at_a);
    let mut step = b - a;
    let mut step_before = step;
    loop {
        if (at_b > 0.0) == (at_c > 0.0) {
            (c, at_c) = (a, at_a);
            step = b - a;
            step_before = step;
        }
        if at_c.abs() < at_b.abs() {
            (a, at_a) = (b, at_b);
            (b, at_b) = (c, at_c);
            (c, at_c) = (a, at_a);
        }
        let near = 2.0 * f64::EPSILON * b.abs() + 0.5 * tolerance;
        let middle = 0.5 * (c - b);
        if middle.abs() <= near || at_b == 0.0 {
            return Ok(Root { x: b, residual: at_b, evaluations });
        }
        if evaluations >= max_steps {
            return Err(TargetFailure::Steps { low: b.min(c), high: b.max(c) });
        }
        let mut bisect = true;
        if step_before.abs() >= near && at_a.abs() > at_b.abs() {
            let s = at_b / at_a;
            let (mut p, mut q) = if a == c {
                (2.0 * middle * s, 1.0 - s)
            } else {
                let (q, r) = (at_a / at_c, at_b / at_c);
                (s * (2.0 * middle * q * (q - r) - (b - a) * (r - 1.0)), (q - 1.0) * (r - 1.0) * (s - 1.0))
            };
            if p > 0.0 {
                q = -q;
            }
            p = p.abs();
            if 2.0 * p < (3.0 * middle * q - (near * q).abs()).min((step_before * q).abs()) {
                step_before = step;
                step = p / q;
                bisect = false;
            }
        }
        if bisect {
            step = middle;
            step_before = middle;
        }
        (a, at_a) = (b, at_b);
        b += if step.abs() > near { step } else { near.copysign(middle) };
        at_b = value(b)?;
        evaluations += 1;
    }
}
