//! Lines whose first word is unknown, and what they may have meant.

use super::*;
use crate::syntax::number;
use crate::syntax::spelling::nearest;
use crate::units::Unit;

/// Every word that can open a line, in its written form.
pub(in crate::syntax) const FIRST_WORDS: [&str; 75] = [
    "solution", "bottle", "substance", "ion", "solid", "danger", "group", "lab", "use", "language", "about", "q.s.", "all", "or", "makes",
    "cool to", "warm to", "drive off", "filter", "wait", "made at", "used at", "stored at", "stored below", "ready after",
    "use within", "sealed", "open", "under", "in", "like", "without", "concentrate", "before use", "after autoclaving",
    "expect", "standardise against", "found", "accept", "step", "record", "note", "document", "source", "supplier",
    "expires", "instead of the built-in", "also", "CAS", "formula", "charge", "molar mass", "molar conductivity",
    "molar volume", "gives", "form", "density", "aqueous", "solubility", "activity", "hazard", "keep away from", "inert",
    "pKa", "log Ksp", "log KH", "forms slowly", "forms at once", "forms on freezing", "forms in passing", "complex with", "interaction with", "room", "balance", "flask",
];

/// More words that can open a line: ware, meters, dangers.
pub(in crate::syntax) const MORE_FIRST_WORDS: [&str; 16] = [
    "cylinder", "pipette", "burette", "vessel", "pH meter", "conductivity meter", "osmometer", "heat of solution", "holds", "with",
    "while", "even in passing", "keeps", "raises", "because", "advice",
];

impl Builder<'_> {
    pub(super) fn junk(&mut self, place: Span) -> Content {
        let written = self.of(place);
        let first = written.split(is_space).next().unwrap_or_default();
        let first_span = Span::new(place.start, place.start + first.len());
        let mut readings: Vec<Reading> =
            rearranged(written).into_iter().map(|text| reading(place, text, "in the order of a bench sheet")).collect();
        if readings.is_empty() {
            readings = similar_words(first, written)
                .into_iter()
                .map(|(length, word)| reading(Span::new(place.start, place.start + length), word, ""))
                .collect();
        }
        self.token(TokenKind::Bad, place);
        let spot = if readings.first().is_some_and(|first| first.span == place) { place } else { first_span };
        self.fault_with(spot, FaultKind::UnknownStatement, readings);
        Content::Junk(place)
    }
}

/// Statement words near the first word, or the first two, of a line, with the length of what they would replace.
fn similar_words(first: &str, written: &str) -> Vec<(usize, &'static str)> {
    let all = || FIRST_WORDS.into_iter().chain(MORE_FIRST_WORDS);
    let bare = first.trim_end_matches([':', '.', ',', ';']);
    let second_end = written
        .get(first.len()..)
        .and_then(|rest| rest.trim_start_matches(is_space).split(is_space).next())
        .map(|second| second.as_ptr() as usize - written.as_ptr() as usize + second.len());
    let mut found = Vec::new();
    if let Some(end) = second_end
        && let Some(two) = written.get(..end)
        && let Some(word) = nearest(two, all().filter(|word| word.contains(' ')))
    {
        found.push((end, word));
    }
    if let Some(word) = nearest(bare, all().filter(|word| !word.contains(' '))) {
        found.push((first.len(), word));
    } else if let Some(word) = nearest(bare, all().filter_map(|word| word.split_once(' ').map(|(head, _)| head))) {
        found.push((first.len(), word));
    }
    // A header word set tight against its name.
    if found.is_empty() {
        let glued = all().take(6).find(|word| {
            bare.len() > word.len() && bare.get(..word.len()).is_some_and(|head| head.eq_ignore_ascii_case(word))
        });
        found.extend(glued.map(|word| (word.len(), word)));
    }
    found
}

/// `water q.s. to 1 L` and `sodium chloride 8.77 g` with the quantity first.
fn rearranged(written: &str) -> Option<String> {
    let words: Vec<&str> = written.split(is_space).filter(|word| !word.is_empty()).collect();
    if let Some(at) = words.iter().position(|word| matches!(word.to_lowercase().as_str(), "q.s." | "qs" | "q.s"))
        && at > 0
        && words.get(at + 1).is_some_and(|word| matches!(*word, "to" | "ad"))
    {
        let name = words.get(..at)?.join(" ");
        let target = words.get(at + 2..)?.join(" ");
        return (!target.is_empty()).then(|| format!("q.s. {name} to {target}"));
    }
    let begins = words.first()?.starts_with(|letter: char| letter.is_alphabetic() || letter == '(');
    // The quantity may end the line, or end before a comma.
    let is_unit = |text: &str| Unit::parse(text).is_some_and(|unit| unit.dimension().opens_an_ingredient());
    let comma = words.iter().position(|word| word.ends_with(',')).unwrap_or(words.len().saturating_sub(1));
    let head: Vec<&str> = words.get(..=comma)?.iter().map(|word| word.trim_end_matches(',')).collect();
    let tail = words.get(comma + 1..)?.join(" ");
    let (quantity, name) = match head.as_slice() {
        [name @ .., value, unit] if number::read(value).is_ok() && is_unit(unit) => (format!("{value} {unit}"), name.join(" ")),
        [name @ .., last] => {
            let digits = last.find(|letter: char| !letter.is_ascii_digit() && letter != '.')?;
            let (value, unit) = last.split_at_checked(digits)?;
            (number::read(value).is_ok() && is_unit(unit)).then(|| (format!("{value} {unit}"), name.join(" ")))?
        }
        [] => return None,
    };
    let rest = if tail.is_empty() { String::new() } else { format!(", {tail}") };
    (begins && !name.is_empty()).then(|| format!("{quantity} {name}{rest}"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_line_in_another_order_is_turned_round() {
        assert_eq!(rearranged("water q.s. to 1 L").as_deref(), Some("q.s. water to 1 L"));
        assert_eq!(rearranged("sodium chloride 8.77 g").as_deref(), Some("8.77 g sodium chloride"));
        assert_eq!(rearranged("sodium chloride 8.77g, purity 99 %").as_deref(), Some("8.77 g sodium chloride, purity 99 %"));
        assert_eq!(rearranged("Heat gently until clear"), None);
    }

    #[test]
    fn a_mistyped_word_leads_to_the_statement() {
        assert_eq!(similar_words("soluton", "soluton Y"), [(7, "solution")]);
        assert_eq!(similar_words("solution:", "solution: Y"), [(9, "solution")]);
        assert_eq!(similar_words("solutionFoo", "solutionFoo"), [(8, "solution")]);
        assert_eq!(similar_words("expct", "expct pH 7"), [(5, "expect")]);
    }
}
