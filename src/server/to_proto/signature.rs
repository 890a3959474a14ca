//! How the statement under the cursor is written.

use tower_lsp::lsp_types::{Documentation, ParameterInformation, ParameterLabel, SignatureHelp, SignatureInformation};

use super::number;
use crate::editor;
use crate::server::view::View;
use crate::workspace::FileState;

/// The form of the statement at an offset.
pub fn signature_help(view: &View, file: &FileState, offset: usize) -> Option<SignatureHelp> {
    let help = editor::signature_help(&view.snapshot, file.id, offset)?;
    let active = help.active.map(number);
    let parameter = |span: &crate::text::Span| ParameterInformation {
        // Forms are plain ASCII up to their last parameter, where all ways of counting agree.
        label: ParameterLabel::Simple(span.of(&help.form).to_owned()),
        documentation: None,
    };
    let signature = SignatureInformation {
        parameters: Some(help.parameters.iter().map(parameter).collect()),
        label: help.form.clone(),
        documentation: Some(Documentation::String(help.help.clone())),
        active_parameter: None,
    };
    Some(SignatureHelp { signatures: vec![signature], active_signature: Some(0), active_parameter: active })
}
