//! The one table of units: written form, other spellings, dimension, factor and offset to the base unit.
//!
//! Factors follow from the SI brochure (9th edition, 2019) but where a comment names another source.

use super::unit::Dimension::{self, *};

/// One row of the table: `base = value · factor + offset`.
#[derive(Debug, PartialEq)]
pub(super) struct Row {
    pub(super) symbol: &'static str,
    pub(super) spellings: &'static [&'static str],
    pub(super) dimension: Dimension,
    pub(super) factor: f64,
    pub(super) offset: f64,
}

const fn row(
    symbol: &'static str,
    spellings: &'static [&'static str],
    dimension: Dimension,
    factor: f64,
) -> Row {
    Row { symbol, spellings, dimension, factor, offset: 0.0 }
}

/// A day, in seconds.
const DAY: f64 = 86_400.0;

pub(super) static ROWS: [Row; ROWS_COUNT] = [
    row("kg", &[], Mass, 1.0),
    row("g", &[], Mass, 1e-3),
    row("mg", &[], Mass, 1e-6),
    row("µg", &[], Mass, 1e-9),
    row("ng", &[], Mass, 1e-12),
    row("L", &["l"], Volume, 1.0),
    row("mL", &["ml"], Volume, 1e-3),
    row("µL", &["µl"], Volume, 1e-6),
    // Common practice, no source: twenty drops to the millilitre.
    row("drops", &["drop"], Volume, 5e-5),
    row("mol", &[], Amount, 1.0),
    row("mmol", &[], Amount, 1e-3),
    row("µmol", &[], Amount, 1e-6),
    row("nmol", &[], Amount, 1e-9),
    row("mol/L", &["mol/l"], AmountConcentration, 1.0),
    row("mmol/L", &["mmol/l"], AmountConcentration, 1e-3),
    row("µmol/L", &["µmol/l"], AmountConcentration, 1e-6),
    row("nmol/L", &["nmol/l"], AmountConcentration, 1e-9),
    row("M", &[], AmountConcentration, 1.0),
    row("mM", &[], AmountConcentration, 1e-3),
    row("µM", &[], AmountConcentration, 1e-6),
    row("nM", &[], AmountConcentration, 1e-9),
    row("mol/kg", &[], Molality, 1.0),
    row("mmol/kg", &[], Molality, 1e-3),
    row("µmol/kg", &[], Molality, 1e-6),
    row("g/L", &["g/l"], MassConcentration, 1.0),
    row("mg/L", &["mg/l"], MassConcentration, 1e-3),
    row("µg/L", &["µg/l"], MassConcentration, 1e-6),
    row("ng/L", &["ng/l"], MassConcentration, 1e-9),
    row("g/mL", &["g/ml", "g/cm³", "g/cm3"], MassConcentration, 1e3),
    row("mg/mL", &["mg/ml"], MassConcentration, 1.0),
    row("µg/mL", &["µg/ml"], MassConcentration, 1e-3),
    row("ng/mL", &["ng/ml"], MassConcentration, 1e-6),
    row("kg/m³", &["kg/m3"], MassConcentration, 1.0),
    row("% w/v", &["% (w/v)", "% m/v", "% (m/v)"], MassConcentration, 10.0),
    row("% w/w", &["% (w/w)", "% m/m", "% (m/m)"], MassFraction, 1e-2),
    row("g/kg", &[], MassFraction, 1e-3),
    row("mg/kg", &[], MassFraction, 1e-6),
    row("µg/kg", &[], MassFraction, 1e-9),
    row("% v/v", &["% (v/v)"], VolumeFraction, 1e-2),
    row("mL/L", &["ml/l", "ml/L", "mL/l"], VolumeFraction, 1e-3),
    row("parts", &["part"], Parts, 1.0),
    row("%", &[], Percent, 1e-2),
    Row { symbol: "°C", spellings: &["℃", "degC", "C"], dimension: Temperature, factor: 1.0, offset: 273.15 },
    row("K", &[], Temperature, 1.0),
    row("kPa", &[], Pressure, 1e3),
    row("mbar", &[], Pressure, 1e2),
    row("bar", &[], Pressure, 1e5),
    // ISO 80000-4.
    row("atm", &[], Pressure, 101_325.0),
    row("mmHg", &[], Pressure, 133.322_387_415),
    row("s", &["second", "seconds"], Time, 1.0),
    row("min", &["minute", "minutes"], Time, 60.0),
    row("h", &["hour", "hours"], Time, 3600.0),
    row("d", &["day", "days"], Time, DAY),
    row("weeks", &["week"], Time, 7.0 * DAY),
    // A twelfth of a Julian year.
    row("months", &["month"], Time, 365.25 / 12.0 * DAY),
    row("years", &["year"], Time, 365.25 * DAY),
    row("mS/cm", &[], Conductivity, 0.1),
    row("µS/cm", &[], Conductivity, 1e-4),
    row("S/m", &[], Conductivity, 1.0),
    row("mosmol/kg", &[], Osmolality, 1e-3),
    row("osmol/kg", &[], Osmolality, 1.0),
    row("kJ/mol", &[], MolarEnergy, 1e3),
    row("J/mol", &[], MolarEnergy, 1.0),
    row("J/(mol·K)", &["J/(mol.K)", "J/(mol*K)", "J/(mol⋅K)", "J/(mol K)"], MolarHeatCapacity, 1.0),
    row("kJ/(mol·K)", &["kJ/(mol.K)", "kJ/(mol*K)", "kJ/(mol⋅K)", "kJ/(mol K)"], MolarHeatCapacity, 1e3),
    row("kg/mol", &[], MassPerAmount, 1.0),
    row("g/mol", &[], MassPerAmount, 1e-3),
    row("S·cm²/mol", &["S·cm2/mol", "S.cm2/mol", "S⋅cm²/mol", "S cm²/mol", "S cm2/mol"], MolarConductivity, 1e-4),
    row("cm³/mol", &["cm3/mol"], MolarVolume, 1e-3),
    row("U", &[], EnzymeActivity, 1.0),
    row("kU", &[], EnzymeActivity, 1e3),
    row("U/L", &["U/l"], EnzymeActivityConcentration, 1.0),
    row("U/mL", &["U/ml"], EnzymeActivityConcentration, 1e3),
    row("kU/mL", &["kU/ml"], EnzymeActivityConcentration, 1e6),
    row("U/µL", &["U/µl", "U/uL", "U/ul"], EnzymeActivityConcentration, 1e6),
    row("each", &[], Count, 1.0),
    row("x", &["×"], Fold, 1.0),
    row("mmol/L (eq)", &["mmol/l (eq)"], EquivalentConcentration, 1e-3),
    row("mol/L (eq)", &["mol/l (eq)"], EquivalentConcentration, 1.0),
    // DIN 38409-6: 10 mg of CaO in a litre; CaO 56.077 g/mol (IUPAC 2021), two equivalents.
    row("°dH", &["dH"], EquivalentConcentration, 2.0 * 0.010 / 56.077),
];

const ROWS_COUNT: usize = 80;
