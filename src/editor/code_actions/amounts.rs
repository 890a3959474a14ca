//! The amount of a line stated in another way, or written down where it was worked out.

use super::site::{Site, only_amount};
use super::{ActionKind, CodeAction};
use crate::editor::cursor::statement_span;
use crate::editor::values::measured_out;
use crate::model::Action;
use crate::text::Span;
use crate::units::format;

/// Other ways to state what the line states.
pub fn offers(site: &Site) -> Vec<CodeAction> {
    let Some((index, entry)) = site.values.entry_on(site.cursor.line_index) else { return Vec::new() };
    let Some(line) = site.line_of(index) else { return Vec::new() };
    let rewrite = |title: String, span: Span, text: String| vec![site.on_line(ActionKind::Rewrite, title, vec![(span, text)])];
    match &entry.action {
        Action::MakeUp(make_up) if site.values.is_adjusted(line) && make_up.qualifiers.about.is_none() => {
            let amount = measured_out(line, 3);
            let end = statement_span(site.cursor.line).end;
            rewrite(format!("Write `about {amount}` on the line"), Span::empty(end), format!(", about {amount}"))
        }
        Action::Add(addition) => {
            let Some(span) = only_amount(addition) else { return Vec::new() };
            if site.values.states_concentration(addition) {
                let amount = measured_out(line, 4);
                rewrite(format!("State what is measured out: {amount}"), span, amount)
            } else if let Some(concentration) = line.concentration_mol_per_L.filter(|value| *value > 0.0) {
                let amount = format::concentration(concentration, 4);
                rewrite(format!("State the concentration: {amount}"), span, amount)
            } else {
                Vec::new()
            }
        }
        _ => Vec::new(),
    }
}
