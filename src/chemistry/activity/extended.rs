//! The extended Debye–Hückel term D = a √I / (1 + b √I), which the models share.

use super::IonicTerm;

/// The term for a (natural logarithm) and b, both (kg/mol)^½, at an ionic strength in mol/kg.
pub(super) fn term(a: f64, b: f64, ionic_strength: f64) -> IonicTerm {
    let root = libm::sqrt(ionic_strength);
    let t = 1.0 + b * root;
    // t − 2 ln t − 1/t loses its digits for small b√I, where its series is (b√I)³/3 − (b√I)⁴/2 + 3(b√I)⁵/5.
    let x = b * root;
    let bracket = if x < 1e-3 {
        x * x * x * (1.0 / 3.0 - x * (0.5 - 0.6 * x))
    } else {
        t - 2.0 * libm::log(t) - 1.0 / t
    };
    IonicTerm {
        value: a * root / t,
        slope_kg_per_mol: a / (2.0 * root * t * t),
        osmotic_mol_per_kg: 2.0 * a / (b * b * b) * bracket,
    }
}
