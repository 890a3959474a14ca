//! The colours that were sent last of each text, so that after a change only the difference is sent.

use std::collections::HashMap;
use std::sync::{Mutex, PoisonError};

use tower_lsp::lsp_types::{SemanticToken, SemanticTokens, SemanticTokensDelta, SemanticTokensEdit, SemanticTokensFullDeltaResult, Url};

/// How many numbers of the protocol tell one token.
const NUMBERS: u32 = 5;

/// What was sent last, by address.
#[derive(Debug, Default)]
pub struct TokenMemory {
    last: Mutex<HashMap<Url, (u64, Vec<SemanticToken>)>>,
}

impl TokenMemory {
    /// All tokens of a text, under a name by which they can be spoken of later.
    pub fn whole(&self, uri: &Url, data: Vec<SemanticToken>) -> SemanticTokens {
        let (id, _) = self.replace(uri, data.clone());
        SemanticTokens { result_id: Some(id.to_string()), data }
    }

    /// The difference from the tokens that the client has, where these are the ones sent last; else all.
    pub fn difference(&self, uri: &Url, known: &str, data: Vec<SemanticToken>) -> SemanticTokensFullDeltaResult {
        let (id, before) = self.replace(uri, data.clone());
        let result_id = Some(id.to_string());
        match before {
            Some((last, before)) if last.to_string() == known => {
                let edits = edit(&before, &data).into_iter().collect();
                SemanticTokensFullDeltaResult::TokensDelta(SemanticTokensDelta { result_id, edits })
            }
            _ => SemanticTokensFullDeltaResult::Tokens(SemanticTokens { result_id, data }),
        }
    }

    /// Forgets a text that was closed.
    pub fn forget(&self, uri: &Url) {
        self.last.lock().unwrap_or_else(PoisonError::into_inner).remove(uri);
    }

    fn replace(&self, uri: &Url, data: Vec<SemanticToken>) -> (u64, Option<(u64, Vec<SemanticToken>)>) {
        let mut last = self.last.lock().unwrap_or_else(PoisonError::into_inner);
        let id = last.get(uri).map_or(1, |(id, _)| id + 1);
        (id, last.insert(uri.clone(), (id, data)))
    }
}

/// The one run of tokens that is other. Tokens are told by their distance from the one before, so those behind it stay.
fn edit(before: &[SemanticToken], now: &[SemanticToken]) -> Option<SemanticTokensEdit> {
    let same = |(one, other): &(&SemanticToken, &SemanticToken)| one == other;
    let begin = before.iter().zip(now).take_while(same).count();
    let (old, new) = (before.get(begin..)?, now.get(begin..)?);
    let end = old.iter().rev().zip(new.iter().rev()).take_while(same).count();
    let data = new.get(..new.len() - end)?;
    let gone = old.len() - end;
    if gone == 0 && data.is_empty() {
        return None;
    }
    let numbers = |tokens: usize| u32::try_from(tokens).unwrap_or(u32::MAX).saturating_mul(NUMBERS);
    Some(SemanticTokensEdit { start: numbers(begin), delete_count: numbers(gone), data: Some(data.to_vec()) })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tokens(lengths: &[u32]) -> Vec<SemanticToken> {
        let token = |length: &u32| SemanticToken { delta_line: 1, delta_start: 0, length: *length, token_type: 0, token_modifiers_bitset: 0 };
        lengths.iter().map(token).collect()
    }

    #[test]
    fn only_what_is_other_is_sent() {
        let memory = TokenMemory::default();
        let uri = Url::parse("file:///a.prep").unwrap();
        let first = memory.whole(&uri, tokens(&[1, 2, 3, 4]));
        let known = first.result_id.unwrap();
        let SemanticTokensFullDeltaResult::TokensDelta(delta) = memory.difference(&uri, &known, tokens(&[1, 9, 8, 3, 4])) else { panic!() };
        assert_eq!(delta.edits, [SemanticTokensEdit { start: 5, delete_count: 5, data: Some(tokens(&[9, 8])) }]);
        let SemanticTokensFullDeltaResult::TokensDelta(same) = memory.difference(&uri, &delta.result_id.unwrap(), tokens(&[1, 9, 8, 3, 4])) else { panic!() };
        assert!(same.edits.is_empty());
        // Whoever speaks of other tokens than the last gets all.
        assert!(matches!(memory.difference(&uri, &known, tokens(&[1])), SemanticTokensFullDeltaResult::Tokens(_)));
        memory.forget(&uri);
        assert!(matches!(memory.difference(&uri, "4", tokens(&[1])), SemanticTokensFullDeltaResult::Tokens(_)));
    }

    #[test]
    fn every_difference_leads_from_the_old_tokens_to_the_new() {
        for (before, now) in [(vec![], vec![1]), (vec![1, 1, 1], vec![1, 1]), (vec![1, 2, 1], vec![1, 2, 1, 2, 1]), (vec![5], vec![])] {
            let (before, now) = (tokens(&before), tokens(&now));
            let mut changed = before.clone();
            if let Some(edit) = edit(&before, &now) {
                let start = (edit.start / NUMBERS) as usize;
                changed.splice(start..start + (edit.delete_count / NUMBERS) as usize, edit.data.unwrap());
            }
            assert_eq!(changed, now);
        }
    }
}
