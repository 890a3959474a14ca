//! A part of a recipe taken out as a stock, and a stock's parts put in its place.

use super::site::{Site, column, only_amount};
use super::{ActionKind, CodeAction};
use crate::editor::cursor::{block_span, statement_span};
use crate::editor::target::{find, locate};
use crate::editor::values::Values;
use crate::evaluate::{Role, written_form};
use crate::model::{Action, Addition, Body, Definition, NameKey, Namespace, Substance, is_water};
use crate::text::Span;
use crate::units::{Dimension, format};

/// How many times stronger than used a stock is made, the first that dissolves. Common practice, no source.
const FOLDS: &[f64] = &[100.0, 20.0, 10.0];
/// Of what dissolves a stock holds at most this share.
const OF_SATURATION: f64 = 0.8;

/// On the line of a substance, a stock of it; on the line of a stock, what is in it.
pub fn offers(site: &Site) -> Vec<CodeAction> {
    let Some((index, entry)) = site.values.entry_on(site.cursor.line_index) else { return Vec::new() };
    let Action::Add(addition) = &entry.action else { return Vec::new() };
    if only_amount(addition).is_none() || addition.what.strength.is_some() {
        return Vec::new();
    }
    let meant = find(site.snapshot, site.file, Namespace::Ingredient, &addition.what.key, &addition.what.text, false);
    let [definition] = meant.as_slice() else { return Vec::new() };
    let action = match &definition.block.body {
        Body::Substance(substance) => taken_out(site, index, addition, definition, substance),
        Body::Solution(_) => put_in(site, index, addition, definition),
        _ => None,
    };
    action.into_iter().collect()
}

fn taken_out(site: &Site, index: usize, addition: &Addition, definition: &Definition, substance: &Substance) -> Option<CodeAction> {
    let is_plain = addition.qualifiers.purity.is_none() && addition.qualifiers.water.is_none() && addition.qualifiers.dried_at.is_none();
    if is_water(substance) || substance.form.as_deref() != Some("solid") || !is_plain {
        return None;
    }
    let concentration = site.line_of(index)?.concentration_mol_per_L.filter(|value| *value > 0.0)?;
    let molar_mass = substance.molar_mass?;
    // Solubilities stand in kg/m³ or g/L alike.
    let dissolves = substance
        .solubility
        .iter()
        .filter(|(amount, _)| amount.dimension() == Dimension::MassConcentration)
        .map(|(amount, _)| amount.value / (1000.0 * molar_mass))
        .min_by(f64::total_cmp);
    let fold = *FOLDS.iter().find(|fold| dissolves.is_none_or(|most| concentration * **fold <= OF_SATURATION * most))?;
    let name = format!("{} stock", capitalised(definition.name()));
    if !find(site.snapshot, site.file, Namespace::Ingredient, &NameKey::new(&name), &name, false).is_empty() {
        return None;
    }
    let volume = format::volume(site.outcome.volume_L / fold, 4);
    let break_ = line_break(site);
    let lines = [
        format!("solution {}", written_form(&name)),
        format!("{}{}", column("made at"), format::temperature(site.outcome.made_at_K)),
        format!("{}{}", column(&format::concentration(concentration * fold, 4)), written_form(definition.name())),
        format!("{}water to 100 mL", column("q.s.")),
    ];
    let above = block_span(site.cursor.file, site.cursor.block_index).start;
    let block = format!("{}{break_}{break_}", lines.join(break_));
    let line = format!("{}{}", column(&volume).trim_start(), written_form(&name));
    let statement = site.cursor.absolute(statement_span(site.cursor.line));
    let title = format!("Take {} out as a stock, {} times as strong", definition.name(), format::plain(fold));
    Some(site.action(ActionKind::Extract, title, vec![(Span::empty(above), block), (statement, line)]))
}

fn put_in(site: &Site, index: usize, addition: &Addition, definition: &Definition) -> Option<CodeAction> {
    let [amount] = addition.amounts.as_slice() else { return None };
    if amount.dimension() != Dimension::Volume || addition.qualifiers != Default::default() {
        return None;
    }
    let (file, block) = locate(site.snapshot, definition)?;
    let stock = Values::of(site.snapshot, file.id, block)?;
    let outcome = stock.single().filter(|outcome| outcome.volume_L > 0.0)?;
    let share = site.line_of(index)?.volume_L? / outcome.volume_L;
    let mut lines = Vec::new();
    for line in &outcome.lines {
        let part = crate::editor::target::definition_of(site.snapshot, &line.definition)?;
        match (&part.block.body, line.role) {
            (Body::Substance(substance), _) if is_water(substance) => {}
            (_, Role::Stated | Role::OfPair) => {
                // What the stock takes must be known here too, and by the same name.
                let here = find(site.snapshot, site.file, Namespace::Ingredient, &part.key.name, part.name(), false);
                if !matches!(here.as_slice(), [one] if one.key == part.key) {
                    return None;
                }
                let amount = line.volume_L.map_or_else(|| format::mass(line.mass_kg * share, 4), |litres| format::volume(litres * share, 4));
                lines.push(format!("{}{}", column(&amount), written_form(part.name())));
            }
            // A titrant's amount hangs on the stock's pH, which is not this recipe's.
            _ => return None,
        }
    }
    let text = lines.join(line_break(site));
    let statement = statement_span(site.cursor.line);
    let title = format!("Put in what {} holds instead", definition.name());
    (!text.is_empty()).then(|| site.on_line(ActionKind::Inline, title, vec![(statement, text.trim_start().to_owned())]))
}

fn line_break(site: &Site) -> &'static str {
    if site.cursor.file.source.as_str().contains("\r\n") { "\r\n" } else { "\n" }
}

fn capitalised(name: &str) -> String {
    let mut letters = name.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}
