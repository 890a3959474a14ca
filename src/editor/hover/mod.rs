//! What the editor tells of the thing under the cursor: what matters first, at most a screen.

mod lines;
mod solutions;
mod things;

pub use things::pka_of;

use super::describe;
use super::page::Page;
use super::quantities::{by_molar_mass, conversions, quantity_at};
use super::target::{Target, Thing, target};
use super::words::{self, Word, WordKind};
use crate::finding::Code;
use crate::model::{Body, Definition, molar_mass};
use crate::syntax::formula;
use crate::syntax::tree::{Statement, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// What is told of a thing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Hover {
    /// The thing's characters.
    pub span: Span,
    /// As Markdown.
    pub markdown: String,
    /// As plain text.
    pub plain: String,
}

/// What is told of the thing at an offset.
pub fn hover(snapshot: &Snapshot, file: FileId, offset: usize) -> Option<Hover> {
    let target = target(snapshot, file, offset)?;
    let page = page(snapshot, &target)?;
    if page.is_empty() {
        return None;
    }
    Some(Hover { span: target.span, markdown: page.markdown(), plain: page.plain() })
}

fn page(snapshot: &Snapshot, target: &Target) -> Option<Page> {
    let cursor = &target.cursor;
    match &target.thing {
        Thing::Definition(block) => {
            let definition = super::target::defined_by(cursor.file, block)?;
            Some(things::page(snapshot, cursor.file.id, &definition, None))
        }
        Thing::Name { name, definitions } => Some(named(snapshot, target, &name.name.text, definitions)),
        Thing::Path(used) => path(snapshot, (*used)?),
        Thing::Code(code) => Some(explanation(*code)),
        Thing::Formula(text) => formula_page(text),
        Thing::Quantity => quantity(snapshot, target),
        Thing::Property => property(snapshot, target),
        Thing::Word => word(snapshot, target),
    }
}

/// A name: what the line does with it, then what it is.
fn named(snapshot: &Snapshot, target: &Target, text: &str, definitions: &[Definition]) -> Page {
    let cursor = &target.cursor;
    let mut page = Page::new();
    match definitions {
        [] => match things::constituent_without_block(snapshot, cursor.file.id, text) {
            Some(known) => page.append(known),
            None => {
                page.title(text, "not known here");
                page.sentence("Nothing of this name is in scope. Define it, or name the file that does with a `use` line.");
            }
        },
        [definition] => {
            let line = lines::of_name(snapshot, cursor, definition);
            page.append(things::page(snapshot, cursor.file.id, definition, Some((text, line))));
        }
        several => {
            page.title(text, "can mean several things");
            for definition in several {
                let kind = definition.block.kind().map_or("", describe::kind_word);
                page.row(definition.name(), format!("{kind} {}", things::detail(snapshot, definition)).trim());
            }
        }
    }
    page
}

fn path(snapshot: &Snapshot, used: FileId) -> Option<Page> {
    let file = snapshot.file(used)?;
    let mut page = Page::new();
    page.title(file.shown_path(), "names that it makes known here");
    let named: Vec<_> = file.model.blocks.iter().filter_map(|block| Some((block.name.as_ref()?, block.kind()?, block))).collect();
    for (name, kind, block) in named.iter().take(12) {
        let index = file.model.blocks.iter().position(|other| std::sync::Arc::ptr_eq(other, block)).unwrap_or(0);
        let detail = describe::detail(snapshot, used, index, block);
        page.row(name.text.clone(), format!("{} {detail}", describe::kind_word(*kind)).trim());
    }
    if named.len() > 12 {
        page.row(format!("and {} more", named.len() - 12), "");
    }
    Some(page)
}

/// The first paragraph of a finding's page.
fn explanation(code: Code) -> Page {
    let mut page = Page::new();
    page.title(code.name(), code.level().word());
    let paragraphs = code.page().split("\n\n").map(str::trim);
    let first = paragraphs.into_iter().find(|paragraph| !paragraph.is_empty() && !paragraph.starts_with('#'));
    let text = first.unwrap_or(code.summary());
    page.sentence(text.split_whitespace().collect::<Vec<_>>().join(" "));
    page.sentence(format!("More: scruple explain {}", code.name()));
    page
}

fn formula_page(text: &str) -> Option<Page> {
    let parsed = formula::parse(text).ok()?;
    let mut page = Page::new();
    page.title(text, "formula");
    page.row_if("molar mass", molar_mass(&parsed).map(describe::molar_mass));
    Some(page)
}

/// A quantity in other units, then what its line does.
fn quantity(snapshot: &Snapshot, target: &Target) -> Option<Page> {
    let cursor = &target.cursor;
    let token = cursor.token()?;
    let mut page = Page::new();
    let line = lines::of_line(snapshot, cursor);
    if let Some(written) = quantity_at(cursor, token) {
        page.title(cursor.text(written.span), "");
        for (index, other) in conversions(&written).into_iter().enumerate() {
            page.row(if index == 0 { "in other units" } else { "" }, other);
        }
        let substance = lines::substance_of_line(snapshot, cursor);
        let converted = substance.as_ref().and_then(|(_, kg_per_mol)| by_molar_mass(&written, *kg_per_mol));
        if let (Some((name, _)), Some(converted)) = (substance, converted) {
            page.row(format!("of {name}"), converted);
        }
    }
    if let Some(line) = line {
        page.append(line);
    }
    Some(page)
}

fn property(snapshot: &Snapshot, target: &Target) -> Option<Page> {
    let cursor = &target.cursor;
    let token = cursor.token()?;
    let text = cursor.text(token.span);
    let mut page = Page::new();
    if let Some(line) = lines::of_line(snapshot, cursor) {
        page.append(line);
    }
    let word = words::find(text, &[WordKind::Property]).or_else(|| {
        // `saturation index of` may be cut short by the cursor's token.
        words::of_kind(WordKind::Property).find(|word| word.word.starts_with(&text.to_lowercase()))
    });
    if let Some(word) = word {
        if page.is_empty() {
            page.title(word.word, "");
        }
        page.sentence(word.help);
    }
    Some(page)
}

/// A word of the language; on a `q.s.`, `expect` or pair line also what the line does.
fn word(snapshot: &Snapshot, target: &Target) -> Option<Page> {
    let cursor = &target.cursor;
    let mut page = Page::new();
    let statement = cursor.statement();
    let says_values = matches!(
        statement,
        Some(Statement::QuantumSatis(_) | Statement::Expect(_) | Statement::Pair(_) | Statement::All(_))
    );
    if says_values && let Some(line) = lines::of_line(snapshot, cursor) {
        page.append(line);
    }
    if let Some(word) = word_at(target) {
        page.title(word.word, "");
        page.sentence(word.help);
        page.code(word.form);
    }
    Some(page)
}

/// The word of the language that a keyword or sign under the cursor belongs to: the longest run of words that is one.
fn word_at(target: &Target) -> Option<&'static Word> {
    let cursor = &target.cursor;
    let token = cursor.token()?;
    let text = cursor.text(token.span);
    if token.kind == TokenKind::Operator {
        return words::find(text, &[WordKind::Qualifier]);
    }
    let tokens: Vec<_> = cursor.line.tokens.iter().filter(|token| !matches!(token.kind, TokenKind::Missing(_))).collect();
    let at = tokens.iter().position(|one| **one == token)?;
    let is_word = |index: usize| tokens.get(index).is_some_and(|token| token.kind == TokenKind::Keyword);
    let first = (0..=at).rev().take_while(|index| is_word(*index)).last()?;
    let last = (at..tokens.len()).take_while(|index| is_word(*index)).last()?;
    let is_behind_comma = first > 0 && tokens.get(first - 1).is_some_and(|token| token.kind == TokenKind::Separator);
    let kinds: &[WordKind] = match (first, is_behind_comma) {
        (0, _) => &[WordKind::Header, WordKind::Statement],
        (_, true) => &[WordKind::Qualifier, WordKind::Joint],
        _ => &[WordKind::Joint, WordKind::Property, WordKind::Qualifier],
    };
    for length in (1..=last - first + 1).rev() {
        for start in first..=last + 1 - length {
            if !(start..start + length).contains(&at) {
                continue;
            }
            let run: Vec<&str> = tokens.get(start..start + length)?.iter().map(|token| cursor.text(token.span)).collect();
            let run = run.join(" ");
            let kinds = if start == first { kinds } else { &[WordKind::Joint, WordKind::Qualifier] };
            if let Some(word) = words::find(&run, kinds) {
                return Some(word);
            }
        }
    }
    // Where the words of a statement are split by what is missing, its first word says which it is.
    if first == 0 { words::of_statement(cursor.statement()?) } else { None }
}

/// The molar mass of a substance, kg/mol.
fn molar_mass_of(definition: &Definition) -> Option<f64> {
    match &definition.block.body {
        Body::Substance(substance) => substance.molar_mass,
        _ => None,
    }
}
