//! Which form of a substance is meant: hydrate, salt, and what a mass is of.

use super::Case;
use crate::finding::{Anchor, Code, Finding, Fix};
use crate::model::*;
use crate::units::{Dimension, format};

/// Ions that the trade reports in more than one way, with the formulas. Common practice, no source.
pub(super) const REPORTED_TWO_WAYS: &[(&str, &[&str])] = &[
    ("nitrate", &["N", "NO3"]),
    ("nitrite", &["N", "NO2"]),
    ("ammonium", &["N", "NH4"]),
    ("ammonia", &["N", "NH3"]),
    ("phosphate", &["P", "PO4"]),
    ("sulfate", &["S", "SO4"]),
    ("silicate", &["Si", "SiO2"]),
];

/// The other hydrates of a substance that are in scope: what gives the same and differs by water of crystallisation.
///
/// Isomers are no hydrates of each other. What gives no ions, as sugars do, is told apart by its name.
pub(super) fn other_hydrates<'a>(case: &Case<'a>, definition: &Definition) -> Vec<&'a Definition> {
    let Body::Substance(substance) = &definition.block.body else { return Vec::new() };
    let Some((_, formula)) = &substance.formula else { return Vec::new() };
    let mut found: Vec<&Definition> = Vec::new();
    for (namespace, _, definitions) in case.context.scope.all() {
        if namespace != Namespace::Ingredient {
            continue;
        }
        for other in definitions {
            let Body::Substance(candidate) = &other.block.body else { continue };
            let Some((_, other_formula)) = &candidate.formula else { continue };
            if other.key != definition.key
                && differ_by_water(formula, other_formula)
                && (same_gives(&gives(definition, substance), &gives(other, candidate))
                    || substance.gives.is_empty() && candidate.gives.is_empty() && is_named_after(definition.name(), other.name()))
                && !found.iter().any(|known| known.key == other.key)
            {
                found.push(other);
            }
        }
    }
    found.sort_by(|one, other| one.name().cmp(other.name()));
    found
}

/// Whether two formulas differ by molecules of water and by nothing else.
fn differ_by_water(one: &crate::syntax::formula::Formula, other: &crate::syntax::formula::Formula) -> bool {
    let count = |formula: &crate::syntax::formula::Formula, wanted: &str| {
        formula.elements().find(|(symbol, _)| *symbol == wanted).map_or(0.0, |(_, count)| count)
    };
    let waters = count(one, "O") - count(other, "O");
    let hydrogens = count(one, "H") - count(other, "H");
    let is_alike = |a: &crate::syntax::formula::Formula, b: &crate::syntax::formula::Formula| {
        a.elements().all(|(symbol, n)| matches!(symbol, "H" | "O") || (n - count(b, symbol)).abs() < 1e-6)
    };
    waters.abs() > 1e-6 && (hydrogens - 2.0 * waters).abs() < 1e-6 && is_alike(one, other) && is_alike(other, one)
}

/// Whether one of two names is the other with more words behind it.
fn is_named_after(one: &str, other: &str) -> bool {
    one.starts_with(other) || other.starts_with(one)
}

/// What a substance gives in water; what gives nothing else gives itself.
fn gives<'a>(definition: &'a Definition, substance: &'a Substance) -> Vec<(f64, &'a NameKey)> {
    match &definition.block.name {
        Some(name) if substance.gives.is_empty() => vec![(1.0, &name.key)],
        _ => substance.gives.iter().map(|(count, reference)| (*count, &reference.key)).collect(),
    }
}

fn same_gives(one: &[(f64, &NameKey)], other: &[(f64, &NameKey)]) -> bool {
    one.len() == other.len() && one.iter().all(|gives| other.contains(gives))
}

/// Whether a substance's formula holds water of crystallisation.
fn is_hydrate(substance: &Substance) -> bool {
    substance.formula.as_ref().is_some_and(|(written, _)| {
        written.split(['·', '.', '*', '•', '∙', '⋅']).skip(1).any(|part| part.trim_start_matches(|c: char| c.is_ascii_digit() || "½./ ".contains(c)).starts_with("H2O") || part.contains("H₂O"))
    })
}

/// A mass of something that is sold in several hydrates, under a name that does not say which.
pub(super) fn hydrate_not_stated(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.own_recipe() else { return };
    for entry in &recipe.entries {
        let Action::Add(addition) = &entry.action else { continue };
        let Some(amount) = addition.amounts.first() else { continue };
        let is_by_mass = matches!(amount.dimension(), Dimension::Mass | Dimension::MassConcentration | Dimension::MassFraction);
        let qualifiers = &addition.qualifiers;
        if !is_by_mass
            || qualifiers.from.is_some()
            || qualifiers.dried_at.is_some()
            || qualifiers.water.is_some()
            || addition.what.strength.is_some()
            || addition.as_formula.is_some()
            || addition.what.key.as_str().contains("anhydrous")
            || matches!(case.block.body, Body::Bottle(_))
        {
            continue;
        }
        let Lookup::One(definition) = case.context.scope_of(&addition.what).find(Namespace::Ingredient, &addition.what.key, &addition.what.text) else {
            continue;
        };
        let Body::Substance(substance) = &definition.block.body else { continue };
        // A formula, and a name that only the anhydrous form bears, say which form is meant.
        let is_own_name = definition.block.name.as_ref().is_some_and(|name| name.key == addition.what.key)
            || definition.block.also.iter().any(|name| name.key == addition.what.key);
        // What is sold in water only is weighed in no form.
        let is_weighed = substance.form.as_deref().is_none_or(|form| form == "solid");
        if !is_weighed || is_hydrate(substance) || !is_own_name || crate::syntax::formula::parse(&addition.what.text).is_ok() {
            continue;
        }
        let hydrates: Vec<&Definition> = other_hydrates(case, definition)
            .into_iter()
            .filter(|other| matches!(&other.block.body, Body::Substance(substance) if is_hydrate(substance)))
            .collect();
        let Some(first) = hydrates.first() else { continue };
        let names: Vec<&str> = hydrates.iter().map(|hydrate| hydrate.name()).collect();
        let ratio = match (&first.block.body, substance.molar_mass) {
            (Body::Substance(hydrate), Some(own)) => hydrate.molar_mass.map(|mass| 100.0 * (mass / own - 1.0)),
            _ => None,
        };
        let mut finding = Finding::new(
            Code::HydrateNotStated,
            addition.what.at,
            format!(
                "{} is also sold as {}; the anhydrous form is taken{}.",
                addition.what.text,
                crate::evaluate::listed(&names),
                ratio.map_or(String::new(), |ratio| format!(", and of the hydrate it takes {ratio:.0} % more"))
            ),
        )
        .help("Write which form is weighed.")
        .about(addition.what.key.as_str())
        .fix(Fix::replace(
            format!("Write anhydrous {}", definition.name()),
            addition.what.at,
            format!("anhydrous {}", definition.name()),
        ));
        for hydrate in hydrates {
            finding = finding.fix(Fix::replace(
                format!("Write {}", hydrate.name()),
                addition.what.at,
                crate::evaluate::written_form(hydrate.name()),
            ));
        }
        findings.push(finding);
    }
}

/// A mass that is a round amount of another hydrate than the one named.
pub(super) fn mass_fits_other_hydrate(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.own_recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    for entry in &recipe.entries {
        let Action::Add(addition) = &entry.action else { continue };
        let Some(amount) = addition.amounts.first().filter(|amount| amount.dimension() == Dimension::Mass) else { continue };
        if addition.amounts.len() > 1 || addition.what.strength.is_some() {
            continue;
        }
        let Lookup::One(definition) = case.context.scope_of(&addition.what).find(Namespace::Ingredient, &addition.what.key, &addition.what.text) else {
            continue;
        };
        let Body::Substance(substance) = &definition.block.body else { continue };
        let Some(own) = substance.molar_mass else { continue };
        let litres = outcome.volume_L;
        let precision = 0.5 * 10f64.powi(-significant_digits(case, entry, amount)) * 10.0;
        let is_round_of = |molar_mass: f64| is_round(amount.value / molar_mass / litres, precision.clamp(2e-4, 2e-3));
        if is_round_of(own) {
            continue;
        }
        let fits = other_hydrates(case, definition).into_iter().find(|other| match &other.block.body {
            Body::Substance(substance) => substance.molar_mass.is_some_and(is_round_of),
            _ => false,
        });
        let Some(other) = fits else { continue };
        let Body::Substance(other_substance) = &other.block.body else { continue };
        let Some(other_mass) = other_substance.molar_mass else { continue };
        findings.push(
            Finding::new(
                Code::MassFitsOtherHydrate,
                addition.what.at,
                format!(
                    "This mass is {} of {}, but {} of {}.",
                    format::concentration(amount.value / other_mass / litres, 4),
                    other.name(),
                    format::concentration(amount.value / own / litres, 4),
                    addition.what.text
                ),
            )
            .help("Check which hydrate the mass was worked out for.")
            .about(addition.what.key.as_str())
            .fix(Fix::replace(
                format!("Write {}", other.name()),
                addition.what.at,
                crate::evaluate::written_form(other.name()),
            )),
        );
    }
}

/// How many significant digits the mass was written with.
fn significant_digits(case: &Case, entry: &Entry, amount: &Amount) -> i32 {
    let text = case.block.lines.get(entry.at.line).map_or("", |line| amount.span.of(&line.text));
    let digits = text.chars().take_while(|c| c.is_ascii_digit() || *c == '.').filter(char::is_ascii_digit);
    digits.skip_while(|digit| *digit == '0').count() as i32
}

/// Whether a value is within a relative `precision` of one with one significant digit, or 1.5, 2.5 and 7.5.
fn is_round(value: f64, precision: f64) -> bool {
    if !value.is_finite() || value <= 0.0 {
        return false;
    }
    let scaled = value / 10f64.powf(value.log10().floor());
    [1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 7.5, 8.0, 10.0].iter().any(|round| (scaled / round - 1.0).abs() <= precision)
}

/// A mass concentration of an ion that is reported in two ways.
pub(super) fn as_what(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.own_recipe() else { return };
    for expectation in recipe.expectations.iter().filter(|expectation| expectation.as_formula.is_none()) {
        let (Property::Total(reference) | Property::Free(reference)) = &expectation.property else { continue };
        let is_mass = expectation.unit.is_some_and(|unit| {
            matches!(unit.dimension(), Dimension::MassConcentration | Dimension::MassFraction)
        });
        let Some((_, formulas)) = REPORTED_TWO_WAYS.iter().find(|(name, _)| *name == reference.key.as_str()) else { continue };
        if !is_mass {
            continue;
        }
        let end = expectation.at.span.end;
        let line = case.block.lines.get(expectation.at.line);
        let after_unit = line.and_then(|line| {
            line.tokens.iter().rev().find(|token| token.kind == crate::syntax::tree::TokenKind::Unit && token.span.end <= end)
        });
        let insert = Anchor::new(expectation.at.line, crate::text::Span::empty(after_unit.map_or(end, |token| token.span.end)));
        findings.push(
            Finding::new(
                Code::AsWhat,
                expectation.at,
                format!(
                    "{} is reported as {}; this line does not say which, and the mass of the ion is taken.",
                    reference.text,
                    crate::evaluate::listed(formulas)
                ),
            )
            .help("Add `as` and the formula.")
            .about(reference.key.as_str())
            .fixes(formulas.iter().map(|formula| Fix::replace(format!("Write `as {formula}`"), insert, format!(" as {formula}")))),
        );
    }
}
