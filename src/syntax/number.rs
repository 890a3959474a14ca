//! Reads the text of a number, and says of a wrong one what it may have meant.

use unicode_normalization::UnicodeNormalization;

use super::tree::FaultKind;

/// Why a text is no number, and the replacements that would be one, each with a few words of meaning.
#[derive(Debug, PartialEq)]
pub(super) struct Misread {
    pub(super) kind: FaultKind,
    pub(super) readings: Vec<(String, &'static str)>,
}

fn misread(kind: FaultKind, readings: &[(String, &'static str)]) -> Misread {
    Misread { kind, readings: readings.to_vec() }
}

/// The value of a number with an optional sign `+`, `-` or `−`.
pub(super) fn read_signed(text: &str) -> Result<f64, Misread> {
    let trimmed = text.trim();
    if let Some(rest) = trimmed.strip_prefix(['-', '−']) {
        return read(rest).map(|value| -value).map_err(|wrong| Misread {
            readings: wrong.readings.into_iter().map(|(text, meaning)| (format!("-{text}"), meaning)).collect(),
            ..wrong
        });
    }
    if let Some(rest) = trimmed.strip_prefix(['–', '—']) {
        return Err(misread(FaultKind::BadNumber, &[(format!("-{}", rest.trim()), "a minus sign")]));
    }
    read(trimmed.strip_prefix('+').unwrap_or(trimmed))
}

/// The value of a number without sign: digits, perhaps a point and digits, perhaps an exponent.
pub(super) fn read(text: &str) -> Result<f64, Misread> {
    if is_plain(text) {
        return read_plain(text);
    }
    if let Some(rest) = text.strip_prefix(['<', '≤']) {
        return Err(misread(FaultKind::BadNumber, &[(format!("at most {}", rest.trim()), "")]));
    }
    if let Some(rest) = text.strip_prefix(['>', '≥']) {
        return Err(misread(FaultKind::BadNumber, &[(format!("at least {}", rest.trim()), "")]));
    }
    if let Some((one, many)) = text.split_once(':') {
        return Err(one_in_how_many(one, many));
    }
    if let Some(power) = power_of_ten(text) {
        return Err(misread(FaultKind::BadNumber, &[(power, "")]));
    }
    let ascii_minus = text.replace('−', "-");
    if is_plain(&ascii_minus) {
        return Err(misread(FaultKind::BadNumber, &[(ascii_minus, "")]));
    }
    if let Some((from, to)) = text.split_once(['–', '—', '-', '−'])
        && !from.is_empty()
        && !to.is_empty()
    {
        let part = |text: &str| if is_plain(text) { text.to_owned() } else { text.replace(',', ".") };
        return Err(misread(FaultKind::DashAsRange, &[(format!("{} to {}", part(from), part(to)), "a range")]));
    }
    if let Some(bare) = text.strip_suffix('.')
        && is_plain(bare)
    {
        return Err(misread(FaultKind::BadNumber, &[(bare.to_owned(), "")]));
    }
    if text.starts_with('.') {
        return Err(misread(FaultKind::LeadingZero, &[(format!("0{text}"), "")]));
    }
    if let Some(fraction) = fraction(text) {
        return Err(misread(FaultKind::BadNumber, &[(fraction, "")]));
    }
    if text.contains([',', '\'', '’']) || text.contains(char::is_whitespace) {
        return Err(separated(text));
    }
    let folded: String = text.nfkc().collect();
    if folded != text && is_plain(&folded) {
        return Err(misread(FaultKind::BadNumber, &[(folded, "")]));
    }
    Err(misread(FaultKind::BadNumber, &[]))
}

fn read_plain(text: &str) -> Result<f64, Misread> {
    if let Some(rest) = text.strip_prefix('0')
        && rest.starts_with(|digit: char| digit.is_ascii_digit())
    {
        let without = text.trim_start_matches('0');
        let without = if without.starts_with(|digit: char| digit.is_ascii_digit()) { without.to_owned() } else { format!("0{without}") };
        let mut readings = vec![(without, "")];
        if !rest.contains('.') {
            readings.push((format!("0.{rest}"), "a lost point"));
        }
        return Err(Misread { kind: FaultKind::LeadingZero, readings });
    }
    match text.parse::<f64>() {
        Ok(value) if value.is_finite() => Ok(value),
        _ => Err(misread(FaultKind::BadNumber, &[])),
    }
}

/// Whether the text is digits, perhaps a point and digits, perhaps an exponent.
fn is_plain(text: &str) -> bool {
    let (mantissa, exponent) = match text.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, Some(exponent)),
        None => (text, None),
    };
    let digits = |part: &str| !part.is_empty() && part.bytes().all(|byte| byte.is_ascii_digit());
    let mantissa_fits = match mantissa.split_once('.') {
        Some((whole, decimals)) => digits(whole) && digits(decimals),
        None => digits(mantissa),
    };
    mantissa_fits && exponent.is_none_or(|exponent| digits(exponent.strip_prefix(['+', '-']).unwrap_or(exponent)))
}

fn one_in_how_many(one: &str, many: &str) -> Misread {
    let (Ok(one), Ok(many)) = (one.parse::<u32>(), many.parse::<u32>()) else {
        return misread(FaultKind::OneInHowMany, &[]);
    };
    let mut readings = Vec::new();
    if many > one {
        readings.push((format!("({one} + {})", many - one), "one volume in so many altogether"));
    }
    readings.push((format!("({one} + {many})"), "one volume and so many of water"));
    Misread { kind: FaultKind::OneInHowMany, readings }
}

/// `1.5×10⁻³`, `1.5 x 10^-3` as `1.5e-3`.
fn power_of_ten(text: &str) -> Option<String> {
    let (mantissa, power) = text.split_once(['×', 'x', '*', '·'])?;
    let power = power.trim().strip_prefix("10")?;
    let exponent: String = power.trim_start_matches('^').nfkc().map(|sign| if sign == '−' { '-' } else { sign }).collect();
    let whole = format!("{}e{exponent}", mantissa.trim().replace(',', "."));
    is_plain(&whole).then_some(whole)
}

/// `½`, `1½`, `1/2` as decimals.
fn fraction(text: &str) -> Option<String> {
    let vulgar = |letter: char| match letter {
        '½' => Some(0.5),
        '¼' => Some(0.25),
        '¾' => Some(0.75),
        _ => None,
    };
    let value = if let Some((above, below)) = text.split_once(['/', '⁄']) {
        above.parse::<f64>().ok()? / below.parse::<f64>().ok()?
    } else {
        let last = text.chars().last()?;
        let part = vulgar(last)?;
        let whole = text.strip_suffix(last)?;
        part + if whole.is_empty() { 0.0 } else { whole.parse::<f64>().ok()? }
    };
    let written = format!("{value}");
    (value.is_finite() && written.len() <= 7).then_some(written)
}

/// Numbers with commas, apostrophes or white space between digits.
fn separated(text: &str) -> Misread {
    let mut groups = text.split(|letter: char| matches!(letter, ',' | '\'' | '’') || letter.is_whitespace());
    let first = groups.next().unwrap_or_default();
    let rest: Vec<&str> = groups.collect();
    let (last, middle) = match rest.split_last() {
        Some((last, middle)) => (*last, middle),
        None => ("", rest.as_slice()),
    };
    let is_digits = |part: &str| !part.is_empty() && part.bytes().all(|byte| byte.is_ascii_digit());
    let three = |part: &str| part.len() == 3 && is_digits(part);
    let last_whole = last.split_once('.').map_or(last, |(whole, _)| whole);
    let thousands = (1..=3).contains(&first.len())
        && is_digits(first)
        && first != "0"
        && middle.iter().all(|part| three(part))
        && three(last_whole);
    let joined: String = text.chars().filter(|letter| letter.is_ascii_digit() || *letter == '.').collect();
    let comma_only = text.contains(',') && !text.contains(['\'', '’']) && !text.contains(char::is_whitespace);
    if thousands && !comma_only && is_plain(&joined) {
        return misread(FaultKind::BadNumber, &[(joined, "")]);
    }
    if thousands && is_plain(&joined) {
        let mut readings = vec![(joined, "a comma between thousands")];
        if rest.len() == 1 && !text.contains('.') {
            readings.push((text.replace(',', "."), "a decimal comma"));
        }
        return Misread { kind: FaultKind::ThousandsComma, readings };
    }
    if text.matches(',').count() == 1 {
        let (whole, decimals) = text.split_once(',').unwrap_or((text, ""));
        let whole: String = whole.chars().filter(char::is_ascii_digit).collect();
        let decimal = format!("{}.{decimals}", if whole.is_empty() { "0" } else { &whole });
        let readings = if is_plain(&decimal) { vec![(decimal, "")] } else { Vec::new() };
        return Misread { kind: FaultKind::DecimalComma, readings };
    }
    if comma_only {
        return misread(FaultKind::DecimalComma, &[(text.split(',').collect::<Vec<_>>().join(", "), "a list")]);
    }
    misread(FaultKind::BadNumber, &[])
}

#[cfg(test)]
mod tests {
    use super::*;

    fn wrong(text: &str) -> (FaultKind, Vec<String>) {
        match read(text) {
            Ok(value) => panic!("{text} reads as {value}"),
            Err(wrong) => (wrong.kind, wrong.readings.into_iter().map(|(text, _)| text).collect()),
        }
    }

    #[test]
    fn plain_numbers() {
        for (text, value) in [("5", 5.0), ("0.5", 0.5), ("1e3", 1000.0), ("1.5e-3", 0.0015), ("0", 0.0), ("0.005", 0.005)] {
            assert_eq!(read(text), Ok(value), "{text}");
        }
        assert_eq!(read_signed("−20"), Ok(-20.0));
        assert_eq!(read_signed("+1"), Ok(1.0));
    }

    #[test]
    fn wrong_numbers_say_what_they_may_have_meant() {
        use FaultKind::*;
        for (text, kind, readings) in [
            (".5", LeadingZero, vec!["0.5"]),
            ("05", LeadingZero, vec!["5", "0.5"]),
            ("00.5", LeadingZero, vec!["0.5"]),
            ("1,5", DecimalComma, vec!["1.5"]),
            ("0,125", DecimalComma, vec!["0.125"]),
            ("1,000", ThousandsComma, vec!["1000", "1.000"]),
            ("1,000,000", ThousandsComma, vec!["1000000"]),
            ("1.000,5", DecimalComma, vec!["1000.5"]),
            ("1'000", BadNumber, vec!["1000"]),
            ("1 000", BadNumber, vec!["1000"]),
            ("1.5×10⁻³", BadNumber, vec!["1.5e-3"]),
            ("1.5 x 10^-3", BadNumber, vec!["1.5e-3"]),
            ("1.5e−3", BadNumber, vec!["1.5e-3"]),
            ("5–6", DashAsRange, vec!["5 to 6"]),
            ("6.9-7.1", DashAsRange, vec!["6.9 to 7.1"]),
            ("½", BadNumber, vec!["0.5"]),
            ("1/2", BadNumber, vec!["0.5"]),
            ("1:10", OneInHowMany, vec!["(1 + 9)", "(1 + 10)"]),
            ("５", BadNumber, vec!["5"]),
            ("7.4.", BadNumber, vec!["7.4"]),
            ("1e999", BadNumber, vec![]),
            ("0,2,4", DecimalComma, vec!["0, 2, 4"]),
        ] {
            let expected: Vec<String> = readings.into_iter().map(str::to_owned).collect();
            assert_eq!(wrong(text), (kind, expected), "{text}");
        }
    }
}
