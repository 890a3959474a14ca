//! Quantities in the text of a step, where nothing evaluates them.

use super::Case;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Lookup, NameKey, Namespace};
use crate::text::Span;
use crate::units::{Dimension, Unit};

/// Names are at most this many words long.
const LONGEST_NAME: usize = 6;

/// Says that a step states an amount of a known thing.
pub(super) fn quantity_in_step(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.own_recipe() else { return };
    for step in &recipe.steps {
        let words = words(&step.value);
        for (index, pair) in words.windows(2).enumerate() {
            let [(number, at), (unit, _)] = pair else { continue };
            if number.parse::<f64>().is_err() {
                continue;
            }
            let Some(unit) = Unit::parse(unit) else { continue };
            let is_amount = matches!(
                unit.dimension(),
                Dimension::Mass | Dimension::Volume | Dimension::Amount | Dimension::AmountConcentration | Dimension::MassConcentration
            );
            if !is_amount {
                continue;
            }
            let mut rest = words.get(index + 2..).unwrap_or_default();
            if rest.first().is_some_and(|(word, _)| *word == "of") {
                rest = rest.get(1..).unwrap_or_default();
            }
            rest = after_strength(rest);
            let Some((name, length)) = longest_name(case, rest) else { continue };
            let end = rest.get(length - 1).map_or(at + number.len(), |(word, start)| start + word.len());
            let span = Span::new(step.at.span.start + at, step.at.span.start + end);
            findings.push(
                Finding::new(
                    Code::QuantityInStep,
                    Anchor::new(step.at.line, span),
                    format!("{number} {} of {name} stands in a step, where it is not counted.", unit.symbol()),
                )
                .help("Write it as a line of its own, so that it counts; the step may then refer to it.")
                .about(NameKey::new(&name).as_str()),
            );
        }
    }
}

/// The words of a text with their places; punctuation at their ends left out, and a number split from its unit.
fn words(text: &str) -> Vec<(&str, usize)> {
    let mut words = Vec::new();
    let mut start = None;
    for (index, character) in text.char_indices().chain(std::iter::once((text.len(), ' '))) {
        match (character.is_whitespace(), start) {
            (false, None) => start = Some(index),
            (true, Some(from)) => {
                let word = text.get(from..index).unwrap_or_default();
                let inner = word.trim_start_matches(['(', '"']);
                let from = from + word.len() - inner.len();
                let inner = inner.trim_end_matches(['.', ',', ';', ':', ')', '"']);
                let digits = inner.find(|c: char| !c.is_ascii_digit() && c != '.').unwrap_or(inner.len());
                match inner.split_at_checked(digits) {
                    Some((number, unit)) if !number.is_empty() && !unit.is_empty() => {
                        words.push((number, from));
                        words.push((unit, from + digits));
                    }
                    _ => words.push((inner, from)),
                }
                start = None;
            }
            _ => {}
        }
    }
    words
}

/// The words after a strength such as `37 % w/w`, where one stands first.
fn after_strength<'a>(words: &'a [(&'a str, usize)]) -> &'a [(&'a str, usize)] {
    let Some(((number, _), rest)) = words.split_first() else { return words };
    let unit = |count: usize| {
        let unit: Vec<&str> = rest.get(..count)?.iter().map(|(word, _)| *word).collect();
        Unit::parse(&unit.join(" ")).filter(|unit| unit.dimension().is_strength()).and_then(|_| rest.get(count..))
    };
    if number.parse::<f64>().is_err() { words } else { unit(2).or_else(|| unit(1)).unwrap_or(words) }
}

/// The longest run of words that is a name in scope.
fn longest_name(case: &Case, words: &[(&str, usize)]) -> Option<(String, usize)> {
    (1..=LONGEST_NAME.min(words.len())).rev().find_map(|length| {
        let name: Vec<&str> = words.iter().take(length).map(|(word, _)| *word).collect();
        let name = name.join(" ");
        match case.context.scope.find(Namespace::Ingredient, &NameKey::new(&name), &name) {
            Lookup::Nothing => None,
            Lookup::One(_) | Lookup::Several(_) => Some((name, length)),
        }
    })
}
