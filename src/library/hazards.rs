//! The wording of the GHS hazard statements by code.

/// Code and wording, one a line; comments begin with `#`.
const STATEMENTS: &str = include_str!("data/hazard-statements.txt");

/// The wording of a hazard statement; none for a code that the table does not know.
pub fn hazard_statement(code: &str) -> Option<&'static str> {
    STATEMENTS
        .lines()
        .filter(|line| !line.starts_with('#'))
        .filter_map(|line| line.split_once(' '))
        .find(|(known, _)| *known == code)
        .map(|(_, wording)| wording)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::library::built_in;
    use crate::model::Body;

    #[test]
    fn every_code_that_the_library_uses_has_its_wording() {
        for file in &built_in().files {
            for block in &file.model.blocks {
                let Body::Substance(substance) = &block.body else { continue };
                for code in &substance.hazards {
                    let name = block.name.as_ref().map_or("", |name| name.text.as_str());
                    assert!(hazard_statement(code).is_some(), "{name}: {code}");
                }
            }
        }
    }

    #[test]
    fn every_substance_has_hazards_or_was_judged_to_need_none() {
        let judged: std::collections::BTreeSet<&str> =
            include_str!("data/not-classified.txt").lines().filter(|line| !line.starts_with('#')).collect();
        let mut known = std::collections::BTreeSet::new();
        for file in &built_in().files {
            for block in &file.model.blocks {
                let (Body::Substance(substance), Some(name)) = (&block.body, &block.name) else { continue };
                known.insert(name.text.as_str());
                assert_eq!(substance.hazards.is_empty(), judged.contains(name.text.as_str()), "{}", name.text);
            }
        }
        assert!(judged.is_subset(&known), "{:?}", judged.difference(&known).collect::<Vec<_>>());
    }

    #[test]
    fn wordings_are_sentences_and_codes_stand_once() {
        let mut codes = std::collections::BTreeSet::new();
        for line in STATEMENTS.lines().filter(|line| !line.starts_with('#')) {
            let (code, wording) = line.split_once(' ').unwrap();
            assert!(wording.ends_with('.'), "{line}");
            assert!(codes.insert(code), "{code} twice");
        }
        assert_eq!(hazard_statement("H314"), Some("Causes severe skin burns and eye damage."));
        assert_eq!(hazard_statement("H999"), None);
    }
}
