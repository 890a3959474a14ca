//! Computed numbers as machines read them: finite, at twelve significant digits, so that the last bits of a sum do not show.

use crate::chemistry::water::ZERO_CELSIUS_K;

/// A number at twelve significant digits; none where there is no finite number.
pub fn number(value: f64) -> Option<f64> {
    if !value.is_finite() {
        return None;
    }
    let rounded: f64 = format!("{value:.11e}").parse().ok()?;
    // No negative zero.
    Some(rounded + 0.0)
}

/// A temperature in kelvin as degrees Celsius. Nine decimals hide what the subtraction leaves behind.
pub fn celsius(kelvin: f64) -> Option<f64> {
    let value = kelvin - ZERO_CELSIUS_K;
    value.is_finite().then(|| (value * 1e9).round() / 1e9 + 0.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_last_bits_do_not_show() {
        assert_eq!(number(0.1 + 0.2), Some(0.3));
        assert_eq!(number(1.0 / 3.0), Some(0.333_333_333_333));
        assert_eq!(number(-0.0).map(f64::to_bits), Some(0.0f64.to_bits()));
        assert_eq!(number(f64::NAN), None);
        assert_eq!(celsius(310.15), Some(37.0));
        assert_eq!(celsius(273.15), Some(0.0));
    }
}
