//! Wrong spellings of units and words, and what each may have meant.

use unicode_normalization::UnicodeNormalization;

use super::characters::plain_letters;
use super::tree::FaultKind;
use crate::units::{Dimension, Unit};

/// Why a text is no unit, and what could stand in its place. A reading that changes the number too says so.
#[derive(Debug, PartialEq)]
pub(super) struct WrongUnit {
    pub(super) kind: FaultKind,
    pub(super) readings: Vec<UnitReading>,
}

/// A replacement for a unit, or for number and unit together.
#[derive(Debug, PartialEq)]
pub(super) struct UnitReading {
    /// What the number is multiplied by; `None` leaves it as written.
    pub(super) number: Option<f64>,
    /// The text in place of the unit.
    pub(super) unit: String,
    /// A few words of meaning.
    pub(super) meaning: &'static str,
}

fn plain(unit: &str, meaning: &'static str) -> UnitReading {
    UnitReading { number: None, unit: unit.to_owned(), meaning }
}

fn scaled(factor: f64, unit: &str, meaning: &'static str) -> UnitReading {
    UnitReading { number: Some(factor), unit: unit.to_owned(), meaning }
}

/// Other spellings of the trade, each with the unit that is meant.
const SPELLINGS: [(&str, &str); 62] = [
    ("gm", "g"), ("gms", "g"), ("gr", "g"), ("gram", "g"), ("grams", "g"), ("gramme", "g"), ("grammes", "g"),
    ("kilogram", "kg"), ("kilograms", "kg"), ("kilo", "kg"), ("kilos", "kg"), ("milligram", "mg"), ("milligrams", "mg"),
    ("mgs", "mg"), ("mcg", "µg"), ("microgram", "µg"), ("micrograms", "µg"), ("gamma", "µg"), ("cc", "mL"), ("ccm", "mL"),
    ("cm3", "mL"), ("cm³", "mL"), ("mls", "mL"), ("millilitre", "mL"), ("millilitres", "mL"), ("milliliter", "mL"),
    ("milliliters", "mL"), ("mil", "mL"), ("dm3", "L"), ("dm³", "L"), ("litre", "L"), ("litres", "L"), ("liter", "L"),
    ("liters", "L"), ("lt", "L"), ("mcl", "µL"), ("microlitre", "µL"), ("microlitres", "µL"), ("microliter", "µL"),
    ("microliters", "µL"), ("lambda", "µL"), ("mole", "mol"), ("moles", "mol"), ("millimole", "mmol"),
    ("millimoles", "mmol"), ("molar", "mol/L"), ("millimolar", "mmol/L"), ("micromolar", "µmol/L"), ("molal", "mol/kg"),
    ("mol/dm3", "mol/L"), ("mol/dm³", "mol/L"), ("mmol/dm³", "mmol/L"), ("mol/m3", "mmol/L"), ("mol/m³", "mmol/L"),
    ("mosm", "mosmol/kg"), ("mosm/kg", "mosmol/kg"), ("mosmol", "mosmol/kg"), ("hr", "h"), ("hrs", "h"), ("mins", "min"),
    ("meq/l", "mmol/L (eq)"), ("ms", "mS/cm"),
];

/// What a text that is no unit may have meant. `None` where nothing is known of it.
pub(super) fn wrong_unit(text: &str) -> Option<WrongUnit> {
    let unknown = |readings: Vec<UnitReading>| Some(WrongUnit { kind: FaultKind::UnknownUnit, readings });
    match text {
        "N" => {
            return Some(WrongUnit {
                kind: FaultKind::Normality,
                readings: vec![
                    plain("mol/L", "one equivalent in a mole"),
                    scaled(0.5, "mol/L", "two equivalents in a mole"),
                ],
            });
        }
        "ppm" => return ppm(["mg/L", "mg/kg"]),
        "ppb" => return ppm(["µg/L", "µg/kg"]),
        "m" => return unknown(vec![plain("mol/kg", "molality"), plain("mL", "a lost letter")]),
        "mg/dL" | "mg/dl" | "mg%" | "mg%." => return unknown(vec![scaled(10.0, "mg/L", "")]),
        "g/dL" | "g/dl" | "g%" => return unknown(vec![scaled(10.0, "g/L", "")]),
        "dL" | "dl" => return unknown(vec![scaled(100.0, "mL", "")]),
        "cL" | "cl" => return unknown(vec![scaled(10.0, "mL", "")]),
        "wt%" | "wt.%" | "%wt" | "w%" | "wt-%" | "m%" => return unknown(vec![plain("% w/w", "")]),
        "vol%" | "vol.%" | "v%" | "vol-%" => return unknown(vec![plain("% v/v", "")]),
        "‰" => return unknown(vec![plain("g/kg", "by mass"), plain("mL/L", "by volume")]),
        "%/K" | "%/°C" => return unknown(vec![plain("%", "")]),
        _ => {}
    }
    let lower = text.to_lowercase();
    if let Some((_, right)) = SPELLINGS.iter().find(|(wrong, _)| *wrong == text || *wrong == lower) {
        return unknown(vec![plain(right, "")]);
    }
    let bare = text.trim_end_matches(['.', ':', ';', ',', '=']);
    if bare != text
        && let Some(right) = Unit::parse(bare).map(|_| bare.to_owned()).or_else(|| single(wrong_unit(bare)))
    {
        return unknown(vec![plain(&right, "")]);
    }
    let tidied: String =
        text.nfkc().map(|letter| if letter == 'º' { '°' } else { letter }).collect::<String>().replace("oC", "°C");
    for candidate in [tidied.clone(), text.replace('º', "°"), negative_powers(text)] {
        if candidate != text && Unit::parse(&candidate).is_some() {
            return unknown(vec![plain(&candidate, "")]);
        }
    }
    let same_letters: Vec<Unit> = Unit::all()
        .filter(|unit| {
            std::iter::once(unit.symbol()).chain(unit.spellings().iter().copied()).any(|spelling| spelling.to_lowercase() == lower)
        })
        .collect();
    if !same_letters.is_empty() {
        return unknown(same_letters.iter().map(|unit| plain(unit.symbol(), "")).collect());
    }
    split_off(text).map(|split| WrongUnit { kind: FaultKind::UnknownUnit, readings: vec![plain(&split, "")] })
}

fn single(wrong: Option<WrongUnit>) -> Option<String> {
    wrong?.readings.into_iter().find(|reading| reading.number.is_none()).map(|reading| reading.unit)
}

fn ppm(units: [&str; 2]) -> Option<WrongUnit> {
    let [volume, mass] = units;
    Some(WrongUnit {
        kind: FaultKind::Ppm,
        readings: vec![plain(volume, "mass in a volume of solution"), plain(mass, "mass in a mass of solution")],
    })
}

/// `mol·L⁻¹`, `mol L-1` as `mol/L`.
fn negative_powers(text: &str) -> String {
    let joint = |letter: char| matches!(letter, '·' | '.' | '⋅' | '*') || letter.is_whitespace();
    ["⁻¹", "^-1", "-1", "−1"]
        .iter()
        .find_map(|power| text.strip_suffix(power)?.rsplit_once(joint))
        .map_or(text.to_owned(), |(above, below)| format!("{}/{below}", above.trim_end()))
}

/// `mLwater` as `mL water`: the longest unit that begins the text, where letters follow it.
fn split_off(text: &str) -> Option<String> {
    let ends: Vec<usize> = text.char_indices().map(|(at, _)| at).skip(1).collect();
    ends.iter().rev().find_map(|end| {
        let (unit, rest) = text.split_at_checked(*end)?;
        let is_word = rest.chars().count() >= 3 && rest.chars().all(char::is_alphabetic);
        let unit = Unit::parse(unit).filter(|known| {
            is_word && known.dimension() != Dimension::Time && !matches!(known.symbol(), "K" | "M" | "U" | "x" | "°C")
        })?;
        Some(format!("{} {rest}", unit.symbol()))
    })
}

/// Whether a text would be a unit but for letters of another alphabet or characters that cannot be seen.
pub(super) fn is_disguised_unit(text: &str) -> bool {
    let letters = plain_letters(text);
    letters != text && Unit::parse(&letters).is_some()
}

/// The word of `words` that is nearest to `written`, if one is near.
pub(super) fn nearest<'w>(written: &str, words: impl IntoIterator<Item = &'w str>) -> Option<&'w str> {
    let written = written.to_lowercase();
    let allowed = match written.chars().count() {
        0..=2 => 0,
        3..=4 => 1,
        _ => 2,
    };
    words
        .into_iter()
        .map(|word| (strsim::osa_distance(&written, &word.to_lowercase()), word))
        .filter(|(distance, _)| *distance <= allowed)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, word)| word)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn first(text: &str) -> Option<String> {
        wrong_unit(text).and_then(|wrong| wrong.readings.into_iter().next()).map(|reading| reading.unit)
    }

    #[test]
    fn wrong_units_lead_to_right_ones() {
        for (wrong, right) in [
            ("gm", "g"), ("grams", "g"), ("cc", "mL"), ("mcg", "µg"), ("Kg", "kg"), ("ML", "mL"), ("mol·L⁻¹", "mol/L"),
            ("mol L-1", "mol/L"), ("mmol·L-1", "mmol/L"), ("mOsm/kg", "mosmol/kg"), ("g:", "g"), ("g.", "g"), ("ｇ", "g"),
            ("ºC", "°C"), ("wt%", "% w/w"), ("mLwater", "mL water"), ("gsodium", "g sodium"), ("ppm", "mg/L"),
        ] {
            assert_eq!(first(wrong).as_deref(), Some(right), "{wrong}");
            assert!(Unit::parse(wrong).is_none(), "{wrong}");
        }
        assert_eq!(wrong_unit("sodium"), None);
    }

    #[test]
    fn every_spelling_leads_to_a_unit() {
        for (wrong, right) in SPELLINGS {
            assert!(Unit::parse(right).is_some(), "{wrong} {right}");
        }
    }
}
