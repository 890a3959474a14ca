//! Colours, as semantic tokens.

use tower_lsp::lsp_types::{SemanticToken, SemanticTokenModifier, SemanticTokenType, SemanticTokensLegend};

use super::number;
use crate::editor::{self, SemanticKind};
use crate::server::view::View;
use crate::text::Span;
use crate::workspace::FileState;

/// The types of token that are sent, in the order of their numbers. They are the protocol's own, so that every theme has
/// colours for them.
const TYPES: &[SemanticTokenType] = &[
    SemanticTokenType::KEYWORD,
    SemanticTokenType::NUMBER,
    SemanticTokenType::TYPE,
    SemanticTokenType::CLASS,
    SemanticTokenType::FUNCTION,
    SemanticTokenType::ENUM_MEMBER,
    SemanticTokenType::NAMESPACE,
    SemanticTokenType::VARIABLE,
    SemanticTokenType::PROPERTY,
    SemanticTokenType::OPERATOR,
    SemanticTokenType::STRING,
    SemanticTokenType::MACRO,
    SemanticTokenType::STRUCT,
    SemanticTokenType::COMMENT,
];

/// The modifiers that are sent, in the order of their bits.
const MODIFIERS: &[SemanticTokenModifier] = &[SemanticTokenModifier::DEFINITION, SemanticTokenModifier::DEFAULT_LIBRARY];

/// What the numbers in tokens mean.
pub fn token_legend() -> SemanticTokensLegend {
    SemanticTokensLegend { token_types: TYPES.to_vec(), token_modifiers: MODIFIERS.to_vec() }
}

/// The tokens of a span, each told by its distance from the one before.
pub fn semantic_tokens(view: &View, file: &FileState, span: Span) -> Vec<SemanticToken> {
    let (mut line, mut column) = (0, 0);
    let mut tokens = Vec::new();
    for token in editor::semantic_tokens(&view.snapshot, file.id, span) {
        let range = view.range(file, token.span);
        let Some(token_type) = TYPES.iter().position(|known| *known == token_type(token.kind)) else { continue };
        // The protocol has no token over a line break, and none before the last.
        if range.start.line != range.end.line || (range.start.line, range.start.character) < (line, column) {
            continue;
        }
        let delta_line = range.start.line - line;
        let delta_start = if delta_line == 0 { range.start.character - column } else { range.start.character };
        tokens.push(SemanticToken {
            delta_line,
            delta_start,
            length: range.end.character - range.start.character,
            token_type: number(token_type),
            token_modifiers_bitset: u32::from(token.defines) | u32::from(token.built_in) << 1,
        });
        (line, column) = (range.start.line, range.start.character);
    }
    tokens
}

fn token_type(kind: SemanticKind) -> SemanticTokenType {
    match kind {
        SemanticKind::Keyword => SemanticTokenType::KEYWORD,
        SemanticKind::Number => SemanticTokenType::NUMBER,
        SemanticKind::Unit => SemanticTokenType::TYPE,
        SemanticKind::Substance => SemanticTokenType::CLASS,
        SemanticKind::Solution => SemanticTokenType::FUNCTION,
        SemanticKind::Constituent => SemanticTokenType::ENUM_MEMBER,
        SemanticKind::Lab => SemanticTokenType::NAMESPACE,
        SemanticKind::Unknown => SemanticTokenType::VARIABLE,
        SemanticKind::Property => SemanticTokenType::PROPERTY,
        SemanticKind::Operator => SemanticTokenType::OPERATOR,
        SemanticKind::Text | SemanticKind::Path => SemanticTokenType::STRING,
        SemanticKind::Code => SemanticTokenType::MACRO,
        SemanticKind::Formula => SemanticTokenType::STRUCT,
        SemanticKind::Comment => SemanticTokenType::COMMENT,
    }
}
