//! The one formatter of numbers: significant figures, and the unit in which a quantity reads best.

use super::unit::{Dimension, Unit};

/// Stands where there is no number to show.
const NO_NUMBER: &str = "–";

/// `value` with so many significant figures (at least one, at most fifteen), trailing zeros kept: `significant(3.12, 4)`
/// is `3.120`. From ten million up and below a ten-thousandth an exponent is written: `1.20e-7`.
pub fn significant(value: f64, digits: usize) -> String {
    let digits = digits.clamp(1, 15);
    if !value.is_finite() {
        return NO_NUMBER.to_owned();
    }
    if value == 0.0 {
        return fixed(0.0, digits - 1);
    }
    // The exponent after rounding: 9.996 with three figures is 10.0.
    let scientific = format!("{:.*e}", digits - 1, value);
    let exponent = scientific.split_once('e').and_then(|(_, power)| power.parse::<i32>().ok()).unwrap_or(0);
    if !(-4..7).contains(&exponent) {
        return scientific;
    }
    let decimals = digits as i32 - 1 - exponent;
    if decimals >= 0 {
        fixed(value, decimals as usize)
    } else {
        let step = 10f64.powi(-decimals);
        fixed((value / step).round() * step, 0)
    }
}

/// `value` with so many decimals; never a negative zero.
pub fn fixed(value: f64, decimals: usize) -> String {
    if !value.is_finite() {
        return NO_NUMBER.to_owned();
    }
    let text = format!("{value:.decimals$}");
    match text.strip_prefix('-') {
        Some(positive) if positive.chars().all(|digit| matches!(digit, '0' | '.')) => positive.to_owned(),
        _ => text,
    }
}

/// A pH or another logarithm with two decimals.
pub fn ph(value: f64) -> String {
    fixed(value, 2)
}

/// A value and its uncertainty, both to the second significant figure of the uncertainty: `("7.198", "0.0030")`.
/// Without a positive uncertainty the value has six significant figures and the second string is empty.
pub fn with_uncertainty(value: f64, uncertainty: f64) -> (String, String) {
    if !(uncertainty.is_finite() && uncertainty > 0.0) {
        return (significant(value, 6), String::new());
    }
    let scientific = format!("{uncertainty:.1e}");
    let exponent = scientific.split_once('e').and_then(|(_, power)| power.parse::<i32>().ok()).unwrap_or(0);
    let decimals = (1 - exponent).clamp(0, 15) as usize;
    (fixed(value, decimals), fixed(uncertainty, decimals))
}

/// A value of the base unit written in `unit`: `quantity(0.00312, g, 4)` is `3.120 g`.
pub fn quantity(base: f64, unit: Unit, digits: usize) -> String {
    format!("{} {}", significant(unit.from_base(base), digits), unit.symbol())
}

/// The unit of `ladder` (symbols from small to large) in which a value of the base unit reads best: the largest in
/// which it is at least one after rounding to `digits`, else the smallest.
fn best(base: f64, ladder: &[&str], digits: usize) -> Option<Unit> {
    let units: Vec<Unit> = ladder.iter().filter_map(|symbol| Unit::parse(symbol)).collect();
    if base == 0.0 || !base.is_finite() {
        return units.get(units.len() / 2).copied();
    }
    let reads = |unit: &&Unit| {
        significant(unit.from_base(base), digits).parse::<f64>().is_ok_and(|shown| shown.abs() >= 1.0)
    };
    units.iter().rev().find(reads).or(units.first()).copied()
}

/// The units among which [`readable`] chooses, from small to large.
fn ladder(dimension: Dimension) -> &'static [&'static str] {
    match dimension {
        Dimension::Mass => &["ng", "µg", "mg", "g", "kg"],
        Dimension::Volume => &["µL", "mL", "L"],
        Dimension::Amount => &["nmol", "µmol", "mmol", "mol"],
        Dimension::AmountConcentration => &["nmol/L", "µmol/L", "mmol/L", "mol/L"],
        Dimension::Molality => &["µmol/kg", "mmol/kg", "mol/kg"],
        Dimension::MassConcentration => &["ng/L", "µg/L", "mg/L", "g/L"],
        Dimension::MassFraction => &["µg/kg", "mg/kg", "g/kg"],
        Dimension::VolumeFraction => &["mL/L"],
        Dimension::Temperature => &["°C"],
        Dimension::Pressure => &["kPa"],
        Dimension::Time => &["s", "min", "h", "d"],
        Dimension::Conductivity => &["µS/cm", "mS/cm"],
        Dimension::Osmolality => &["mosmol/kg"],
        Dimension::MolarEnergy => &["kJ/mol"],
        Dimension::MolarHeatCapacity => &["J/(mol·K)"],
        Dimension::MassPerAmount => &["g/mol"],
        Dimension::MolarConductivity => &["S·cm²/mol"],
        Dimension::MolarVolume => &["cm³/mol"],
        Dimension::EnzymeActivity => &["U", "kU"],
        Dimension::EnzymeActivityConcentration => &["U/L", "U/mL"],
        Dimension::EquivalentConcentration => &["mmol/L (eq)"],
        Dimension::Parts => &["parts"],
        Dimension::Percent => &["%"],
        Dimension::Count => &["each"],
        Dimension::Fold => &["x"],
    }
}

/// The unit in which a value of the base unit reads best.
pub fn readable_unit(base: f64, dimension: Dimension, digits: usize) -> Unit {
    best(base, ladder(dimension), digits).unwrap_or(Unit::base(dimension))
}

/// A value of the base unit, in the unit in which it reads best.
pub fn readable(base: f64, dimension: Dimension, digits: usize) -> String {
    quantity(base, readable_unit(base, dimension, digits), digits)
}

/// A mass in kg: `mass(0.00312, 4)` is `3.120 g`.
pub fn mass(kilograms: f64, digits: usize) -> String {
    readable(kilograms, Dimension::Mass, digits)
}

/// A volume in L: `volume(0.0131, 3)` is `13.1 mL`.
pub fn volume(litres: f64, digits: usize) -> String {
    readable(litres, Dimension::Volume, digits)
}

/// An amount of substance in mol.
pub fn amount(moles: f64, digits: usize) -> String {
    readable(moles, Dimension::Amount, digits)
}

/// An amount concentration in mol/L.
pub fn concentration(moles_per_litre: f64, digits: usize) -> String {
    readable(moles_per_litre, Dimension::AmountConcentration, digits)
}

/// A molality in mol/kg.
pub fn molality(moles_per_kilogram: f64, digits: usize) -> String {
    readable(moles_per_kilogram, Dimension::Molality, digits)
}

/// A mass concentration in g/L.
pub fn mass_concentration(grams_per_litre: f64, digits: usize) -> String {
    readable(grams_per_litre, Dimension::MassConcentration, digits)
}

/// A density in g/L (kg/m³), written in g/mL.
pub fn density(grams_per_litre: f64, digits: usize) -> String {
    format!("{} g/mL", significant(grams_per_litre / 1000.0, digits))
}

/// A temperature in K, in °C without superfluous decimals: `25 °C`, `22.5 °C`.
pub fn temperature(kelvin: f64) -> String {
    let celsius = fixed(kelvin - 273.15, 1);
    format!("{} °C", celsius.strip_suffix(".0").unwrap_or(&celsius))
}

/// A conductivity in S/m.
pub fn conductivity(siemens_per_metre: f64, digits: usize) -> String {
    readable(siemens_per_metre, Dimension::Conductivity, digits)
}

/// An osmolality in mol/kg.
pub fn osmolality(osmoles_per_kilogram: f64, digits: usize) -> String {
    readable(osmoles_per_kilogram, Dimension::Osmolality, digits)
}

/// A fraction as a percentage: `percent(0.0213, 2)` is `2.1 %`.
pub fn percent(fraction: f64, digits: usize) -> String {
    format!("{} %", significant(fraction * 100.0, digits))
}

/// A number as short as it can be written without losing more than its tenth digit: `0.05`, `12`, `7.4`.
pub fn plain(value: f64) -> String {
    let text = format!("{value:.9e}").parse::<f64>().unwrap_or(value).to_string();
    if text.len() > 14 { significant(value, 4) } else { text }
}

/// A value in the base unit with the unit that it was written in, or bare (pH) where there is none.
pub fn with_unit(base: f64, unit: Option<Unit>) -> String {
    match unit {
        Some(unit) => format!("{} {}", significant(unit.from_base(base), 4), unit.symbol()),
        None => ph(base),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn keeps_every_significant_zero_and_no_other() {
        assert_eq!(significant(3.12, 4), "3.120");
        assert_eq!(significant(9.996, 3), "10.0");
        assert_eq!(significant(0.00012345, 3), "0.000123");
        assert_eq!(significant(0.99999, 3), "1.00");
        assert_eq!(significant(12345.0, 3), "12300");
        assert_eq!(significant(-0.5, 2), "-0.50");
        assert_eq!(significant(1.2e-7, 3), "1.20e-7");
        assert_eq!(significant(0.0, 3), "0.00");
        assert_eq!(significant(f64::NAN, 3), "–");
        assert_eq!(fixed(-0.001, 2), "0.00");
    }

    #[test]
    fn chooses_the_unit_that_reads_best() {
        assert_eq!(mass(0.00312, 4), "3.120 g");
        assert_eq!(mass(0.0000312, 3), "31.2 mg");
        assert_eq!(mass(40.0, 3), "40.0 kg");
        assert_eq!(mass(0.00099996, 3), "1.00 g");
        assert_eq!(volume(0.0131, 3), "13.1 mL");
        assert_eq!(volume(0.0000131, 2), "13 µL");
        assert_eq!(volume(1.0, 4), "1.000 L");
        assert_eq!(amount(0.0002, 3), "200 µmol");
        assert_eq!(concentration(0.15, 3), "150 mmol/L");
        assert_eq!(temperature(298.15), "25 °C");
        assert_eq!(temperature(295.65), "22.5 °C");
        assert_eq!(conductivity(1.5, 3), "15.0 mS/cm");
        assert_eq!(density(1159.0, 4), "1.159 g/mL");
    }

    #[test]
    fn an_uncertainty_decides_the_decimals() {
        assert_eq!(with_uncertainty(7.198_34, 0.003), ("7.1983".to_owned(), "0.0030".to_owned()));
        assert_eq!(with_uncertainty(150.24, 12.0), ("150".to_owned(), "12".to_owned()));
    }
}
