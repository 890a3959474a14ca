//! Names, strengths before names, and paths.

use super::*;
use crate::syntax::scanner::is_space;

/// Characters that no unquoted name holds, for each could hide a quantity, a separator or a comment.
const NEVER_IN_A_NAME: [char; 13] = ['"', '“', '”', '„', '«', '»', '，', '；', '#', '=', '<', '>', ';'];

impl<'t> Builder<'t> {
    /// The name among a node's children, or the gap after `after`.
    pub(super) fn name_in(&mut self, node: &Node<'t>, after: usize, expected: Expected) -> Slot<Name> {
        match child(node, Rule::name) {
            Some(name) => self.name(&name),
            None => self.absent(after, expected),
        }
    }

    /// A name that refers to something.
    pub(super) fn name(&mut self, node: &Node<'t>) -> Slot<Name> {
        self.name_at(span(node), TokenKind::Name)
    }

    /// The name that covers `place`, quoted or not.
    pub(super) fn name_at(&mut self, place: Span, kind: TokenKind) -> Slot<Name> {
        let written = self.of(place);
        self.token(kind, place);
        if let Some(inside) = written.strip_prefix('"').and_then(|rest| rest.strip_suffix('"'))
            && written.len() >= 2
            && !inside.replace("\"\"", "").contains('"')
        {
            let text = inside.replace("\"\"", "\"");
            if text.trim().is_empty() {
                self.fault(place, FaultKind::BadName);
                return Slot::Bad(place);
            }
            return Slot::Given(Name { span: place, text, quoted: true });
        }
        match self.wrong_in_name(place) {
            None => Slot::Given(Name { span: place, text: written.to_owned(), quoted: false }),
            Some((at, readings)) => {
                self.fault_with(at, FaultKind::BadName, readings);
                Slot::Bad(place)
            }
        }
    }

    /// Which characters make an unquoted name unreadable, and what may have been meant.
    fn wrong_in_name(&self, place: Span) -> Option<(Span, Vec<Reading>)> {
        let written = self.of(place);
        let at = |offset: usize, length: usize| Span::new(place.start + offset, place.start + offset + length);
        if let Some(rest) = written.strip_prefix('"') {
            let closed = format!("\"{}\"", rest.trim_end());
            return Some((place, vec![reading(place, closed, "with the quote closed")]));
        }
        if let Some(inside) = curly_quoted(written) {
            return Some((place, vec![reading(place, format!("\"{inside}\""), "")]));
        }
        if let Some((offset, character)) = written.char_indices().find(|(_, letter)| NEVER_IN_A_NAME.contains(letter)) {
            let spot = at(offset, character.len_utf8());
            let mut readings = Vec::new();
            if matches!(character, ';' | '，' | '；') {
                let tail = written.get(offset + character.len_utf8()..).unwrap_or_default();
                readings.push(reading(spot, if tail.starts_with(is_space) { "," } else { ", " }, "a separator"));
            } else if character == '=' && offset == 0 {
                readings.push(reading(spot, "", "without the sign"));
            } else {
                readings.push(reading(place, quoted(written), "part of the name"));
            }
            return Some((spot, readings));
        }
        if let Some(offset) = slash_that_separates(written) {
            let spot = at(offset, 1);
            return Some((spot, vec![reading(spot, " / ", "two forms of a pair"), reading(place, quoted(written), "one name")]));
        }
        if let Some(last) = written.chars().last().filter(|letter| matches!(letter, '.' | ':' | ','))
            && written.len() > 1
        {
            let spot = at(written.len() - last.len_utf8(), last.len_utf8());
            return Some((spot, vec![reading(spot, "", "without it"), reading(place, quoted(written), "part of the name")]));
        }
        if !begins_a_name(written) {
            return Some((place, vec![reading(place, quoted(written), "")]));
        }
        None
    }

    /// The name that a header defines.
    pub(super) fn definition(&mut self, node: &Node<'t>) -> Slot<Name> {
        let place = span(node);
        let written = self.of(place);
        let built_in = " instead of the built-in";
        if let Some(name) = written.strip_suffix(built_in).filter(|name| !name.starts_with('"')) {
            // The words are a statement of their own.
            let words = Span::new(place.start + name.len() + 1, place.end);
            self.token(TokenKind::Bad, words);
            self.fault_with(words, FaultKind::Unexpected, vec![reading(words, "", "on a line of its own below")]);
            return self.name_at(Span::new(place.start, words.start - 1), TokenKind::Definition);
        }
        let is_quoted = written.len() >= 2 && written.starts_with('"') && written.ends_with('"');
        if !is_quoted && ends_before_its_end(written) {
            self.token(TokenKind::Definition, place);
            self.fault_with(place, FaultKind::BadName, vec![reading(place, quoted(written), "")]);
            return Slot::Bad(place);
        }
        self.name_at(place, TokenKind::Definition)
    }

    /// Strength and name of a thing. `after` is where the name would stand if nothing is written.
    pub(super) fn thing(&mut self, node: &Node<'t>, after: usize) -> (Option<Slot<Strength>>, Slot<Name>) {
        let name = child(node, Rule::name);
        let Some(strength) = child(node, Rule::strength) else {
            let name = match name {
                Some(name) => self.name(&name),
                None => self.absent(after, Expected::IngredientName),
            };
            return (None, name);
        };
        if let Some(ratio) = child(&strength, Rule::ratio) {
            let ratio = self.ratio(&ratio);
            let name = match name {
                Some(name) => self.name(&name),
                None => self.absent(span(node).end, Expected::IngredientName),
            };
            return (Some(ratio), name);
        }
        let place = span(&strength);
        let end = name.as_ref().map_or(place.end, |name| span(name).end);
        match self.strength(&strength, Span::new(place.start, end)) {
            // The unit was a word of the name, so the name begins with it.
            StrengthOrName::NameBegins(start) => {
                let name = self.name_at(Span::new(start, end), TokenKind::Name);
                (Some(Slot::Bad(Span::new(place.start, start))), name)
            }
            StrengthOrName::Strength(slot) => {
                let name = match name {
                    Some(name) => self.name(&name),
                    None => self.absent(span(node).end, Expected::IngredientName),
                };
                (Some(slot), name)
            }
        }
    }

    fn ratio(&mut self, node: &Node<'t>) -> Slot<Strength> {
        let mut parts = Vec::new();
        for number in children(node, Rule::number) {
            parts.push(self.number(&number, false));
        }
        match parts.as_slice() {
            [Some(of_it), Some(of_water)] => {
                Slot::Given(Strength::Ratio { span: span(node), of_it: *of_it, of_water: *of_water })
            }
            _ => Slot::Bad(span(node)),
        }
    }

    /// `"stocks.prep"`.
    pub(super) fn path(&mut self, node: &Node<'t>) -> Slot<Text> {
        let place = span(node);
        self.token(TokenKind::Path, place);
        let inside = self.of(place).trim_matches('"');
        if inside.trim().is_empty() {
            self.fault(place, FaultKind::Missing(Expected::Path));
            return Slot::Bad(place);
        }
        Slot::Given(Text { span: place, text: inside.to_owned() })
    }
}

/// What a number before a name turned out to be.
pub(super) enum StrengthOrName {
    /// A strength, readable or not.
    Strength(Slot<Strength>),
    /// A number that does not belong there; the name begins at this offset.
    NameBegins(usize),
}

/// A name in double quotes, its own quotes doubled.
pub(in crate::syntax) fn quoted(name: &str) -> String {
    format!("\"{}\"", name.replace('"', "\"\""))
}

fn curly_quoted(written: &str) -> Option<&str> {
    written.strip_prefix(['“', '„', '«', '”'])?.strip_suffix(['”', '“', '»'])
}

/// Whether a name can be written without quotes wherever a name stands.
pub(in crate::syntax) fn can_stand_bare(name: &str) -> bool {
    !ends_before_its_end(name)
        && begins_a_name(name)
        && !name.contains(NEVER_IN_A_NAME)
        && !name.contains(['\n', '\r'])
        && !name.ends_with(['.', ':', ','])
        && !name.ends_with(is_space)
        && slash_that_separates(name).is_none()
}

/// A slash that has white space on one side only: `Tris /Tris hydrochloride`.
fn slash_that_separates(written: &str) -> Option<usize> {
    written.match_indices('/').map(|(at, _)| at).find(|at| {
        let before = written.get(..*at).unwrap_or_default().ends_with(is_space);
        let after = written.get(*at + 1..).unwrap_or_default().starts_with(is_space);
        before != after
    })
}

/// Whether an unquoted name may begin so: with a letter, a bracket or a locant.
pub(in crate::syntax) fn begins_a_name(written: &str) -> bool {
    let Some(first) = written.chars().next() else { return false };
    if first.is_ascii_digit() {
        return begins_with_locant(written);
    }
    first.is_alphabetic() || matches!(first, '(' | '[' | '{')
}

/// Digits joined by `-`, `'`, `′`, `(`, a comma and a digit, a Greek letter, or `H-` to what follows.
fn begins_with_locant(written: &str) -> bool {
    let word = written.split(is_space).next().unwrap_or_default();
    if word.chars().all(|letter| letter.is_ascii_digit() || matches!(letter, ',' | '.' | ':' | '-' | '–' | '−' | '\'' | '’')) {
        return false;
    }
    let rest = word.trim_start_matches(|letter: char| letter.is_ascii_digit());
    let mut letters = rest.chars();
    match (letters.next(), letters.next()) {
        (Some('-' | '‐' | '‑' | '\'' | '′' | '’' | '('), _) => true,
        (Some(','), Some(digit)) => digit.is_ascii_digit(),
        (Some('H'), Some('-')) => true,
        (Some('μ'), Some('M' | 'm' | 'g' | 'L' | 'l')) => false,
        (Some('α'..='ω'), _) => true,
        _ => false,
    }
}

/// Whether a line that refers to this name would end it too early, or take it for something else, unless it is quoted.
pub(in crate::syntax) fn ends_before_its_end(written: &str) -> bool {
    let words: Vec<&str> = written.split(is_space).filter(|word| !word.is_empty()).collect();
    let separated = words.iter().any(|word| matches!(*word, "to" | "or" | "/") || word.ends_with(','));
    let tolerance = ["±", "+/-", "+-"].iter().any(|sign| {
        written.match_indices(sign).any(|(at, _)| {
            let rest = written.get(at + sign.len()..).unwrap_or_default();
            rest.trim_start_matches(is_space).starts_with(|digit: char| digit.is_ascii_digit())
        })
    });
    separated || tolerance || !begins_a_name(written) && !written.starts_with('"') && curly_quoted(written).is_none()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_begin_with_letters_brackets_and_locants() {
        for name in [
            "sodium chloride", "(NH4)2SO4", "[Fe]", "2-(N-morpholino)", "1,10-phenanthroline", "5'-AMP", "5′-AMP", "5α-cholestane",
            "1H-benzotriazole", "2',3'-dideoxyadenosine", "18-crown-6", "2,4-D", "β-alanine", "(±)-lipoic acid",
        ] {
            assert!(begins_a_name(name), "{name}");
            assert!(!ends_before_its_end(name), "{name}");
        }
        for other in ["10x PBS", "0.5 M EDTA", "1 M NaOH", "5 g", "1,5 mol/L", "5μM", "/x", "%", "-x", "1:10"] {
            assert!(!begins_a_name(other), "{other}");
        }
        for name in ["A to B", "A / B", "A or B", "Foo, bar", "x ± 1"] {
            assert!(ends_before_its_end(name), "{name}");
        }
    }
}
