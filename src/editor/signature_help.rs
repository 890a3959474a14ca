//! How the statement under the cursor is written, with the part that comes next.

use super::cursor::Cursor;
use super::words;
use crate::syntax::tree::TokenKind;
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// The form of a statement.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SignatureHelp {
    /// How it is written.
    pub form: String,
    /// What it says.
    pub help: String,
    /// The parts that are to be filled in, as spans of the form.
    pub parameters: Vec<Span>,
    /// Which of them the cursor stands in or before; none behind the last.
    pub active: Option<usize>,
}

/// How an ingredient line is written; it has no first word to look up.
const INGREDIENT: (&str, &str) = (
    "QUANTITY [STRENGTH] NAME [, QUALIFIER]",
    "Goes in: a mass, a volume or an amount as stated; a concentration is worked out for the finished volume.",
);

/// The form of the statement at an offset; nothing in headers without a name to fill in, comments and free text.
pub fn signature_help(snapshot: &Snapshot, file: FileId, offset: usize) -> Option<SignatureHelp> {
    let cursor = Cursor::new(snapshot, file, offset)?;
    if cursor.line.tokens.iter().any(|token| token.kind == TokenKind::Comment && token.span.start < cursor.at) {
        return None;
    }
    let statement = cursor.statement()?;
    let (form, help) = match words::of_statement(statement) {
        Some(word) => (word.form, word.help),
        None if matches!(statement, crate::syntax::tree::Statement::Ingredient(_)) => INGREDIENT,
        None => return None,
    };
    let parameters = parameters(form);
    let active = active(&cursor, form, &parameters);
    Some(SignatureHelp { form: form.to_owned(), help: help.to_owned(), parameters, active })
}

/// The runs of capital letters: what is to be filled in.
fn parameters(form: &str) -> Vec<Span> {
    let mut found = Vec::new();
    let mut start = 0;
    for part in form.split_inclusive([' ', '[', ']', ',', '"', '-', '|']) {
        let word = part.trim_end_matches([' ', '[', ']', ',', '"', '-', '|']);
        if !word.is_empty() && word.chars().all(|letter| letter.is_ascii_uppercase()) {
            found.push(Span::new(start, start + word.len()));
        }
        start += part.len();
    }
    found
}

/// What is filled in from the cursor on: of the words of the form that stand before the cursor the last decides, and after it
/// as many parts as are filled in already are passed by.
fn active(cursor: &Cursor, form: &str, parameters: &[Span]) -> Option<usize> {
    let before = cursor.line.tokens.iter().filter(|token| token.span.end < cursor.at || token.span.end == cursor.at && token.span.is_empty());
    let mut reached = 0;
    let mut filled = 0;
    let mut is_quantity = false;
    for token in before {
        match token.kind {
            TokenKind::Keyword => {
                let word = cursor.text(token.span).to_lowercase();
                let found = form.get(reached..).and_then(|rest| rest.find(word.as_str()));
                if let Some(at) = found {
                    reached += at + word.len();
                    filled = parameters.iter().filter(|span| span.end <= reached).count();
                }
                is_quantity = false;
            }
            // A number and its unit are one part.
            TokenKind::Unit if is_quantity => is_quantity = false,
            TokenKind::Number => {
                filled += 1;
                is_quantity = true;
            }
            TokenKind::Name => {
                let name = parameters.iter().position(|span| span.of(form) == "NAME" && span.start >= reached);
                filled = name.map_or(filled, |name| name.max(filled)) + 1;
                is_quantity = false;
            }
            TokenKind::Separator => {
                let behind = parameters.iter().position(|span| form.get(..span.start).is_some_and(|before| before.ends_with(", ") || before.ends_with("[, ")));
                filled = behind.map_or(filled, |behind| behind.max(filled));
                is_quantity = false;
            }
            TokenKind::Definition | TokenKind::Text | TokenKind::Path | TokenKind::Code | TokenKind::Formula | TokenKind::Property => {
                filled += 1;
                is_quantity = false;
            }
            _ => {}
        }
    }
    (filled < parameters.len()).then_some(filled)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    /// The form with the active part in marks.
    fn check(text: &str) -> String {
        let fixture = fixture(&format!("solution A\n{text}\n    made at    25 °C\n"));
        let Some(help) = signature_help(&fixture.snapshot, fixture.file, fixture.offset) else { return String::new() };
        let mut form = help.form.clone();
        if let Some(span) = help.active.map(|active| help.parameters[active]) {
            form.insert(span.end, '»');
            form.insert(span.start, '«');
        }
        form
    }

    #[test]
    fn the_part_that_comes_next_is_marked() {
        assert_eq!(check("    q.s.       ‸"), "q.s. «NAME» to TARGET");
        assert_eq!(check("    q.s.       water to ‸"), "q.s. NAME to «TARGET»");
        assert_eq!(check("    accept     ‸"), "accept «CODE» [on NAME] because REASON");
        assert_eq!(check("    accept     temperature-shift because ‸"), "accept CODE [on NAME] because «REASON»");
        assert_eq!(check("    1 g        ‸"), "QUANTITY [«STRENGTH»] NAME [, QUALIFIER]");
        assert_eq!(check("    1 g        sodium chloride, ‸"), "QUANTITY [STRENGTH] NAME [, «QUALIFIER»]");
        assert_eq!(check("    stored at  4 °C for ‸"), "stored at T [to T] [for «DURATION»] [, in MATERIAL] [, in the dark]");
    }

    #[test]
    fn comments_and_words_without_parts_have_none() {
        assert_eq!(check("    q.s.       water to 1 L # so ‸"), "");
        assert_eq!(check("‸"), "");
    }
}
