//! What a recipe's names mean, and what is said when they mean nothing or too much.

use strsim::damerau_levenshtein;

use super::{Context, Refusal};
use crate::finding::{Code, Finding, Fix, Place};
use crate::model::*;
use crate::syntax::tree::BlockKind;

/// What an ingredient was found to be.
#[derive(Clone, Debug)]
pub struct Found<'a> {
    /// The definition.
    pub definition: &'a Definition,
}

impl<'a> Found<'a> {
    /// The kind of block that defines it.
    pub fn kind(&self) -> Option<BlockKind> {
        self.definition.block.kind()
    }

    /// The substance, where it is one.
    pub fn substance(&self) -> Option<&'a Substance> {
        match &self.definition.block.body {
            Body::Substance(substance) => Some(substance),
            _ => None,
        }
    }
}

/// Finds an ingredient.
pub fn ingredient<'a>(reference: &Reference, as_bought: bool, context: &Context<'a>) -> Result<Found<'a>, Refusal> {
    let pure_is_meant = !as_bought || reference.strength.is_some();
    let scope = context.scope_of(reference);
    match meaning(&reference.key, &reference.text, pure_is_meant, scope) {
        Lookup::One(definition) => Ok(Found { definition }),
        Lookup::Several(definitions) => Err(ambiguous(reference, &definitions).into()),
        Lookup::Nothing => Err(unknown(reference, Namespace::Ingredient, scope).into()),
    }
}

/// What an ingredient's name means. A bottle that bears its substance's name is the bottle where it is measured out as
/// bought, and its substance where pure substance is meant.
pub fn meaning<'a>(key: &NameKey, written: &str, pure_is_meant: bool, scope: &'a Scope) -> Lookup<'a> {
    match scope.find(Namespace::Ingredient, key, written) {
        Lookup::One(definition) => {
            let is_bottle = definition.block.kind() == Some(BlockKind::Bottle);
            if is_bottle && pure_is_meant
                && let Some(substance) = only_substance(scope.built_in.named(Namespace::Ingredient, key))
            {
                return Lookup::One(substance);
            }
            Lookup::One(definition)
        }
        Lookup::Several(definitions) => {
            // A substance of one's own and its bottle may share a name.
            let of_kind = |kind| {
                let mut of_kind = definitions.iter().filter(|one| one.block.kind() == Some(kind));
                (of_kind.next(), of_kind.next())
            };
            let wanted = if pure_is_meant { BlockKind::Substance } else { BlockKind::Bottle };
            match of_kind(wanted) {
                (Some(one), None) if definitions.len() == 2 && of_kind(BlockKind::Solution).0.is_none() => Lookup::One(one),
                _ => Lookup::Several(definitions),
            }
        }
        Lookup::Nothing => Lookup::Nothing,
    }
}

fn only_substance(definitions: &[Definition]) -> Option<&Definition> {
    match definitions {
        [one] if one.block.kind() == Some(BlockKind::Substance) => Some(one),
        _ => None,
    }
}

/// The finding for a name that several things bear.
fn ambiguous(reference: &Reference, definitions: &[&Definition]) -> Finding {
    let names: Vec<&str> = definitions.iter().map(|definition| definition.name()).collect();
    let all_substances = definitions.iter().all(|one| one.block.kind() == Some(BlockKind::Substance));
    let distinct: std::collections::BTreeSet<&str> = names.iter().copied().collect();
    let code = if all_substances && distinct.len() > 1 { Code::AmbiguousSalt } else { Code::AmbiguousName };
    let mut finding = Finding::new(
        code,
        reference.at,
        format!("{} can mean {}.", reference.text, listed(&names)),
    )
    .help("Write which one is weighed.")
    .about(reference.key.as_str());
    for definition in definitions {
        if code == Code::AmbiguousSalt {
            finding = finding.fix(Fix::replace(
                format!("Write {}", definition.name()),
                reference.at,
                written_form(definition.name()),
            ));
        }
        finding = finding.related_at(place_of(definition), format!("{} is defined here", definition.name()));
    }
    finding
}

/// A name as it must be written on a line: in quotes where its characters ask for them.
pub fn written_form(name: &str) -> String {
    let is_bare = crate::syntax::is_bare_name(name);
    if is_bare { name.to_string() } else { format!("\"{}\"", name.replace('"', "\"\"")) }
}

/// The place of a definition's header.
pub fn place_of(definition: &Definition) -> Place {
    Place::Block {
        file: definition.key.file,
        key: definition.key.name.as_str().to_string(),
        anchor: definition.block.header_anchor(),
    }
}

/// `a, b or c`.
pub fn listed(names: &[&str]) -> String {
    match names {
        [] => String::new(),
        [one] => (*one).to_string(),
        [first @ .., last] => format!("{} or {last}", first.join(", ")),
    }
}

/// The finding for a name that nothing bears, with the nearest ones.
fn unknown(reference: &Reference, namespace: Namespace, scope: &Scope) -> Finding {
    let what = match namespace {
        Namespace::Ingredient => "substance, bottle or solution",
        Namespace::Constituent => "ion or molecule",
        Namespace::Phase => "solid",
        Namespace::Danger => "danger or group",
        Namespace::Lab => "lab",
    };
    let mut finding =
        Finding::new(Code::UnknownName, reference.at, format!("No {what} called {} is in scope.", reference.text))
            .about(reference.key.as_str());
    let near = suggestions(&reference.key, namespace, scope);
    finding.help = match near.first() {
        Some(first) => format!("Did you mean {first}?"),
        None => "Define it, or name the file that does with a `use` line.".to_string(),
    };
    for name in near {
        finding = finding.fix(Fix::replace(format!("Write {name}"), reference.at, written_form(&name)));
    }
    finding
}

/// The visible names nearest to one, at most three.
pub fn suggestions(key: &NameKey, namespace: Namespace, scope: &Scope) -> Vec<String> {
    let wanted = key.as_str();
    let limit = (wanted.chars().count() / 3).clamp(1, 6);
    let mut near: Vec<(usize, String)> = scope
        .all()
        .filter(|(of, name, _)| *of == namespace && name.as_str().len().abs_diff(wanted.len()) <= limit)
        .filter_map(|(_, name, definitions)| {
            let distance = damerau_levenshtein(wanted, name.as_str());
            let written = definitions.iter().find_map(|definition| {
                std::iter::once(definition.block.name.as_ref()?)
                    .chain(&definition.block.also)
                    .find(|spelling| spelling.key == *name)
                    .map(|spelling| spelling.text.clone())
            });
            (distance <= limit).then_some((distance, written?))
        })
        .collect();
    near.sort();
    near.dedup();
    near.into_iter().map(|(_, name)| name).take(3).collect()
}

/// Whether a bottle or solution is plainly one substance in water: candidates for what a strength before a name means.
/// Solutions that are themselves made from a strength are left out, so that none can wait for the other.
pub fn is_plain_stock_of(block: &Block, name: &NameKey) -> bool {
    let Some(recipe) = block.recipe() else { return false };
    let mut solutes = recipe.entries.iter().filter_map(|entry| match &entry.action {
        Action::Add(addition) => Some((&addition.what, addition.amounts.len())),
        Action::MakeUp(make_up) => Some((&make_up.what, make_up.goals.len())),
        _ => None,
    });
    let only_lines = recipe.entries.iter().all(|entry| matches!(entry.action, Action::Add(_) | Action::MakeUp(_) | Action::Found { .. }));
    let mut has_it = false;
    only_lines
        && recipe.like.is_none()
        && solutes.all(|(what, amounts)| {
            has_it |= what.key == *name;
            amounts == 1 && what.strength.is_none() && (what.key == *name || what.key.as_str().contains("water"))
        })
        && has_it
}

/// The bottles and solutions in scope that are just this substance at this strength.
pub fn stocks_of_strength<'a>(
    reference: &Reference,
    found: &Found,
    matches: impl Fn(&super::Outcome) -> bool,
    context: &Context<'a>,
) -> Vec<&'a Definition> {
    let mut stocks: Vec<&Definition> = Vec::new();
    for (namespace, _, definitions) in context.scope_of(reference).own.all() {
        for definition in definitions.iter().filter(|_| namespace == Namespace::Ingredient) {
            if !is_plain_stock_of(&definition.block, &reference.key) || stocks.iter().any(|known| known.key == definition.key) {
                continue;
            }
            let Some(outcome) = (context.stocks)(&definition.key).and_then(|evaluation| evaluation.outcome().cloned()) else {
                continue;
            };
            let is_only_it = matches!(outcome.solutes.as_slice(), [solute] if solute.definition == found.definition.key);
            if is_only_it && matches(&outcome) {
                stocks.push(definition);
            }
        }
    }
    stocks.sort_by(|one, other| one.key.cmp(&other.key));
    stocks
}

/// Looks up every name of a recipe, and reports those that cannot be found.
pub fn report_all(recipe: &Recipe, context: &Context, findings: &mut Vec<Finding>) {
    let mut look = |reference: &Reference| {
        if let Err(refusal) = ingredient(reference, true, context) {
            findings.extend(refusal.into_findings());
        }
    };
    recipe.entries.iter().flat_map(|entry| entry.action.ingredients()).for_each(&mut look);
}

/// A constituent by name: an ion, one of its forms, or a molecule; a substance that gives just one is understood.
pub fn constituent<'a>(reference: &Reference, context: &Context<'a>) -> Result<&'a Constituent, Refusal> {
    context
        .constituents
        .named(&reference.key)
        .ok_or_else(|| unknown(reference, Namespace::Constituent, context.scope).into())
}

/// Whether a substance is an acid, a base or ammonia that the trade sells as solutions in water of several strengths.
pub fn comes_in_strengths(substance: &Substance) -> bool {
    !substance.aqueous.is_empty() && !substance.gives.is_empty()
}

/// Whether such a substance is never weighed pure: a gas, or a liquid sold in water.
pub fn is_sold_in_solution_only(substance: &Substance) -> bool {
    comes_in_strengths(substance) && substance.form.as_deref() != Some("solid")
}
