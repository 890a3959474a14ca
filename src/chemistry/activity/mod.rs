//! Activity coefficients: the models there are, and what each contributes.

mod bates_guggenheim;
mod davies;
mod extended;
mod sit;

/// A model of single-ion activity coefficients (molal).
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum ActivityModel {
    /// Specific ion interaction theory: the Debye–Hückel term with B·a = 1.5 and published interaction coefficients.
    #[default]
    Sit,
    /// The Bates–Guggenheim convention at every ionic strength: the same term alone.
    BatesGuggenheim,
    /// The Davies equation.
    Davies,
}

/// The part of a model that depends on ionic strength alone: ln γᵢ = −zᵢ² D(I).
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct IonicTerm {
    /// D(I).
    pub value: f64,
    /// dD/dI, kg/mol.
    pub slope_kg_per_mol: f64,
    /// 2 ∫ I D′ dI from zero, mol/kg: what the term takes from the osmotic sum (Gibbs–Duhem).
    pub osmotic_mol_per_kg: f64,
}

impl ActivityModel {
    /// The ionic term for a limiting slope A (log₁₀) and an ionic strength (mol/kg).
    pub(crate) fn ionic_term(self, slope: f64, ionic_strength_mol_per_kg: f64) -> IonicTerm {
        let slope = slope * core::f64::consts::LN_10;
        // The slope of √I is infinite at zero, which no solution with H⁺ and OH⁻ reaches.
        let ionic_strength = ionic_strength_mol_per_kg.max(1e-20);
        match self {
            Self::Sit => sit::ionic_term(slope, ionic_strength),
            Self::BatesGuggenheim => bates_guggenheim::ionic_term(slope, ionic_strength),
            Self::Davies => davies::ionic_term(slope, ionic_strength),
        }
    }

    /// Whether interaction coefficients enter.
    pub(crate) fn uses_interactions(self) -> bool {
        matches!(self, Self::Sit)
    }
}
