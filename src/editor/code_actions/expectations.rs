//! What a solution has now, as what is expected of it.

use super::site::{Site, column};
use super::{ActionKind, CodeAction};
use crate::editor::values::is_hardly_buffered;
use crate::model::Property;
use crate::units::{Unit, format};

/// Expected beside the present pH: what a meter in everyday use is off by, common practice.
const PH_WINDOW: f64 = 0.05;
/// Expected beside other values, as a share of them.
const WINDOW: f64 = 0.05;

/// On the header of a solution, a line for each property that nothing is expected of yet.
pub fn offers(site: &Site) -> Vec<CodeAction> {
    let Some(state) = site.outcome.finished.as_ref().ok().filter(|_| site.is_on_header()) else { return Vec::new() };
    let mut wanted: Vec<(Property, String)> = Vec::new();
    if !is_hardly_buffered(state) {
        wanted.push((Property::Ph, format!("{} ± {PH_WINDOW}", format::ph(state.pH()))));
        let capacity = (1.0 - WINDOW) * state.buffer_capacity_mol_per_L();
        wanted.push((Property::BufferCapacity, format!("at least {}", format::concentration(capacity, 2))));
    }
    let strength = state.ionic_strength_mol_per_L();
    if let Some(unit) = Unit::parse("mol/L").filter(|_| strength > 0.0) {
        let number = |value: f64| format::significant(unit.from_base(value), 3);
        let range = format!("{} to {} {}", number((1.0 - WINDOW) * strength), number((1.0 + WINDOW) * strength), unit.symbol());
        wanted.push((Property::IonicStrength, range));
    }
    wanted.retain(|(property, _)| !site.values.recipe.expectations.iter().any(|one| one.property == *property));
    let action = |(property, range): (Property, String)| {
        let text = format!("{}{} {range}", column("expect"), property.words());
        Some(site.action(ActionKind::Rewrite, format!("Expect {} {range}", property.words()), vec![site.line_at_end(text)?]))
    };
    wanted.into_iter().filter_map(action).collect()
}
