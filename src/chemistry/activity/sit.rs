//! Specific ion interaction theory (Brønsted, Guggenheim, Scatchard; the form of the NEA Thermochemical Database, Grenthe et al. 1992):
//! log₁₀ γᵢ = −zᵢ² A √I/(1 + 1.5 √I) + Σ ε(i,j) mⱼ. The sum over partners is added where the species are known.

use super::{IonicTerm, extended};

pub(super) fn ionic_term(slope: f64, ionic_strength: f64) -> IonicTerm {
    extended::term(slope, 1.5, ionic_strength)
}
