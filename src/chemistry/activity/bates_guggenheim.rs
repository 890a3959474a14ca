//! The Bates–Guggenheim convention, log₁₀ γ = −z² A √I/(1 + 1.5 √I), on which the pH scale rests (Buck et al. 2002).

use super::{IonicTerm, extended};

pub(super) fn ionic_term(slope: f64, ionic_strength: f64) -> IonicTerm {
    extended::term(slope, 1.5, ionic_strength)
}
