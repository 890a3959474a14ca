//! Lines of solutions and bottles that say something of their own: from a statement's parts to what the model knows of it.

use super::quantities::{amount, base_value, dilution, goals, half_width, limits, property, stated};
use super::{reference, strong_reference};
use crate::finding::Anchor;
use crate::model::*;
use crate::syntax::formula;
use crate::syntax::tree::{self, Amounts, GasKind, Line, QualifierKind, Statement};
use crate::text::Span;
use crate::units::Dimension;

/// The values of a series as written, each with its unit: `4 mL`, `pH 6.0`. None where the line holds a single value.
pub(super) fn series_values(line: &Line, statement: &Statement) -> Option<Vec<String>> {
    let number = |span: Span| {
        let text = span.of(&line.text);
        let end = text.find(|c: char| !c.is_ascii_digit() && c != '.').unwrap_or(text.len());
        text.get(..end).unwrap_or_default()
    };
    match statement {
        Statement::Ingredient(given) | Statement::Or(given) => {
            let Some(Amounts::Series(values)) = given.amounts.given() else { return None };
            Some(values.iter().map(|value| format!("{} {}", number(value.span), value.unit.symbol())).collect())
        }
        Statement::Pair(tree::Pair { target, .. }) | Statement::QuantumSatis(tree::QuantumSatis { target, .. }) => {
            let tree::TargetKind::Series { property: sought, values } = &target.given()?.kind else { return None };
            let words = property(0, sought)?.words();
            let unit = values.iter().rev().find_map(|bound| bound.unit).map_or(String::new(), |unit| format!(" {}", unit.symbol()));
            Some(values.iter().map(|bound| format!("{words} {}{unit}", number(bound.span))).collect())
        }
        _ => None,
    }
}

pub(super) fn addition(line: usize, given: &tree::Ingredient) -> Option<Addition> {
    let amounts = match given.amounts.given()? {
        Amounts::One(quantity) => vec![amount(quantity)],
        Amounts::Series(quantities) => quantities.iter().map(amount).collect(),
        Amounts::Range(from, to) => {
            let (from, to) = (amount(from), amount(to));
            vec![Amount {
                value: 0.5 * (from.value + to.value),
                half_range: 0.5 * (to.value - from.value),
                span: from.span.to(to.span),
                ..to
            }]
        }
    };
    let as_formula = match &given.as_formula {
        None => None,
        Some(slot) => {
            let text = slot.given()?;
            Some(Stated { value: formula::parse(&text.text).ok()?, at: Anchor::new(line, text.span) })
        }
    };
    Some(Addition {
        about: given.about,
        as_formula,
        what: strong_reference(line, &given.strength, &given.name)?,
        qualifiers: qualifiers(line, &given.qualifiers, amounts.first().map(|amount| amount.unit))?,
        amounts,
    })
}

pub(super) fn qualifiers(line: usize, given: &[tree::Qualifier], beside: Option<crate::units::Unit>) -> Option<Qualifiers> {
    let mut all = Qualifiers::default();
    for qualifier in given {
        let at = Anchor::new(line, qualifier.span);
        match &qualifier.kind {
            QualifierKind::Tolerance(tolerance) => {
                all.tolerance = Some(Stated { value: half_width(tolerance, beside), at });
            }
            QualifierKind::Purity(slot) => all.purity = Some(stated(line, slot, Dimension::Percent)?),
            QualifierKind::Water(slot) => all.water = Some(stated(line, slot, Dimension::Percent)?),
            QualifierKind::DriedAt { temperature, .. } => {
                all.dried_at = Some(stated(line, temperature, Dimension::Temperature)?);
            }
            QualifierKind::Density(slot) => all.density = Some(stated(line, slot, Dimension::MassConcentration)?),
            QualifierKind::From(slot) => all.from = Some(reference(line, slot.given()?)),
            QualifierKind::About(slot) => all.about = Some(Stated { value: amount(slot.given()?), at }),
            QualifierKind::AtMost(slot) => all.at_most = Some(Stated { value: amount(slot.given()?), at }),
            QualifierKind::ByWeight => all.by_weight = true,
            QualifierKind::At(slot) => all.at = Some(stated(line, slot, Dimension::Temperature)?),
            QualifierKind::Grade(_) | QualifierKind::Lot(_) => {}
            QualifierKind::Unreadable => return None,
        }
    }
    Some(all)
}

pub(super) fn pair(line: usize, given: &tree::Pair) -> Option<Pair> {
    let goals = goals(line, given.target.given()?);
    if goals.is_empty() {
        return None;
    }
    Some(Pair {
        amount: amount(given.amount.given()?),
        first: strong_reference(line, &given.first_strength, &given.first)?,
        second: strong_reference(line, &given.second_strength, &given.second)?,
        goals,
    })
}

pub(super) fn make_up(line: usize, given: &tree::QuantumSatis) -> Option<MakeUp> {
    let goals = goals(line, given.target.given()?);
    if goals.is_empty() {
        return None;
    }
    Some(MakeUp {
        what: strong_reference(line, &given.strength, &given.name)?,
        alternative: match &given.alternative {
            None => None,
            Some((strength, name)) => Some(strong_reference(line, strength, name)?),
        },
        goals,
        qualifiers: qualifiers(line, &given.qualifiers, None)?,
    })
}

/// The part of the recipe that the lines read so far have come to, counted by dividers.
pub(super) fn part(recipe: &Recipe) -> usize {
    recipe.entries.iter().filter(|entry| matches!(entry.action, Action::Divider(_))).count()
}

pub(super) fn storage(at: Anchor, part: usize, stored: &tree::StoredAt) -> Option<Storage> {
    let from = base_value(&stored.from, Dimension::Temperature)?;
    let to = match &stored.to {
        None => from,
        Some(slot) => base_value(slot, Dimension::Temperature)?,
    };
    Some(Storage {
        at,
        part,
        low: (!stored.below).then_some(from),
        high: to,
        duration: stored.duration.as_ref().and_then(|slot| base_value(slot, Dimension::Time)),
        material: stored.material.as_ref().map(|text| text.text.clone()),
        dark: stored.dark,
    })
}

pub(super) fn atmosphere(line: usize, gas: &tree::Gas) -> Option<Atmosphere> {
    Some(match &gas.kind {
        GasKind::Air => Atmosphere::Air,
        GasKind::Part { quantity, of } => Atmosphere::Gas {
            quantity: amount(quantity),
            of: reference(line, of.given()?),
            moist: gas.moist,
        },
    })
}

pub(super) fn expectation(line: usize, at: Anchor, expect: &tree::Expect) -> Option<Expectation> {
    let limits = limits(expect.range.given()?);
    Some(Expectation {
        at,
        property: property(line, expect.property.given()?)?,
        low: limits.low,
        high: limits.high,
        unit: limits.unit,
        as_formula: match &expect.as_formula {
            None => None,
            Some(slot) => {
                let text = slot.given()?.text.clone();
                let formula = formula::parse(&text).ok()?;
                Some((text, formula))
            }
        },
        temperature: match &expect.at {
            None => None,
            Some(slot) => Some(base_value(slot, Dimension::Temperature)?),
        },
        diluted: match &expect.diluted {
            None => None,
            Some(given) => Some(dilution(line, given)?),
        },
    })
}

pub(super) fn acceptance(line: usize, at: Anchor, accept: &tree::Accept) -> Option<Acceptance> {
    let code = accept.code.given()?;
    Some(Acceptance {
        at,
        code: Stated { value: code.text.clone(), at: Anchor::new(line, code.span) },
        on: match &accept.on {
            None => None,
            Some(slot) => Some(reference(line, slot.given()?)),
        },
        because: accept.because.given()?.text.clone(),
    })
}
