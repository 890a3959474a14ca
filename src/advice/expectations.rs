//! Expectations that do not hold, or cannot be judged.

use super::Case;
use crate::evaluate::{Verdict, as_formula_factor};
use crate::finding::{Code, Finding};
use crate::model::Property;
use crate::units::{Dimension, format};

/// Says which expectations fail, with the value and the limit.
pub(super) fn rule(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    for outcome in case.outcomes() {
        let mut reported = Vec::new();
        for verdict in &outcome.verdicts {
            // An expectation that must hold at several temperatures is reported at the first where it does not.
            if verdict.holds != Some(false) || reported.contains(&verdict.expectation) {
                continue;
            }
            reported.push(verdict.expectation);
            findings.push(failed(case, verdict, outcome.made_at_K, recipe.expectations.get(verdict.expectation)));
        }
    }
}

fn failed(case: &Case, verdict: &Verdict, made_at_K: f64, expectation: Option<&crate::model::Expectation>) -> Finding {
    let value = verdict.value.unwrap_or(f64::NAN);
    let digits = |base: f64| verdict.property.shown(base, verdict.unit);
    let limits = match (verdict.low, verdict.high) {
        (Some(low), Some(high)) => format!("{} to {}", digits(low), digits(high)),
        (Some(low), None) => format!("at least {}", digits(low)),
        (None, Some(high)) => format!("at most {}", digits(high)),
        (None, None) => String::new(),
    };
    let mut place = String::new();
    if (verdict.temperature_K - made_at_K).abs() > 1e-6 || expectation.is_some_and(|one| one.temperature.is_some()) {
        place.push_str(&format!(" at {}", format::temperature(verdict.temperature_K)));
    }
    if verdict.fold > 1.0 {
        place.push_str(&format!(" diluted {}-fold", format::plain(verdict.fold)));
    }
    let property = verdict.property.words();
    let mut finding = Finding::new(
        Code::ExpectationFails,
        verdict.at,
        format!("The {property} is {}{place}, not {limits}.", shown(value, verdict)),
    )
    .help("Change the recipe, or the expectation if it is the one that is wrong.");
    if let Some(other) = reading_that_fits(case, verdict, expectation) {
        finding = finding.help(other);
    }
    finding
}

/// The value, with a digit more where rounding would hide why it fails.
fn shown(value: f64, verdict: &Verdict) -> String {
    let plain = verdict.property.shown(value, verdict.unit);
    let at_a_limit = [verdict.low, verdict.high].into_iter().flatten().any(|limit| verdict.property.shown(limit, verdict.unit) == plain);
    match (at_a_limit, verdict.unit) {
        (true, Some(unit)) => format!("{} {}", format::significant(unit.from_base(value), 6), unit.symbol()),
        (true, None) => format!("{value:.4}"),
        (false, _) => plain,
    }
}

/// A mass concentration that fails may have been meant as another formula: as PO4, not as P.
fn reading_that_fits(case: &Case, verdict: &Verdict, expectation: Option<&crate::model::Expectation>) -> Option<String> {
    let expectation = expectation?;
    let Property::Total(reference) = &verdict.property else { return None };
    if verdict.unit?.dimension() != Dimension::MassConcentration {
        return None;
    }
    let value = verdict.value?;
    let own = case.context.constituents.formula_of(&reference.key)?;
    let present = match &expectation.as_formula {
        Some((_, formula)) => as_formula_factor(formula, &own)?,
        None => as_formula_factor(&own, &own)?,
    };
    super::forms::REPORTED_TWO_WAYS
        .iter()
        .filter(|(name, _)| *name == reference.key.as_str())
        .flat_map(|(_, formulas)| formulas.iter())
        .filter(|formula| expectation.as_formula.as_ref().is_none_or(|(written, _)| written != **formula))
        .find_map(|formula| {
            let other = as_formula_factor(&crate::syntax::formula::parse(formula).ok()?, &own)?;
            let converted = value * present / other;
            let fits = verdict.low.is_none_or(|low| converted >= low) && verdict.high.is_none_or(|high| converted <= high);
            fits.then(|| {
                format!(
                    "As {formula} it is {}, which fits: the expectation may be meant so.",
                    format::with_unit(converted, verdict.unit)
                )
            })
        })
}
