//! The sheet of the recipe under the cursor, as Markdown, for a panel beside the text.

use std::sync::Arc;

use serde::Serialize;

use crate::report::{Selection, Subject, sheet, solution_sheet};
use crate::server::view::View;
use crate::workspace::FileState;

/// The answer to `scruple/sheet`.
#[derive(Debug, Serialize)]
pub struct RecipeSheet {
    /// The name of the solution.
    pub name: String,
    /// Its sheet; those of all members of a series, one below the other.
    pub markdown: String,
}

/// The sheet of the solution that holds an offset; nothing outside solutions.
pub fn recipe_sheet(view: &View, file: &FileState, offset: usize) -> Option<RecipeSheet> {
    let (index, block, _) = file.anchor_at(offset)?;
    let selection = Selection::new(Arc::clone(&view.snapshot), [file.id], file.root.clone());
    let members = selection.solutions().filter(|subject| subject.index == index);
    let sheets: Vec<String> = members.map(|subject: Subject| sheet::markdown(&solution_sheet(&subject))).collect();
    let name = block.name.as_ref().map(|name| name.text.clone())?;
    (!sheets.is_empty()).then(|| RecipeSheet { name, markdown: sheets.join("\n") })
}
