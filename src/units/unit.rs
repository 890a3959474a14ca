//! The one table of units: how each is written, what it measures, and its factor to the base unit of its dimension.

/// What a unit measures. The base unit, in which the program calculates, stands beside each.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Dimension {
    /// Mass, kg.
    Mass,
    /// Volume, L.
    Volume,
    /// Amount of substance, mol.
    Amount,
    /// Amount concentration, mol/L.
    AmountConcentration,
    /// Molality, mol per kg of water.
    Molality,
    /// Mass concentration and density, g/L (which is kg/m³).
    MassConcentration,
    /// Mass fraction (`% w/w`, g/kg), kg/kg.
    MassFraction,
    /// Volume fraction (`% v/v`, mL/L), L/L.
    VolumeFraction,
    /// Parts by volume, of a batch that says how much it `makes`.
    Parts,
    /// A bare per cent, as purity, loss, tolerance and gas take it; 1.
    Percent,
    /// Temperature, K.
    Temperature,
    /// Pressure, Pa.
    Pressure,
    /// Time, s.
    Time,
    /// Conductivity, S/m.
    Conductivity,
    /// Osmolality, mol/kg.
    Osmolality,
    /// Molar energy, J/mol.
    MolarEnergy,
    /// Molar heat capacity, J/(mol·K).
    MolarHeatCapacity,
    /// Mass per amount (molar mass, SIT coefficients), kg/mol.
    MassPerAmount,
    /// Molar conductivity, S·m²/mol.
    MolarConductivity,
    /// Molar volume, L/mol.
    MolarVolume,
    /// Enzyme activity, U.
    EnzymeActivity,
    /// Enzyme activity concentration, U/L.
    EnzymeActivityConcentration,
    /// Tablets, vials: `each`.
    Count,
    /// Times the strength at which it is used: `1x`, `50x`.
    Fold,
    /// Alkalinity and hardness as equivalents, mol/L (eq); `mmol/L (eq)` and °dH.
    EquivalentConcentration,
}

/// One row of the table of units.
#[derive(Debug, PartialEq)]
struct Row {
    symbol: &'static str,
    spellings: &'static [&'static str],
    dimension: Dimension,
    factor: f64,
    offset: f64,
}

/// A unit of the table.
#[derive(Clone, Copy, Debug)]
pub struct Unit(&'static Row);

impl PartialEq for Unit {
    fn eq(&self, other: &Self) -> bool {
        std::ptr::eq(self.0, other.0)
    }
}

impl Unit {
    /// The written form.
    pub fn symbol(self) -> &'static str {
        self.0.symbol
    }

    /// What it measures.
    pub fn dimension(self) -> Dimension {
        self.0.dimension
    }

    /// A value in this unit, in the base unit of its dimension.
    pub fn to_base(self, value: f64) -> f64 {
        value * self.0.factor + self.0.offset
    }

    /// A value in the base unit, in this unit.
    pub fn from_base(self, value: f64) -> f64 {
        (value - self.0.offset) / self.0.factor
    }
}
