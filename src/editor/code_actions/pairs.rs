//! A buffer that is titrated to its pH as a pair that is weighed for it, and back.

use super::forms::{Gives, gives};
use super::site::{Site, column, only_amount};
use super::{ActionKind, CodeAction};
use crate::editor::cursor::statement_span;
use crate::evaluate::written_form;
use crate::model::{Action, Addition, Body, Definition, Entry, Goal, GoalKind, MakeUp, Pair, Property, Substance};
use crate::text::Span;
use crate::units::{Dimension, format};

/// Strength of the titrant that is written, common practice.
const TITRANT: &str = "1 mol/L";

/// On a pair, its first member with a titrant; on a titrant, the pair that it makes of the line above.
pub fn offers(site: &Site) -> Vec<CodeAction> {
    let Some((index, entry)) = site.values.entry_on(site.cursor.line_index) else { return Vec::new() };
    match &entry.action {
        Action::Pair(pair) => to_titrated(site, pair).into_iter().collect(),
        Action::MakeUp(make_up) => to_pair(site, index, make_up).into_iter().collect(),
        _ => Vec::new(),
    }
}

fn to_titrated(site: &Site, pair: &Pair) -> Option<CodeAction> {
    let ([goal], Dimension::AmountConcentration) = (pair.goals.as_slice(), pair.amount.dimension()) else { return None };
    let goal = ph_of(site, site.cursor.line_index, goal)?;
    let substance = |reference: &crate::model::Reference| site.ingredient(&reference.key, &reference.text);
    let (first, second) = (substance(&pair.first)?, substance(&pair.second)?);
    let titrant = giving(site, &difference(&of(&first)?, &of(&second)?))?;
    let amount = pair.amount.span.of(&site.cursor.line.text);
    let statement = statement_span(site.cursor.line);
    let written = |definition: &Definition| written_form(definition.name());
    let text = format!(
        "{}{}\n{}{TITRANT} {} to {goal}",
        column(amount).trim_start(),
        written(&first),
        column("q.s."),
        written(&titrant)
    );
    let title = format!("Titrate {} with {} instead", first.name(), titrant.name());
    Some(site.on_line(ActionKind::Rewrite, title, vec![(statement, text)]))
}

fn to_pair(site: &Site, index: usize, make_up: &MakeUp) -> Option<CodeAction> {
    let [goal] = make_up.goals.as_slice() else { return None };
    let goal = ph_of(site, site.cursor.line_index, goal)?;
    let titrant = site.ingredient(&make_up.what.key, &make_up.what.text).filter(|_| make_up.alternative.is_none())?;
    // The buffer is the one substance above that the titrant makes another member of.
    let mut found: Vec<(&Entry, &Addition, usize, Definition)> = Vec::new();
    for (above, entry) in site.values.own_entries().filter(|(above, _)| *above < index) {
        let Action::Add(addition) = &entry.action else { continue };
        let Some(substance) = site.ingredient(&addition.what.key, &addition.what.text).and_then(|one| Some(sum(&of(&one)?, &of(&titrant)?))) else {
            continue;
        };
        if only_amount(addition).is_some()
            && addition.qualifiers == Default::default()
            && let Some(other) = giving(site, &substance)
        {
            found.push((entry, addition, above, other));
        }
    }
    let [(entry, addition, above, other)] = found.as_slice() else { return None };
    let amount = match addition.amounts.first() {
        Some(amount) if amount.dimension() == Dimension::AmountConcentration => {
            amount.span.of(&site.cursor.block.lines.get(entry.at.line)?.text).to_owned()
        }
        _ => format::concentration(site.line_of(*above)?.concentration_mol_per_L?, 4),
    };
    let line = site.cursor.block.lines.get(entry.at.line)?;
    let start = site.cursor.file.absolute(site.cursor.block_index, entry.at).start - entry.at.span.start;
    let pair = format!("{}{} / {} to {goal}", column(&amount).trim_start(), written_form(&addition.what.text), written_form(other.name()));
    let title = format!("Weigh {} and {} as a pair instead", addition.what.text, other.name());
    let edits = vec![(statement_span(line).shifted(start), pair), site.without_line(site.cursor.line_index)?];
    Some(site.action(ActionKind::Rewrite, title, edits))
}

/// A pH that is sought, as written and without conditions.
fn ph_of(site: &Site, line: usize, goal: &Goal) -> Option<String> {
    if !matches!(goal.kind, GoalKind::Property { property: Property::Ph, .. }) || goal.temperature.is_some() || goal.diluted.is_some() {
        return None;
    }
    let text: &Span = &goal.at.span;
    Some(text.of(&site.cursor.block.lines.get(line)?.text).trim().to_owned())
}

fn of(definition: &Definition) -> Option<Gives> {
    match &definition.block.body {
        Body::Substance(substance) => Some(gives(substance)).filter(|gives| !gives.is_empty()),
        _ => None,
    }
}

fn difference(from: &Gives, to: &Gives) -> Gives {
    let mut difference = to.clone();
    for (key, count) in from {
        *difference.entry(key.clone()).or_default() -= count;
    }
    difference.retain(|_, count| *count != 0.0);
    difference
}

fn sum(one: &Gives, other: &Gives) -> Gives {
    let mut sum = one.clone();
    for (key, count) in other {
        *sum.entry(key.clone()).or_default() += count;
    }
    sum.retain(|_, count| *count != 0.0);
    sum
}

/// The substance that gives just this; of several hydrates the one with the least mass.
fn giving(site: &Site, wanted: &Gives) -> Option<Definition> {
    let mass = |definition: &Definition| match &definition.block.body {
        Body::Substance(Substance { molar_mass: Some(mass), .. }) => *mass,
        _ => f64::INFINITY,
    };
    let fitting = site.substances().into_iter().filter(|definition| of(definition).as_ref() == Some(wanted));
    fitting.min_by(|one, other| mass(one).total_cmp(&mass(other)))
}
