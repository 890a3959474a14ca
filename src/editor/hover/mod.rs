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
use crate::model::{Body, Definition, NameKey, Namespace, molar_mass};
use crate::syntax::formula;
use crate::syntax::tree::{Statement, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// How many meanings of a name are shown.
const SHOWN: usize = 6;

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

/// What is told of a thing that completion offers in a file, by its name. `pure` asks for the substance of that name rather
/// than a bottle of it.
pub fn hover_of_completion(snapshot: &Snapshot, file: FileId, name: &str, namespace: Namespace, pure: bool) -> Option<Hover> {
    let found = super::target::find(snapshot, file, namespace, &NameKey::new(name), name, pure);
    let page = match found.as_slice() {
        [definition] => things::page(snapshot, file, definition, Some((name, Page::new()))),
        _ if namespace == Namespace::Constituent => things::constituent_without_block(snapshot, file, name)?,
        _ => return None,
    };
    Some(Hover { span: Span::empty(0), markdown: page.markdown(), plain: page.plain() })
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
            // With `from`, all forms of the thing count, and the line is worked out all the same.
            let line = lines::of_line(snapshot, cursor);
            page.title(text, if line.is_some() { "in any of its forms" } else { "can mean several things" });
            page.append(line.unwrap_or_default());
            for definition in several.iter().take(SHOWN) {
                let kind = definition.block.kind().map_or("", describe::kind_word);
                page.row(definition.name(), format!("{kind} {}", things::detail(snapshot, definition)).trim());
            }
            if several.len() > SHOWN {
                page.row(format!("and {} more", several.len() - SHOWN), "");
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
    // The level stands in the title already.
    let text = text.split(" Level: ").next().unwrap_or(text);
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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    /// A small library: a stock, a buffer that takes it, and what is expected.
    const LIBRARY: &str = "\
use \"other.prep\"

solution Stock
    made at    25 °C
    58.44 g    sodium chloride
    q.s.       water to 1 L

solution Buffer
    made at    25 °C
    used at    4 °C
    800 mL     water
    50 mmol/L  Tris, purity 99.5 %
    10 mL      Stock
    q.s.       1 mol/L hydrochloric acid to pH 8.10
    q.s.       water to 1 L
    expect     pH 8.0 to 8.2 at 25 °C
    expect     total chloride at most 100 mmol/L
    accept     temperature-shift because it was validated at 4 °C

solution Pair
    made at    25 °C
    25 mmol/L  sodium dihydrogen phosphate / disodium hydrogen phosphate to pH 7.00
    q.s.       water to 1 L

substance Brine salt
    formula    NaCl
    gives      sodium, chloride
    hazard     H319

ion testate
    formula    C2H3O2
    charge     -1
    pKa        4.756 ± 0.002, of testic acid, enthalpy -0.41 kJ/mol

lab Bench
    room       18 °C to 22 °C
    balance    readability 0.1 mg, 20 mg to 220 g

//- other.prep
bottle Spirit
    96 % w/w   sodium chloride
";

    /// What is told where a mark is put behind the first `needle` of the library: the characters, then the page.
    fn check(needle: &str) -> String {
        let marked = LIBRARY.replacen(needle, &format!("{needle}‸"), 1);
        assert_ne!(marked, LIBRARY, "{needle}");
        let fixture = fixture(&marked);
        let findings: Vec<_> = fixture.snapshot.findings(fixture.file).iter().map(|located| &located.finding.message).collect();
        match hover(&fixture.snapshot, fixture.file, fixture.offset) {
            Some(hover) => format!("[{}]\n{}", hover.span.of(&fixture.text), hover.plain),
            None => format!("nothing; findings: {findings:#?}"),
        }
    }

    /// Every page holds the given pieces, in this order.
    fn holds(needle: &str, pieces: &[&str]) {
        let page = check(needle);
        let mut rest = page.as_str();
        for piece in pieces {
            match rest.find(piece) {
                Some(at) => rest = &rest[at + piece.len()..],
                None => panic!("no {piece:?} in order at {needle:?}:\n{page}"),
            }
        }
        assert!(page.lines().count() <= 24, "more than a screen:\n{page}");
    }

    #[test]
    fn a_solution_tells_its_ph_first() {
        holds("solution Buffer", &["[Buffer]", "Buffer – solution", "\npH  ", " at 25 °C", "at 4 °C (use)", "8.10 as set", "ionic strength", "buffer capacity", "pH with temperature", "−0.0", "volume", "expect pH", "holds", "expect total chloride", "holds", "Caution", "hydrochloric acid (H290"]);
        holds("solution Stock", &["pH", "about ", "Hardly buffered"]);
    }

    #[test]
    fn a_line_tells_what_to_weigh_and_what_the_thing_is() {
        // 50 mmol of C4H11NO3 (121.136 g/mol by the standard atomic weights) at a purity of 99.5 % are 6.087 g.
        holds("Tris", &["[Tris]", "Tris – substance, built-in library", "weigh", "6.087 g", "amount", "50.00 mmol", "in the finished solution", "50.00 mmol/L", "formula", "C4H11NO3", "121.14 g/mol", "pKa", "8.07"]);
        holds("sodium chlor", &["58.44 g", "1.000 mol", "NaCl"]);
        holds("10 mL      Sto", &["[Stock]", "Stock – solution", "measure out", "10.00 mL", "amount dissolved in it", "10.00 mmol", "pH"]);
    }

    #[test]
    fn a_titrant_tells_what_it_took() {
        holds("1 mol/L hydro", &["[hydrochloric acid]", "took", " mL (", "pH before", "10.", "pH as set", "8.10", "Caution: hydrochloric acid carries GHS H290"]);
        holds("    q.s.       1 m", &["[mol/L]", "took"]);
    }

    #[test]
    fn both_members_of_a_pair_are_weighed() {
        holds("sodium dihydrogen phosphate", &["weigh", " g", "mmol"]);
        holds("phosphate /", &["sodium dihydrogen phosphate", "weigh", "disodium hydrogen phosphate", "weigh"]);
    }

    #[test]
    fn an_expectation_tells_its_value_and_margin() {
        holds("expect     pH", &["expect pH – 8.00 to 8.20", "at 25 °C", "holds, 0.", "limit", "Minus the logarithm"]);
        holds("expect     pH 8", &["expect pH", "holds"]);
        holds("total chlor", &["[chloride]", "chloride – ion, built-in library", "charge", "−1"]);
    }

    #[test]
    fn quantities_are_converted() {
        holds("50 mmol/L", &["50 mmol/L", "in other units", "0.05 mol/L", "of Tris", "6.057 g/L", "weigh"]);
        holds("made at    25 °C", &["25 °C", "298.15 K"]);
    }

    #[test]
    fn words_are_explained() {
        holds("made", &["made at\n", "The temperature at which it is made"]);
        holds("made a", &["made at\n"]);
        holds("solution", &["solution\n", "Opens the recipe"]);
        holds("purity", &["purity\n", "How much of what is weighed"]);
        holds("because", &["because\n"]);
        holds("accept", &["accept\n"]);
        holds("temperature-sh", &["[temperature-shift]", "temperature-shift – warning", "scruple explain temperature-shift"]);
        holds("expect     total", ["expect total chloride", "total\n"].as_slice().get(..1).unwrap());
    }

    #[test]
    fn other_blocks_are_described() {
        holds("Brine", &["Brine salt – substance", "58.44 g/mol", "gives", "sodium, chloride", "Caution: Brine salt carries GHS H319 – see the safety data sheet"]);
        holds("formula    NaC", &["NaCl – formula", "58.44 g/mol"]);
        holds("ion testa", &["testate – ion", "charge", "−1", "pKa at 25 °C", "4.7560 ± 0.0020, testic acid"]);
        holds("of testic a", &["testic acid – form of the ion testate", "4.756"]);
        holds("lab Bench", &["Bench – lab", "18 °C to 22 °C", "readability 0.1 mg, 20 mg to 220 g"]);
        holds("use \"oth", &["other.prep", "Spirit", "bottle"]);
    }

    #[test]
    fn a_page_is_markdown_without_tables() {
        let fixture = fixture(&LIBRARY.replacen("solution Buf", "solution Buf‸", 1));
        let hover = hover(&fixture.snapshot, fixture.file, fixture.offset).unwrap();
        assert!(hover.markdown.starts_with("**Buffer** – solution\n\n```text\npH "), "{}", hover.markdown);
        assert!(!hover.markdown.contains('|'));
    }
}
