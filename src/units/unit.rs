//! A unit: how it is written, what it measures, and the way to and from the base unit of its dimension.

use std::collections::HashMap;
use std::sync::LazyLock;

use super::table::{ROWS, Row};

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

impl Dimension {
    /// Whether a quantity of this dimension says how strong a solution is, so that it can stand before a name.
    pub fn is_strength(self) -> bool {
        matches!(
            self,
            Dimension::AmountConcentration
                | Dimension::Molality
                | Dimension::MassConcentration
                | Dimension::MassFraction
                | Dimension::VolumeFraction
                | Dimension::EnzymeActivityConcentration
        )
    }

    /// Whether a quantity of this dimension can open an ingredient line.
    pub fn opens_an_ingredient(self) -> bool {
        self.is_strength()
            || matches!(
                self,
                Dimension::Mass
                    | Dimension::Volume
                    | Dimension::Amount
                    | Dimension::Parts
                    | Dimension::EnzymeActivity
                    | Dimension::Count
                    | Dimension::Fold
            )
    }
}

/// A unit of the table.
#[derive(Clone, Copy, Debug)]
pub struct Unit(&'static Row);

/// Every spelling of every unit, without white space and with the micro sign for mu.
static SPELLINGS: LazyLock<HashMap<String, Unit>> = LazyLock::new(|| {
    let mut spellings = HashMap::new();
    for row in &ROWS {
        for written in std::iter::once(row.symbol).chain(row.spellings.iter().copied()) {
            let written = plain(written);
            // An ASCII `u` for µ, as keyboards without the sign force it.
            if let Some(rest) = written.strip_prefix('µ') {
                spellings.insert(format!("u{rest}"), Unit(row));
            }
            spellings.insert(written, Unit(row));
        }
    }
    spellings
});

/// A spelling without white space, the Greek mu made the micro sign.
fn plain(spelling: &str) -> String {
    spelling.chars().filter(|letter| !letter.is_whitespace()).map(|letter| if letter == 'μ' { 'µ' } else { letter }).collect()
}

impl PartialEq for Unit {
    fn eq(&self, other: &Self) -> bool {
        std::ptr::eq(self.0, other.0)
    }
}

impl Eq for Unit {}

impl std::hash::Hash for Unit {
    fn hash<H: std::hash::Hasher>(&self, state: &mut H) {
        self.0.symbol.hash(state);
    }
}

impl std::fmt::Display for Unit {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter.write_str(self.0.symbol)
    }
}

impl Unit {
    /// The unit of this spelling, written exactly so: case matters, white space inside `% w/v` and the three ways to
    /// write µ do not.
    pub fn parse(spelling: &str) -> Option<Unit> {
        let found = SPELLINGS.get(spelling);
        if found.is_some() || !spelling.contains(|letter: char| letter == 'μ' || letter.is_whitespace()) {
            return found.copied();
        }
        SPELLINGS.get(plain(spelling).as_str()).copied()
    }

    /// Every unit, in the order of the table.
    pub fn all() -> impl Iterator<Item = Unit> {
        ROWS.iter().map(Unit)
    }

    /// Every unit of one dimension, in the order of the table.
    pub fn of(dimension: Dimension) -> impl Iterator<Item = Unit> {
        Unit::all().filter(move |unit| unit.dimension() == dimension)
    }

    /// The unit in which the program calculates this dimension, where it has a written form; the first of the
    /// dimension in the table where it has none (temperatures are shown in °C, pressures in kPa).
    pub fn base(dimension: Dimension) -> Unit {
        let first = Unit::of(dimension).next();
        Unit::of(dimension)
            .find(|unit| unit.0.factor == 1.0 && unit.0.offset == 0.0)
            .or(first)
            .unwrap_or(Unit(&ROWS[0]))
    }

    /// The written form.
    pub fn symbol(self) -> &'static str {
        self.0.symbol
    }

    /// Other spellings that mean this unit. Those with µ may also be written with `u`.
    pub fn spellings(self) -> &'static [&'static str] {
        self.0.spellings
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

    /// A difference in this unit (a tolerance, an interval of temperature), in the base unit.
    pub fn difference_to_base(self, difference: f64) -> f64 {
        difference * self.0.factor
    }

    /// A difference in the base unit, in this unit.
    pub fn difference_from_base(self, difference: f64) -> f64 {
        difference / self.0.factor
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_spelling_reads_as_its_own_unit_and_no_two_units_share_one() {
        for unit in Unit::all() {
            for spelling in std::iter::once(unit.symbol()).chain(unit.spellings().iter().copied()) {
                assert_eq!(Unit::parse(spelling), Some(unit), "{spelling}");
                if let Some(rest) = spelling.strip_prefix('µ') {
                    assert_eq!(Unit::parse(&format!("μ{rest}")), Some(unit), "Greek mu {rest}");
                    assert_eq!(Unit::parse(&format!("u{rest}")), Some(unit), "u{rest}");
                }
            }
        }
    }

    #[test]
    fn reads_what_benches_write() {
        let symbol = |text: &str| Unit::parse(text).map(Unit::symbol);
        assert_eq!(symbol("ml"), Some("mL"));
        assert_eq!(symbol("ul"), Some("µL"));
        assert_eq!(symbol("% (w/v)"), Some("% w/v"));
        assert_eq!(symbol("%w/w"), Some("% w/w"));
        assert_eq!(symbol("mmol/l"), Some("mmol/L"));
        assert_eq!(symbol("mM"), Some("mM"));
        assert_eq!(symbol("weeks"), symbol("week"));
        assert_eq!(symbol("℃"), Some("°C"));
        assert_eq!(symbol("S·cm2/mol"), Some("S·cm²/mol"));
    }

    #[test]
    fn leaves_alone_what_is_no_unit() {
        for text in ["", "m", "N", "ppm", "cc", "gm", "mg/dL", "Mol/L", "ML", "MM", "Kg", "°F"] {
            assert_eq!(Unit::parse(text), None, "{text}");
        }
    }

    /// Factors against published definitions: the SI brochure, 9th edition (2019); mmHg and atm from ISO 80000-4;
    /// °dH from DIN 38409-6 (10 mg of CaO in a litre).
    #[test]
    fn converts_by_published_definitions() {
        let base = |text: &str, value: f64| Unit::parse(text).map(|unit| unit.to_base(value)).unwrap_or(f64::NAN);
        let near = |found: f64, expected: f64| assert!((found - expected).abs() <= 1e-12 * expected.abs(), "{found} {expected}");
        near(base("mg", 250.0), 2.5e-4);
        near(base("µL", 100.0), 1e-4);
        near(base("°C", 25.0), 298.15);
        near(base("atm", 1.0), 101_325.0);
        near(base("mmHg", 760.0), 101_325.014_435_4);
        near(base("% w/v", 0.9), 9.0);
        near(base("g/mL", 1.159), 1159.0);
        near(base("kg/m³", 998.2), 998.2);
        near(base("mS/cm", 1.41), 0.141);
        near(base("S·cm²/mol", 50.0), 5e-3);
        near(base("cm³/mol", -30.6), -0.0306);
        assert!((base("°dH", 1.0) - 3.566e-4).abs() < 1e-7);
        assert!((base("drops", 20.0) - 1e-3).abs() < 1e-15);
    }

    #[test]
    fn a_value_survives_the_way_there_and_back() {
        for unit in Unit::all() {
            let back = unit.from_base(unit.to_base(3.25));
            assert!((back - 3.25).abs() < 1e-9, "{unit}");
        }
    }

    #[test]
    fn every_dimension_has_a_base_unit() {
        for unit in Unit::all() {
            assert_eq!(Unit::base(unit.dimension()).dimension(), unit.dimension());
        }
        assert_eq!(Unit::base(Dimension::Mass).symbol(), "kg");
        assert_eq!(Unit::base(Dimension::MassConcentration).symbol(), "g/L");
        assert_eq!(Unit::base(Dimension::Temperature).symbol(), "K");
    }
}
