//! What is told of the thing under the cursor.

use tower_lsp::lsp_types::{Hover, HoverContents};

use super::markup;
use crate::editor;
use crate::server::view::View;
use crate::workspace::FileState;

/// What is told of the thing at an offset, as Markdown where the client draws it.
pub fn hover(view: &View, file: &FileState, offset: usize) -> Option<Hover> {
    let hover = editor::hover(&view.snapshot, file.id, offset)?;
    let contents = HoverContents::Markup(markup(view.session.markdown_hover, hover.markdown, hover.plain));
    Some(Hover { contents, range: Some(view.range(file, hover.span)) })
}
