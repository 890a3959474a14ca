//! Characters that can make a reviewer read another amount: those that cannot be seen, and letters of other alphabets
//! that look like Latin ones.

/// Whether a character leaves no mark, or turns the direction of writing, without being white space of the language.
pub(super) fn is_invisible(character: char) -> bool {
    match character {
        '\t' | '\n' | '\r' => false,
        '\u{85}' | '\u{AD}' | '\u{34F}' | '\u{61C}' | '\u{115F}' | '\u{1160}' | '\u{17B4}' | '\u{17B5}' | '\u{3164}'
        | '\u{FFA0}' | '\u{FEFF}' => true,
        '\u{180B}'..='\u{180F}' | '\u{200B}'..='\u{200F}' | '\u{2028}'..='\u{202E}' | '\u{2060}'..='\u{206F}' => true,
        '\u{FE00}'..='\u{FE0F}' | '\u{FFF9}'..='\u{FFFB}' | '\u{E0000}'..='\u{E0FFF}' => true,
        _ => character.is_control(),
    }
}

/// The Latin letter that a Cyrillic or Greek letter looks like. Greek letters that locants use (α, β, Δ …) look like none.
pub(super) fn looks_like(character: char) -> Option<char> {
    let latin = match character {
        'А' | 'Α' => 'A',
        'В' | 'Β' => 'B',
        'С' => 'C',
        'Е' | 'Ε' => 'E',
        'Ζ' => 'Z',
        'Н' | 'Η' => 'H',
        'І' | 'Ι' => 'I',
        'Ј' => 'J',
        'К' | 'Κ' => 'K',
        'М' | 'Μ' => 'M',
        'Ν' => 'N',
        'О' | 'Ο' => 'O',
        'Р' | 'Ρ' => 'P',
        'Ѕ' => 'S',
        'Т' | 'Τ' => 'T',
        'У' | 'Υ' => 'Y',
        'Х' | 'Χ' => 'X',
        'а' => 'a',
        'с' => 'c',
        'ԁ' => 'd',
        'е' => 'e',
        'һ' => 'h',
        'і' => 'i',
        'ј' => 'j',
        'ӏ' => 'l',
        'о' | 'ο' => 'o',
        'р' => 'p',
        'ԛ' => 'q',
        'ѕ' => 's',
        'у' => 'y',
        'ѵ' => 'v',
        'ԝ' => 'w',
        'х' => 'x',
        _ => return None,
    };
    Some(latin)
}

/// The text with look-alike letters made Latin and invisible characters taken out.
pub(super) fn plain_letters(text: &str) -> String {
    text.chars().filter(|letter| !is_invisible(*letter)).map(|letter| looks_like(letter).unwrap_or(letter)).collect()
}

/// The offsets and letters of a word's look-alikes that deceive: those beside Latin letters or digits, and all of a word
/// that holds nothing else. A word of another language that could not be read as Latin deceives nobody.
pub(super) fn deceptive_letters(word: &str) -> Vec<(usize, char, char)> {
    let mixed = word.chars().any(|letter| letter.is_ascii_alphanumeric());
    let all_alike = word.chars().filter(|letter| letter.is_alphabetic()).all(|letter| looks_like(letter).is_some());
    if !mixed && !all_alike {
        return Vec::new();
    }
    word.char_indices().filter_map(|(at, letter)| Some((at, letter, looks_like(letter)?))).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn letters_that_deceive_are_found_and_greek_locants_left_alone() {
        assert_eq!(deceptive_letters("КCl"), [(0, 'К', 'K')]);
        assert_eq!(deceptive_letters("mМ"), [(1, 'М', 'M')]);
        assert_eq!(deceptive_letters("КОН").len(), 3);
        for honest in ["β-alanine", "5α-cholestane", "µM", "μM", "Δ", "вода", "Ω-3"] {
            assert!(deceptive_letters(honest).is_empty(), "{honest}");
        }
    }

    #[test]
    fn white_space_is_no_invisible_character() {
        for space in [' ', '\t', '\u{A0}', '\u{2009}', '\u{202F}', '\u{3000}', '\n', '\r'] {
            assert!(!is_invisible(space));
        }
        for hidden in ['\u{200B}', '\u{202E}', '\u{AD}', '\u{FEFF}', '\u{2028}', '\u{85}', '\u{B}', '\u{C}'] {
            assert!(is_invisible(hidden));
        }
    }
}
