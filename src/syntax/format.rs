//! The formatter: statements at column 5, what follows at column 16, single spaces between. It keeps the order of lines,
//! comments and line ends, and never changes a digit, a unit, a name or a word.

use super::build::{FIRST_WORDS, MORE_FIRST_WORDS};
use super::scanner::is_space;
use super::tree::*;
use super::parse;

/// Where statements begin, in columns from zero.
const STATEMENT: usize = 4;
/// Where what follows begins, in columns from zero.
const FOLLOWING: usize = 15;

/// The text with every line laid out.
pub fn format(text: &str) -> String {
    format_tree(&parse(text))
}

/// The text of a tree with every line laid out.
pub fn format_tree(tree: &Tree) -> String {
    tree.lines.iter().map(|placed| format_line(&placed.line)).collect()
}

/// One logical line laid out. What the author wrote in one row stays in one row, and a row that was continued stays so.
pub fn format_line(line: &Line) -> String {
    match &line.content {
        // Whether a junk line is indented decides whether it opens a block, so it stays as it is.
        Content::Junk(_) => line.text.clone(),
        Content::Blank => without_trailing_spaces(&line.text),
        Content::Statement(statement) => {
            let indent = match statement {
                Statement::Header(_) | Statement::Use(_) | Statement::Language(_) => 0,
                _ => STATEMENT,
            };
            if cannot_be_laid_out(line) {
                return indented(&line.text, indent);
            }
            lay_out(line, statement, indent)
        }
    }
}

/// Lines with something unreadable keep their white space: what stands between words may be what was meant.
fn cannot_be_laid_out(line: &Line) -> bool {
    let mut at = 0;
    let mut hidden = false;
    for token in line.tokens.iter().filter(|token| !token.span.is_empty()) {
        hidden |= !is_white(line.text.get(at..token.span.start).unwrap_or("?"));
        at = token.span.end;
    }
    hidden
        || !is_white(line.text.get(at..).unwrap_or("?"))
        || line.tokens.iter().any(|token| token.kind == TokenKind::Bad)
        || line.faults.iter().any(|fault| {
            let harmless = matches!(
                fault.kind,
                FaultKind::WrittenForm
                    | FaultKind::Missing(_)
                    | FaultKind::OutOfBounds(_)
                    | FaultKind::RangeDoesNotRise
                    | FaultKind::MisplacedQualifier
                    | FaultKind::LookAlikeLetter { .. }
            );
            !harmless
        })
}

fn is_white(gap: &str) -> bool {
    gap.chars().all(|letter| is_space(letter) || matches!(letter, '\n' | '\r'))
}

fn indented(text: &str, indent: usize) -> String {
    let mark = if text.starts_with('\u{FEFF}') { "\u{FEFF}" } else { "" };
    let rest = text.get(mark.len()..).unwrap_or_default().trim_start_matches(is_space);
    format!("{mark}{}{rest}", " ".repeat(indent))
}

fn without_trailing_spaces(text: &str) -> String {
    let content = text.trim_end_matches(['\n', '\r']);
    let ending = text.get(content.len()..).unwrap_or_default();
    format!("{}{ending}", content.trim_end_matches(is_space))
}

fn line_break(text: &str) -> Option<&str> {
    let at = text.find(['\n', '\r'])?;
    text.get(at..).map(|rest| if rest.starts_with("\r\n") { "\r\n" } else { rest.get(..1).unwrap_or("\n") })
}

/// The tokens of a line with white space between them.
fn lay_out(line: &Line, statement: &Statement, indent: usize) -> String {
    let tokens: Vec<Token> = line.tokens.iter().filter(|token| !token.span.is_empty()).copied().collect();
    let entry_end = entry_end(line, statement, &tokens);
    let mut written = " ".repeat(indent);
    let mut previous: Option<Token> = None;
    for token in tokens {
        let Some(before) = previous else {
            written.push_str(token.span.of(&line.text));
            previous = Some(token);
            continue;
        };
        let gap = line.text.get(before.span.end..token.span.start).unwrap_or_default();
        if let Some(ending) = line_break(gap) {
            written.push_str(ending);
            written.push_str(&" ".repeat(FOLLOWING));
        } else if token.kind == TokenKind::Comment {
            written.push_str(gap);
        } else if before.span.end == entry_end && indent == STATEMENT {
            let column = written.chars().count();
            written.push_str(&" ".repeat(FOLLOWING.saturating_sub(column).max(1)));
        } else {
            written.push_str(between(before, token, gap, &line.text));
        }
        written.push_str(token.span.of(&line.text));
        previous = Some(token);
    }
    let end = previous.map_or(0, |last| last.span.end);
    let rest = line.text.get(end..).unwrap_or_default();
    written.push_str(rest.trim_start_matches(is_space));
    written
}

/// The white space between two tokens of a row.
fn between<'t>(before: Token, after: Token, gap: &'t str, text: &str) -> &'t str {
    use TokenKind::{Number, Operator, Property, Separator, Unit};
    let is_plus_minus = |token: Token| token.kind == Operator && matches!(token.span.of(text), "±" | "+/-" | "+-");
    if after.kind == Separator {
        return "";
    }
    if gap.is_empty() {
        let apart = before.kind == Separator
            || is_plus_minus(before)
            || is_plus_minus(after)
            || (before.kind == Property && after.kind == Number)
            || (before.kind == Number && after.kind == Unit && !is_fold(after.span.of(text)));
        return if apart { " " } else { "" };
    }
    // A no-break space and its kin are good typography between a number and its unit.
    let special = gap.char_indices().find(|(_, space)| !matches!(space, ' ' | '\t'));
    match special {
        Some((at, space)) => gap.get(at..at + space.len_utf8()).unwrap_or(" "),
        None => " ",
    }
}

fn is_fold(unit: &str) -> bool {
    matches!(unit.trim(), "x" | "×" | "X" | "-fold" | "fold")
}

/// Where the part ends that stands at column 5: the statement's words, or the quantity of an ingredient line.
fn entry_end(line: &Line, statement: &Statement, tokens: &[Token]) -> usize {
    let start = match statement {
        Statement::Ingredient(ingredient) => thing_start(&ingredient.strength, &ingredient.name),
        Statement::Pair(pair) => thing_start(&pair.first_strength, &pair.first),
        _ => return words_end(line, tokens),
    };
    let before = tokens.iter().rev().skip_while(|token| start.is_none_or(|start| token.span.start >= start));
    let is_of = |token: &&Token| token.kind == TokenKind::Keyword && token.span.of(&line.text) == "of";
    before.skip_while(is_of).map(|token| token.span.end).next().unwrap_or(0)
}

fn thing_start(strength: &Option<Slot<Strength>>, name: &Slot<Name>) -> Option<usize> {
    let strength = match strength {
        Some(Slot::Given(Strength::Quantity(quantity))) => Some(quantity.span.start),
        Some(Slot::Given(Strength::Ratio { span, .. })) => Some(span.start),
        _ => None,
    };
    strength.or(name.given().map(|name| name.span.start))
}

/// Where the words of a statement end.
fn words_end(line: &Line, tokens: &[Token]) -> usize {
    let spoken = || tokens.iter().map(|token| token.span.of(&line.text));
    let said = |words: &str| {
        let count = words.split(' ').count();
        let all = tokens.len() >= count && words.split(' ').zip(spoken()).all(|(word, written)| word.eq_ignore_ascii_case(written));
        all.then_some(count)
    };
    let known = FIRST_WORDS.iter().chain(&MORE_FIRST_WORDS).filter(|words| words.contains(' '));
    let count = known.filter_map(|words| said(words)).max().unwrap_or(1);
    tokens.get(count - 1).map_or(0, |token| token.span.end)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn statements_at_column_5_and_what_follows_at_16() {
        assert_eq!(
            format("Solution  A\nmade at 22°C\n3.12   g sodium chloride , ±0.01 g\n\tq.s. water to pH7.4±0.05   # ok\n"),
            "Solution A\n    made at    22 °C\n    3.12 g     sodium chloride, ± 0.01 g\n    q.s.       water to pH 7.4 ± 0.05   # ok\n"
        );
    }

    #[test]
    fn a_longer_entry_moves_only_its_own_line() {
        assert_eq!(format("about 800 mL water\n"), "    about 800 mL water\n");
        assert_eq!(format("molar conductivity 50 S·cm²/mol\n"), "    molar conductivity 50 S·cm²/mol\n");
        assert_eq!(format("100 mmol/L Tris"), "    100 mmol/L Tris");
        assert_eq!(format("10 mL of 1 mol/L sodium hydroxide"), "    10 mL      of 1 mol/L sodium hydroxide");
    }

    #[test]
    fn keeps_names_texts_comments_line_ends_and_typography() {
        for text in [
            "# a  comment\r\n\r\nsolution Foo   bar\r\n    step       Stir,  then   filter.\r\n",
            "    9 g        \"a,  b\"            # as  found\n",
            "    9\u{A0}g        sodium chloride\n",
            "\u{FEFF}solution A\n",
            "    1x         PBS\n",
            "    pKa        3404.71/T - 14.8435 + 0.032786 T ± 0.003\n",
            "junk   stays\n",
        ] {
            assert_eq!(format(text), text);
        }
    }

    #[test]
    fn lines_that_cannot_be_read_are_only_indented() {
        assert_eq!(format("5  ppm   lead\n"), "    5  ppm   lead\n");
    }

    #[test]
    fn continued_lines_stand_below_what_they_continue() {
        assert_eq!(
            format("9 g sodium chloride # a\n,purity 99 %\r\n  ,  lot 7\n"),
            "    9 g        sodium chloride # a\n               , purity 99 %\r\n               , lot 7\n"
        );
    }

    #[test]
    fn a_long_list_stays_as_its_author_broke_it() {
        let list = format!("    flask      {}\r\n", ["100 mL ± 0.10 mL"; 7].join(", "));
        assert_eq!(format(&list), list);
        let broken = format!("    flask      {}\r\n", ["100 mL ± 0.10 mL"; 7].join("\r\n               , "));
        assert_eq!(format(&broken), broken);
    }
}
