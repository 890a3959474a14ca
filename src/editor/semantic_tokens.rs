//! The tokens of a file with what each is, for colours.

use super::names::names;
use super::target::meanings;
use crate::model::Namespace;
use crate::syntax::tree::{BlockKind, Content, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// What a token is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum SemanticKind {
    /// A word of the language.
    Keyword,
    /// A number.
    Number,
    /// A unit.
    Unit,
    /// A substance of the built-in library or of a file.
    Substance,
    /// A solution or a bottle.
    Solution,
    /// An ion, a molecule or a solid.
    Constituent,
    /// A lab.
    Lab,
    /// A name that nothing bears.
    Unknown,
    /// A property.
    Property,
    /// `±`, `/`, `+`.
    Operator,
    /// Free text.
    Text,
    /// A path.
    Path,
    /// A finding's code.
    Code,
    /// A formula.
    Formula,
    /// A comment.
    Comment,
}

/// A token that has a colour.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct SemanticToken {
    /// Its characters; never over a line break.
    pub span: Span,
    /// What it is.
    pub kind: SemanticKind,
    /// Whether it defines the name that it is.
    pub defines: bool,
    /// Whether what it names belongs to the built-in library.
    pub built_in: bool,
}

/// The tokens of a file that touch a range, in order, none over a line break.
pub fn semantic_tokens(snapshot: &Snapshot, file: FileId, range: Span) -> Vec<SemanticToken> {
    let Some(state) = snapshot.file(file) else { return Vec::new() };
    let mut tokens = Vec::new();
    for (index, placed) in state.tree.lines.iter().enumerate() {
        if placed.start > range.end || placed.start + placed.line.text.len() < range.start {
            continue;
        }
        let block = state.model.blocks.get(state.block_of_line(index).0);
        let block_kind = block.and_then(|block| block.kind());
        let line_names = match &placed.line.content {
            Content::Statement(statement) => names(statement, block_kind),
            Content::Blank | Content::Junk(_) => Vec::new(),
        };
        for token in &placed.line.tokens {
            let (kind, built_in) = match token.kind {
                TokenKind::Name => {
                    let name = line_names.iter().find(|name| name.name.span.touches(token.span.start));
                    match name {
                        Some(name) => name_kind(snapshot, file, name),
                        None => (block_kind.map_or(SemanticKind::Unknown, block_kind_of), false),
                    }
                }
                TokenKind::Definition => (block_kind.map_or(SemanticKind::Unknown, block_kind_of), false),
                other => match simple(other) {
                    Some(kind) => (kind, false),
                    None => continue,
                },
            };
            let defines = token.kind == TokenKind::Definition;
            push_lines(&mut tokens, state.source.as_str(), SemanticToken { span: token.span.shifted(placed.start), kind, defines, built_in });
        }
    }
    tokens
}

fn simple(kind: TokenKind) -> Option<SemanticKind> {
    Some(match kind {
        TokenKind::Keyword => SemanticKind::Keyword,
        TokenKind::Number => SemanticKind::Number,
        TokenKind::Unit => SemanticKind::Unit,
        TokenKind::Property => SemanticKind::Property,
        TokenKind::Operator => SemanticKind::Operator,
        TokenKind::Text => SemanticKind::Text,
        TokenKind::Path => SemanticKind::Path,
        TokenKind::Code => SemanticKind::Code,
        TokenKind::Formula => SemanticKind::Formula,
        TokenKind::Comment => SemanticKind::Comment,
        TokenKind::Definition | TokenKind::Name => return None,
        TokenKind::Separator | TokenKind::Bad | TokenKind::Missing(_) => return None,
    })
}

fn block_kind_of(kind: BlockKind) -> SemanticKind {
    match kind {
        BlockKind::Solution | BlockKind::Bottle => SemanticKind::Solution,
        BlockKind::Substance => SemanticKind::Substance,
        BlockKind::Ion | BlockKind::Solid | BlockKind::Danger | BlockKind::Group => SemanticKind::Constituent,
        BlockKind::Lab => SemanticKind::Lab,
    }
}

fn name_kind(snapshot: &Snapshot, file: FileId, name: &super::names::NameUse) -> (SemanticKind, bool) {
    let meanings = meanings(snapshot, file, name);
    let Some(first) = meanings.first() else {
        // Hydrogen, hydroxide and water are known without a block.
        let is_constituent = name.namespace == Namespace::Constituent
            && snapshot.constituents(file).named(&crate::model::NameKey::new(&name.name.text)).is_some();
        return (if is_constituent { SemanticKind::Constituent } else { SemanticKind::Unknown }, is_constituent);
    };
    let kind = match name.namespace {
        Namespace::Constituent => SemanticKind::Constituent,
        _ => first.block.kind().map_or(SemanticKind::Unknown, block_kind_of),
    };
    (kind, !snapshot.files.contains_key(&first.key.file))
}

/// Adds a token, cut at line breaks.
fn push_lines(tokens: &mut Vec<SemanticToken>, text: &str, token: SemanticToken) {
    let mut start = token.span.start;
    for piece in token.span.of(text).split_inclusive(['\n', '\r']) {
        let kept = piece.trim_end_matches(['\n', '\r']).trim_end();
        if !kept.is_empty() {
            tokens.push(SemanticToken { span: Span::new(start, start + kept.len()), ..token });
        }
        start += piece.len();
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    #[test]
    fn names_are_coloured_by_what_they_mean() {
        let fixture = fixture("solution A\n    1 g        sodium chloride\n    2 mL       A\n    3 mL       nothing\n        , purity 99 % # salt\n    expect     total sodium at most 1 mol/L\n");
        let tokens = semantic_tokens(&fixture.snapshot, fixture.file, Span::new(0, fixture.text.len()));
        let kind = |text: &str| tokens.iter().find(|token| token.span.of(&fixture.text) == text).map(|token| (token.kind, token.defines, token.built_in));
        assert_eq!(kind("solution"), Some((SemanticKind::Keyword, false, false)));
        assert_eq!(kind("A"), Some((SemanticKind::Solution, true, false)));
        assert_eq!(kind("sodium chloride"), Some((SemanticKind::Substance, false, true)));
        assert_eq!(kind("nothing"), Some((SemanticKind::Unknown, false, false)));
        assert_eq!(kind("sodium"), Some((SemanticKind::Constituent, false, true)));
        assert_eq!(kind("# salt"), Some((SemanticKind::Comment, false, false)));
        assert!(tokens.windows(2).all(|pair| pair[0].span.end <= pair[1].span.start), "in order, without overlap");
        assert!(tokens.iter().all(|token| !token.span.of(&fixture.text).contains('\n')));
    }
}
