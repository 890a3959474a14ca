//! When two names are the same.

use std::fmt;

use caseless::Caseless;
use unicode_normalization::UnicodeNormalization;

/// A name reduced to what is compared: NFKC, default case folding, one space for runs, one dash, one prime, one raised
/// dot. Superscripts keep their height, so `Ca²⁺` is not `Ca2+`.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct NameKey(String);

impl NameKey {
    /// The key of a name as written.
    pub fn new(name: &str) -> Self {
        let mut key = String::with_capacity(name.len());
        let mut space_is_due = false;
        let mut push = |character: char| {
            if character.is_whitespace() {
                space_is_due = true;
                return;
            }
            if space_is_due && !key.is_empty() {
                key.push(' ');
            }
            space_is_due = false;
            key.push(character);
        };
        for character in name.chars() {
            match character {
                '⁰' | '¹' | '²' | '³' | '⁴'..='⁹' | '⁺' | '⁻' => push(character),
                '‐' | '‑' | '‒' | '–' | '—' | '−' => push('-'),
                '′' | '’' | '‘' | 'ʹ' => push('\''),
                '•' | '∙' | '⋅' | '・' => push('·'),
                // ASCII names are nearly all there are; they need no tables.
                _ if character.is_ascii() => push(character.to_ascii_lowercase()),
                _ => character.to_string().nfkc().default_case_fold().for_each(&mut push),
            }
        }
        NameKey(key)
    }

    /// The key as text.
    pub fn as_str(&self) -> &str {
        &self.0
    }
}

impl fmt::Display for NameKey {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.0)
    }
}

#[cfg(test)]
mod tests {
    use super::NameKey;

    fn same(one: &str, other: &str) -> bool {
        NameKey::new(one) == NameKey::new(other)
    }

    #[test]
    fn spelling_that_does_not_matter_is_folded() {
        assert!(same("sodium  chloride", "Sodium\u{a0}Chloride"));
        assert!(same("2-mercaptoethanol", "2\u{2011}mercaptoethanol"));
        assert!(same("5'-AMP", "5′-AMP"));
        assert!(same("NaH2PO4·2H2O", "NaH2PO4•2H2O"));
    }

    #[test]
    fn what_matters_is_kept() {
        assert!(!same("Ca²⁺", "Ca2+"));
        assert!(!same("NaCl", "N\u{430}Cl"));
        assert!(!same("sodium chloride", "sodiumchloride"));
    }
}
