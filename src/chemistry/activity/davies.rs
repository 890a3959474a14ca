//! The Davies equation, log₁₀ γ = −z² A (√I/(1 + √I) − 0.3 I) (Davies 1962, Ion Association).

use super::{IonicTerm, extended};

pub(super) fn ionic_term(slope: f64, ionic_strength: f64) -> IonicTerm {
    let term = extended::term(slope, 1.0, ionic_strength);
    IonicTerm {
        value: term.value - 0.3 * slope * ionic_strength,
        slope_kg_per_mol: term.slope_kg_per_mol - 0.3 * slope,
        osmotic_mol_per_kg: term.osmotic_mol_per_kg - 0.3 * slope * ionic_strength * ionic_strength,
    }
}
