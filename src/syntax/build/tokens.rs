//! What the statement's own parts left uncovered: keywords, separators, comments; and the check of characters.

use super::*;
use crate::syntax::characters::{deceptive_letters, is_invisible};

/// Words whose written form has capitals.
const CAPITALS: [&str; 8] = ["pH", "CAS", "pKa", "K", "Ksp", "KH", "A", "T"];

impl Builder<'_> {
    /// Covers what no token covers yet, and asks for the written form of every keyword in another letter case.
    pub(super) fn fill_tokens(&mut self) {
        self.drop_covered_tokens();
        let mut found = Vec::new();
        let mut at = 0;
        for token in &self.tokens {
            if token.span.start > at {
                split(self.text, at, token.span.start, &mut found);
            }
            at = at.max(token.span.end);
        }
        split(self.text, at, self.text.len(), &mut found);
        for token in &found {
            if token.kind == TokenKind::Keyword {
                self.written_form(token.span);
            }
        }
        self.tokens.extend(found);
        self.tokens.sort_by_key(|token| (token.span.start, token.span.end));
    }

    /// Where unreadable text was found to hold readable parts, the larger token speaks for them.
    fn drop_covered_tokens(&mut self) {
        self.tokens.sort_by_key(|token| (token.span.start, std::cmp::Reverse(token.span.end)));
        let mut end = 0;
        self.tokens.retain(|token| {
            let stays = token.span.is_empty() || token.span.start >= end;
            end = if stays { end.max(token.span.end) } else { end };
            stays
        });
        self.tokens.sort_by_key(|token| (token.span.start, token.span.end));
    }

    /// Asks for the written form of a keyword.
    pub(super) fn written_form(&mut self, place: Span) {
        let word = self.of(place);
        let plain = |word: &str| word.bytes().all(|letter| letter.is_ascii_lowercase()) && !matches!(word, "standardize");
        let is_written = CAPITALS.contains(&word) || plain(word) && !CAPITALS.iter().any(|capital| capital.eq_ignore_ascii_case(word));
        if is_written || word.contains(is_invisible) {
            return;
        }
        let lower = word.to_lowercase();
        let written = match lower.as_str() {
            "standardize" => "standardise",
            _ => CAPITALS.iter().find(|capital| capital.to_lowercase() == lower).copied().unwrap_or(&lower),
        };
        if word != written {
            self.fault_with(place, FaultKind::WrittenForm, vec![reading(place, written, "")]);
        }
    }

    /// Reports invisible characters everywhere but in comments, and look-alike letters everywhere but in free text.
    pub(super) fn check_characters(&mut self, first: bool) {
        if self.text.is_ascii() {
            self.check_controls();
            return;
        }
        let comments = self.comment_spans();
        let free_text: Vec<Span> = self
            .tokens
            .iter()
            .filter(|token| token.kind == TokenKind::Text)
            .map(|token| token.span)
            .collect();
        let within = |places: &[Span], at: usize| places.iter().any(|place| place.start <= at && at < place.end);
        let mut faults = Vec::new();
        for (at, character) in self.text.char_indices() {
            let is_mark = first && at == 0 && character == '\u{FEFF}';
            if is_invisible(character) && !is_mark && !within(&comments, at) {
                let place = Span::new(at, at + character.len_utf8());
                faults.push((place, FaultKind::InvisibleCharacter(character), String::new()));
            }
        }
        let mut start = 0;
        for word in self.text.split_inclusive(|letter: char| is_space(letter) || matches!(letter, '\n' | '\r')) {
            for (offset, found, looks_like) in deceptive_letters(word) {
                let at = start + offset;
                if !within(&comments, at) && !within(&free_text, at) {
                    let place = Span::new(at, at + found.len_utf8());
                    faults.push((place, FaultKind::LookAlikeLetter { found, looks_like }, looks_like.to_string()));
                }
            }
            start += word.len();
        }
        for (place, kind, text) in faults {
            self.fault_with(place, kind, vec![reading(place, text, "")]);
        }
    }

    fn check_controls(&mut self) {
        let comments = self.comment_spans();
        for (at, character) in self.text.char_indices().filter(|(_, character)| is_invisible(*character)) {
            if !comments.iter().any(|place| place.start <= at && at < place.end) {
                let place = Span::new(at, at + 1);
                self.fault_with(place, FaultKind::InvisibleCharacter(character), vec![reading(place, "", "")]);
            }
        }
    }

    /// Comments, also those that no token covers yet.
    fn comment_spans(&self) -> Vec<Span> {
        let mut gaps = Vec::new();
        let mut tokens: Vec<Span> = self.tokens.iter().map(|token| token.span).collect();
        tokens.sort();
        let mut at = 0;
        for token in tokens {
            if token.start > at {
                split(self.text, at, token.start, &mut gaps);
            }
            at = at.max(token.end);
        }
        split(self.text, at, self.text.len(), &mut gaps);
        gaps.iter()
            .chain(&self.tokens)
            .filter(|token| token.kind == TokenKind::Comment)
            .map(|token| token.span)
            .collect()
    }
}

/// Cuts uncovered text into keywords, operators, separators and comments.
fn split(text: &str, from: usize, to: usize, found: &mut Vec<Token>) {
    let mut at = from;
    while at < to {
        let rest = text.get(at..to).unwrap_or_default();
        let Some(character) = rest.chars().next() else { return };
        let length = if is_space(character) || matches!(character, '\n' | '\r' | '\u{FEFF}') {
            at += character.len_utf8();
            continue;
        } else if character == '#' {
            rest.find(['\n', '\r']).unwrap_or(rest.len())
        } else if let Some(sign) = ["+/-", "+-"].iter().find(|sign| rest.starts_with(**sign)) {
            sign.len()
        } else if matches!(character, ',' | '±' | '/' | '+' | '(' | ')' | '·' | '*' | '-' | '−') {
            character.len_utf8()
        } else {
            rest.find(|letter: char| is_space(letter) || matches!(letter, '\n' | '\r' | ',' | '±' | '/'))
                .unwrap_or(rest.len())
                .max(character.len_utf8())
        };
        let kind = match character {
            '#' => TokenKind::Comment,
            ',' => TokenKind::Separator,
            '±' | '/' | '+' | '(' | ')' | '·' | '*' | '-' | '−' => TokenKind::Operator,
            _ => TokenKind::Keyword,
        };
        found.push(Token { kind, span: Span::new(at, at + length) });
        at += length;
    }
}
