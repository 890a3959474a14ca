//! What can be written at an offset: the tree's gap or part there decides, its written form is inserted.

mod items;
mod names;
mod parts;
mod suited_buffers;

use super::cursor::Cursor;
use super::names::names;
use crate::syntax::tree::{Amounts, Content, Expected, Statement, Token, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;
use items::Items;

/// What is offered.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Completions {
    /// The items, the likeliest first.
    pub items: Vec<CompletionItem>,
    /// Whether more would be offered once more is typed.
    pub is_incomplete: bool,
}

/// Something that can be written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CompletionItem {
    /// The characters that it replaces: the whole of what was begun, back to its start.
    pub span: Span,
    /// What is listed.
    pub label: String,
    /// What is inserted.
    pub insert: String,
    /// What the editor compares with the characters before the cursor; another spelling where that was begun.
    pub filter: String,
    /// What it is.
    pub kind: CompletionKind,
    /// A few words beside it.
    pub detail: String,
    /// A sentence about it.
    pub documentation: String,
    /// By which the items are ordered.
    pub sort: String,
}

/// What an item is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum CompletionKind {
    /// A word of the language.
    Keyword,
    /// A solution.
    Solution,
    /// A bottle.
    Bottle,
    /// A substance.
    Substance,
    /// An ion or molecule in solution.
    Constituent,
    /// A solid phase.
    Solid,
    /// A lab.
    Lab,
    /// A unit.
    Unit,
    /// A property.
    Property,
    /// A finding's code.
    Code,
    /// A file.
    File,
    /// A value.
    Value,
}

impl CompletionKind {
    /// Every kind.
    pub const ALL: &'static [CompletionKind] = &[
        CompletionKind::Keyword,
        CompletionKind::Solution,
        CompletionKind::Bottle,
        CompletionKind::Substance,
        CompletionKind::Constituent,
        CompletionKind::Solid,
        CompletionKind::Lab,
        CompletionKind::Unit,
        CompletionKind::Property,
        CompletionKind::Code,
        CompletionKind::File,
        CompletionKind::Value,
    ];
}

/// What can be written at an offset.
pub fn completion(snapshot: &Snapshot, file: FileId, offset: usize) -> Completions {
    let Some(state) = snapshot.file(file) else { return Completions::default() };
    let offset = state.source.clamp(offset);
    let mut items = Items::new(snapshot, file, offset);
    match Cursor::new(snapshot, file, offset) {
        // Behind the last line break a new line begins that the tree does not hold.
        Some(cursor) if cursor.at >= cursor.line.text.len() && cursor.line.text.ends_with(['\n', '\r']) => {
            parts::statements(&mut items, cursor.block.role, Span::empty(offset));
        }
        Some(cursor) => at_cursor(&cursor, &mut items),
        None => parts::statements(&mut items, crate::model::BlockRole::Head, Span::empty(offset)),
    }
    items.finish()
}

fn at_cursor(cursor: &Cursor, items: &mut Items) {
    if is_in_text(cursor) {
        return;
    }
    if let Some(span) = beginning(cursor) {
        parts::statements(items, cursor.block.role, span);
        if matches!(cursor.line.content, Content::Junk(_) | Content::Blank) {
            return;
        }
    }
    let Some(statement) = cursor.statement() else { return };
    if let Some(span) = begun_with_a_number(cursor, statement) {
        names::begun_with_a_number(items, cursor, cursor.absolute(span));
    }
    if let Some(name) = name_before(cursor, statement) {
        let span = cursor.absolute(Span::new(name.start, name.end.max(cursor.at)));
        names::at(items, cursor, statement, span);
    }
    for (expected, gap) in gaps(cursor) {
        part(items, cursor, statement, expected, cursor.absolute(gap));
    }
    if let Some((expected, span)) = begun(cursor) {
        part(items, cursor, statement, expected, cursor.absolute(span));
    }
}

/// Whether the cursor stands in a comment or in free text.
fn is_in_text(cursor: &Cursor) -> bool {
    let at = cursor.at;
    cursor.line.tokens.iter().any(|token| match token.kind {
        TokenKind::Comment => token.span.start < at && at <= token.span.end,
        TokenKind::Text => token.span.touches(at),
        _ => false,
    })
}

/// The first word of the line up to the cursor, where the cursor still stands in it.
fn beginning(cursor: &Cursor) -> Option<Span> {
    let before = cursor.line.text.get(..cursor.at)?;
    let typed = before.trim_start();
    let start = before.len() - typed.len();
    let is_word = typed.chars().all(|letter| letter.is_alphabetic() || matches!(letter, ' ' | '.' | '-'));
    if !is_word || typed.starts_with(' ') {
        return None;
    }
    let first_number_or_name = cursor.line.tokens.iter().find(|token| {
        !matches!(token.kind, TokenKind::Keyword | TokenKind::Missing(_) | TokenKind::Bad | TokenKind::Property)
    });
    match first_number_or_name {
        // `made at ` is still the beginning; `used at 4` and `like Tid` are not.
        Some(token) if token.span.start < cursor.at => None,
        _ if typed.ends_with(' ') && !matches!(cursor.line.content, Content::Junk(_)) => None,
        _ => Some(cursor.absolute(Span::new(start, cursor.at))),
    }
}

/// The name that the cursor stands in, or right behind, blanks between included.
fn name_before(cursor: &Cursor, statement: &Statement) -> Option<Span> {
    let blank = |span: Span| cursor.text(span).chars().all(|letter| matches!(letter, ' ' | '\t'));
    names(statement, cursor.block.kind()).into_iter().map(|name| name.name.span).find(|span| {
        span.start <= cursor.at && (cursor.at <= span.end || blank(Span::new(span.end, cursor.at)))
    })
}

/// What stands between the quantity of the line and the cursor, where it begins with a digit: perhaps the name of a thing
/// that needs quotes.
fn begun_with_a_number(cursor: &Cursor, statement: &Statement) -> Option<Span> {
    let begin = match statement {
        Statement::Ingredient(line) | Statement::Or(line) => match line.amounts.given()? {
            Amounts::One(quantity) | Amounts::Range(_, quantity) => quantity.span.end,
            Amounts::Series(quantities) => quantities.last()?.span.end,
        },
        Statement::QuantumSatis(_) => cursor.line.tokens.first()?.span.end,
        _ => return None,
    };
    let between = cursor.line.text.get(begin..cursor.at)?;
    let typed = between.trim_start();
    let start = cursor.at - typed.len();
    (typed.starts_with(|letter: char| letter.is_ascii_digit()) && !typed.contains([',', '"'])).then_some(Span::new(start, cursor.at))
}

/// The gaps at the cursor or before it with blanks between, with what belongs there.
fn gaps<'a>(cursor: &'a Cursor) -> impl Iterator<Item = (Expected, Span)> + 'a {
    cursor.line.tokens.iter().filter_map(|token| match token.kind {
        TokenKind::Missing(expected) if is_near(cursor, token.span.start) => Some((expected, Span::empty(cursor.at))),
        _ => None,
    })
}

/// Whether only blanks stand between a place and the cursor.
fn is_near(cursor: &Cursor, place: usize) -> bool {
    let between = Span::new(place.min(cursor.at), place.max(cursor.at));
    cursor.text(between).chars().all(|letter| matches!(letter, ' ' | '\t'))
}

/// A part other than a name that the cursor stands in or right behind: what belongs there, and its characters.
fn begun(cursor: &Cursor) -> Option<(Expected, Span)> {
    let mut before: Option<Token> = None;
    for token in &cursor.line.tokens {
        if token.span.start < cursor.at && cursor.at <= token.span.end {
            let expected = match token.kind {
                TokenKind::Unit => Expected::Unit,
                TokenKind::Property => Expected::Property,
                TokenKind::Code => Expected::Code,
                TokenKind::Path => Expected::Path,
                TokenKind::Keyword if before.is_some_and(|before| before.kind == TokenKind::Separator) => Expected::Qualifier,
                TokenKind::Bad => match before.map(|before| before.kind) {
                    Some(TokenKind::Number) => Expected::Unit,
                    Some(TokenKind::Separator) => Expected::Qualifier,
                    Some(TokenKind::Keyword) => after_keyword(cursor, before?)?,
                    _ => return None,
                },
                _ => return None,
            };
            return Some((expected, token.span));
        }
        if !matches!(token.kind, TokenKind::Missing(_)) {
            before = Some(*token);
        }
    }
    None
}

/// What is begun behind a keyword and cannot be read yet.
fn after_keyword(cursor: &Cursor, keyword: Token) -> Option<Expected> {
    Some(match (cursor.text(keyword.span), cursor.statement()?) {
        ("expect", _) => Expected::Property,
        ("to", Statement::QuantumSatis(_) | Statement::Pair(_) | Statement::Ingredient(_)) => Expected::Target,
        ("accept", _) => Expected::Code,
        ("use", _) => Expected::Path,
        ("under", _) => Expected::Gas,
        _ => return None,
    })
}

/// Offers what belongs into a gap or a begun part.
fn part(items: &mut Items, cursor: &Cursor, statement: &Statement, expected: Expected, span: Span) {
    match expected {
        Expected::IngredientName | Expected::SolutionName | Expected::ConstituentName | Expected::LabName => {
            names::of_kind(items, cursor, expected, span);
        }
        Expected::NewName | Expected::Text | Expected::Number | Expected::Formula | Expected::Other => {}
        Expected::Quantity => {}
        Expected::Unit => parts::units(items, cursor, statement, span),
        Expected::To => parts::to(items, statement, span),
        Expected::Target => parts::targets(items, cursor, span),
        Expected::Property => parts::properties(items, span),
        Expected::Range => parts::ranges(items, cursor, statement, span),
        Expected::Temperature => parts::temperatures(items, cursor, span),
        Expected::Duration => {}
        Expected::Qualifier => parts::qualifiers(items, statement, span),
        Expected::Path => parts::paths(items, cursor, span),
        Expected::Code => parts::codes(items, cursor, span),
        Expected::Because => parts::word(items, "because", span),
        Expected::Gas => parts::gases(items, span),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::{applied, fixture};

    const STOCKS: &str = "//- stocks.prep\nsolution Salt stock\n    made at    25 °C\n    58.44 g    sodium chloride\n    q.s.       water to 1 L\n\nsolution \"10x salt\"\n    made at    25 °C\n    58.44 g    sodium chloride\n    q.s.       water to 1 L\nlab North bench\n    room       18 °C to 22 °C\n";

    /// The labels offered at the cursor, in order.
    fn labels(text: &str) -> Vec<String> {
        let fixture = fixture(&format!("{text}\n{STOCKS}"));
        completion(&fixture.snapshot, fixture.file, fixture.offset).items.into_iter().map(|item| item.label).collect()
    }

    /// The line of the cursor once the item of this label is inserted.
    fn inserted(text: &str, label: &str) -> String {
        let fixture = fixture(&format!("{text}\n{STOCKS}"));
        let line = fixture.text[..fixture.offset].matches('\n').count();
        let items = completion(&fixture.snapshot, fixture.file, fixture.offset).items;
        match items.iter().find(|item| item.label == label) {
            Some(item) => applied(&fixture.text, [(item.span, item.insert.clone())]).lines().nth(line).unwrap_or_default().to_owned(),
            None => panic!("no {label} among {:?}", items.iter().map(|item| &item.label).collect::<Vec<_>>()),
        }
    }

    fn begins(text: &str, expected: &[&str]) {
        let labels = labels(text);
        assert_eq!(labels.iter().take(expected.len()).collect::<Vec<_>>(), expected, "{text}");
    }

    #[test]
    fn a_line_begins_with_a_word_of_its_block() {
        begins("solution A\n    ‸", &["q.s.", "about", "all"]);
        begins("solution A\n    exp‸", &["expect"]);
        begins("substance A\n    for‸", &["formula", "form"]);
        begins("‸", &["solution", "bottle", "substance", "ion", "solid", "danger", "group", "lab", "use"]);
        begins("sol‸", &["solution", "solid"]);
        assert!(!labels("solution A\n    ‸").contains(&"pKa".to_owned()));
        assert_eq!(inserted("solution A\n    mad‸", "made at"), "    made at    ");
        assert_eq!(inserted("solution A\n    us‸", "used at"), "    used at    ");
    }

    #[test]
    fn names_follow_a_quantity() {
        begins("use \"stocks.prep\"\nsolution A\n    10 mL      Sal‸", &["Salt stock"]);
        begins("use \"stocks.prep\"\nsolution A\n    10 mL      ‸", &["10x salt", "Salt stock"]);
        assert_eq!(inserted("use \"stocks.prep\"\nsolution A\n    10 mL      10x‸", "10x salt"), "    10 mL      \"10x salt\"");
        assert!(labels("solution A\n    1 g        sodium chl‸").contains(&"sodium chloride".to_owned()));
        
        assert_eq!(inserted("solution A\n    1 g        potassium chl‸oride, purity 99 %", "potassium chloride"), "    1 g        potassium chloride, purity 99 %");
        // Found by its formula, written by its name.
        assert_eq!(inserted("solution A\n    1 g        NaCl‸", "sodium chloride"), "    1 g        sodium chloride");
    }

    #[test]
    fn buffers_that_suit_the_pH_come_first_after_a_concentration() {
        let recipe = |rest: &str| format!("solution A\n    made at    25 °C\n    50 mmol/L  ‸\n{rest}    q.s.       1 mol/L hydrochloric acid to pH 7.5\n    q.s.       water to 1 L\n");
        let fixture = fixture(&recipe(""));
        let items = completion(&fixture.snapshot, fixture.file, fixture.offset).items;
        let place = |label: &str| match items.iter().position(|item| item.label == label) {
            Some(place) => place,
            None => panic!("no {label} among {:?}", items.iter().map(|item| &item.label).collect::<Vec<_>>()),
        };
        assert!(place("HEPES") == 0 && place("Tris") > place("MOPS"), "{} {}", place("Tris"), place("MOPS"));
        let item = &items[place("HEPES")];
        assert!(item.detail.contains("pKa 7.4"), "{}", item.detail);
        assert!(item.documentation.contains("zwitterionic HEPES") && item.documentation.contains("per kelvin"), "{}", item.documentation);
        // With calcium in the solution, phosphate is named with what speaks against it.
        let calcium = described(&recipe("    2 mmol/L   calcium chloride dihydrate\n").replace('‸', "disodium hyd‸"), "disodium hydrogen phosphate");
        assert!(calcium.contains("calcium"), "{calcium}");
        // After a mass nothing is recommended.
        assert!(!described("solution A\n    5 g        ‸\n    q.s.       water to pH 7.5\n", "HEPES").contains("per kelvin"));
    }

    /// What is said of an item.
    fn described(text: &str, label: &str) -> String {
        let fixture = fixture(text);
        let items = completion(&fixture.snapshot, fixture.file, fixture.offset).items;
        items.iter().find(|item| item.label == label).map(|item| item.documentation.clone()).unwrap_or_default()
    }

    #[test]
    fn a_substance_is_described() {
        let fixture = fixture("solution A\n    1 g        sodium hydroxide‸\n");
        let items = completion(&fixture.snapshot, fixture.file, fixture.offset).items;
        let item = items.iter().find(|item| item.label == "sodium hydroxide").unwrap();
        assert_eq!(item.detail, "NaOH, 40.00 g/mol");
        assert!(item.documentation.contains("GHS") && item.documentation.contains("H314"), "{}", item.documentation);
    }

    #[test]
    fn units_follow_a_number() {
        let all = labels("solution A\n    50 ‸");
        assert!(["g", "mg", "mL", "mmol/L"].iter().all(|unit| all.contains(&unit.to_string())), "{all:?}");
        begins("solution A\n    50 mm‸", ["mmol/L", "mmol"].as_slice().get(..0).unwrap());
        assert!(labels("solution A\n    50 mm‸").contains(&"mmol/L".to_owned()));
        begins("solution A\n    made at    25 ‸", &["°C", "K"]);
        assert_eq!(inserted("solution A\n    50 mmo‸  Tris", "mmol/L"), "    50 mmol/L  Tris");
    }

    #[test]
    fn a_make_up_is_led_through() {
        begins("solution A\n    q.s.       water ‸", &["to", "or"]);
        assert!(labels("solution A\n    q.s.       water to ‸").starts_with(&["pH".to_owned(), "ionic strength".to_owned()]));
        assert!(labels("solution A\n    q.s.       water to ‸").contains(&"1 L".to_owned()));
        begins("solution A\n    q.s.       water to 1 ‸", ["L", "mL"].as_slice().get(..1).unwrap());
    }

    #[test]
    fn expectations_name_properties_and_constituents() {
        begins("solution A\n    expect     ‸", &["pH", "ionic strength", "buffer capacity"]);
        begins("solution A\n    expect     buf‸", &["buffer capacity"]);
        begins("solution A\n    made at    25 °C\n    1 g        sodium acetate\n    q.s.       water to 1 L\n    expect     total ‸", ["acetate", "sodium"].as_slice().get(..1).unwrap());
        assert!(labels("solution A\n    q.s.       water to 1 L\n    expect     pH ‸").contains(&"at least".to_owned()));
    }

    #[test]
    fn qualifiers_follow_a_comma() {
        let all = labels("solution A\n    1 g        sodium chloride, ‸");
        assert!(["purity", "from", "±"].iter().all(|word| all.contains(&word.to_string())), "{all:?}");
        begins("solution A\n    1 g        sodium chloride, pur‸", &["purity"]);
        begins("use \"stocks.prep\"\nsolution A\n    1 mmol/L   sodium chloride, from ‸", &["10x salt", "Salt stock"]);
    }

    #[test]
    fn paths_labs_and_codes_are_offered() {
        begins("use ‸", &["stocks.prep"]);
        assert_eq!(inserted("use \"sto‸\"", "stocks.prep"), "use \"stocks.prep\"");
        begins("use \"stocks.prep\"\nsolution A\n    in         ‸", &["North bench"]);
        begins("use \"stocks.prep\"\nsolution A\n    like       ‸", &["10x salt", "Salt stock"]);
        assert!(labels("solution A\n    accept     ‸").contains(&"temperature-shift".to_owned()));
        assert_eq!(inserted("solution A\n    accept     temp‸", "temperature-shift"), "    accept     temperature-shift ");
        begins("solution A\n    accept     temperature-shift ‸", &["because"]);
    }

    #[test]
    fn every_half_written_line_has_an_answer() {
        let line = "q.s. 1 mol/L hydrochloric acid or \"x y\" to pH 7.0 ± 0.1 at 4 °C, about 3 mL # so";
        for end in (0..=line.len()).filter(|end| line.is_char_boundary(*end)).step_by(3) {
            labels(&format!("solution A\n    {}‸", &line[..end]));
        }
    }

    #[test]
    fn free_text_and_comments_are_left_alone() {
        assert_eq!(labels("solution A\n    step       Filter thr‸"), [] as [&str; 0]);
        assert_eq!(labels("solution A # the sol‸"), [] as [&str; 0]);
    }
}
