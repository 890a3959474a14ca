//! Another hydrate or another salt of the same thing, with as many moles of it: what is weighed changes, the chemistry of the
//! thing itself does not.

use std::collections::BTreeMap;

use super::site::{Site, only_amount};
use super::{ActionKind, CodeAction};
use crate::editor::target::find;
use crate::evaluate::written_form;
use crate::model::{Action, Body, Definition, NameKey, Namespace, Substance};
use crate::units::{Dimension, format};

/// How many other forms are offered.
const OFFERED: usize = 6;

/// What a substance gives in water: moles of each ion or molecule per mole. A hydroxide counts as a hydrogen less, so that
/// bases and acids can be compared.
pub type Gives = BTreeMap<NameKey, f64>;

/// The other forms of the line's substance, hydrates before salts.
pub fn offers(site: &Site) -> Vec<CodeAction> {
    let Some((_, entry)) = site.values.entry_on(site.cursor.line_index) else { return Vec::new() };
    let Action::Add(addition) = &entry.action else { return Vec::new() };
    if !addition.what.at.span.touches(site.cursor.at) || addition.what.strength.is_some() || addition.qualifiers.dried_at.is_some() {
        return Vec::new();
    }
    let (Some(span), [amount]) = (only_amount(addition), addition.amounts.as_slice()) else { return Vec::new() };
    let Some(own) = site.ingredient(&addition.what.key, &addition.what.text) else { return Vec::new() };
    let Body::Substance(substance) = &own.block.body else { return Vec::new() };
    let Some(mass) = substance.molar_mass.filter(|_| !substance.gives.is_empty()) else { return Vec::new() };
    let core = core(site, substance);
    let mut forms: Vec<(bool, Definition, f64)> = Vec::new();
    for other in site.substances() {
        let Body::Substance(form) = &other.block.body else { continue };
        let Some(other_mass) = form.molar_mass.filter(|_| other.key != own.key && form.form == substance.form) else { continue };
        let is_hydrate = gives(form) == gives(substance);
        let is_salt = !core.is_empty() && self::core(site, form) == core && hydrogens(form) == hydrogens(substance);
        if is_hydrate || is_salt {
            forms.push((!is_hydrate, other, other_mass));
        }
    }
    forms.sort_by_key(|(one, ..)| *one);
    let action = |(is_salt, other, other_mass): (bool, Definition, f64)| {
        let name = written_form(other.name());
        let mut edits = vec![(addition.what.at.span, name)];
        let amount = match amount.dimension() {
            // The purity and the water of the line are of the bottle that is weighed, and stay.
            Dimension::Mass => Some(format::mass(amount.value * other_mass / mass, 4)),
            Dimension::MassConcentration => Some(format::quantity(amount.value * other_mass / mass, amount.unit, 4)),
            Dimension::Amount | Dimension::AmountConcentration | Dimension::Molality => None,
            _ => return None,
        };
        let said = amount.as_ref().map_or_else(String::new, |amount| format!(" {amount}"));
        let title = format!("Take{said} {} instead: another {}, as many moles", other.name(), if is_salt { "salt" } else { "hydrate" });
        edits.extend(amount.map(|amount| (span, amount)));
        Some(site.on_line(ActionKind::Rewrite, title, edits))
    };
    forms.into_iter().filter_map(action).take(OFFERED).collect()
}

/// What a substance gives.
pub fn gives(substance: &Substance) -> Gives {
    let mut gives = Gives::new();
    for (count, what) in &substance.gives {
        let (key, count) = if what.key.as_str() == "hydroxide" { (NameKey::new("hydrogen"), -count) } else { (what.key.clone(), *count) };
        *gives.entry(key).or_default() += count;
    }
    gives.retain(|_, count| *count != 0.0);
    gives
}

fn hydrogens(substance: &Substance) -> f64 {
    gives(substance).get(&NameKey::new("hydrogen")).copied().unwrap_or(0.0)
}

/// What matters to the pH of what a substance gives: the ions and molecules with a pKa. The others only carry the charge.
fn core(site: &Site, substance: &Substance) -> Gives {
    let mut core = gives(substance);
    core.retain(|key, _| {
        let found = find(site.snapshot, site.file, Namespace::Constituent, key, key.as_str(), true);
        matches!(found.as_slice(), [one] if matches!(&one.block.body, Body::Ion(ion) if !ion.pka.is_empty()))
    });
    core
}
