//! What makes a finding the same one from run to run: its file, its code, its block and the words of its line, but neither the
//! line's number nor the values that were worked out.

use std::collections::HashMap;

use crate::text::FileId;
use crate::workspace::{FileState, Located};

/// Hands out fingerprints; the second finding of one kind on lines of the same words is told apart from the first.
#[derive(Debug, Default)]
pub(super) struct Fingerprints {
    seen: HashMap<(FileId, u64), usize>,
}

impl Fingerprints {
    /// The fingerprint of the next finding, in the order of places.
    pub fn next(&mut self, file: &FileState, located: &Located) -> String {
        let block = file.model.blocks.get(located.block);
        let name = block.and_then(|block| block.name.as_ref()).map_or("", |name| name.key.as_str());
        let line = block.and_then(|block| block.lines.get(located.finding.at.line)).map_or("", |line| line.text.as_str());
        let words: Vec<&str> = line.split_whitespace().collect();
        let own = hash(&[&file.shown_path(), located.finding.code.name(), name, &words.join(" ")]);
        let count = self.seen.entry((file.id, own)).or_default();
        *count += 1;
        if *count == 1 { format!("{own:016x}") } else { format!("{own:016x}-{count}") }
    }
}

/// The fingerprint of something that consists of these words.
pub(super) fn of_words(words: &[&str]) -> String {
    format!("{:016x}", hash(words))
}

/// FNV-1a with 64 bits, each part ended by a byte that is in no text.
fn hash(parts: &[&str]) -> u64 {
    const BASIS: u64 = 0xcbf2_9ce4_8422_2325;
    const PRIME: u64 = 0x0000_0100_0000_01b3;
    let bytes = parts.iter().flat_map(|part| part.bytes().chain(std::iter::once(0xff)));
    bytes.fold(BASIS, |hash, byte| (hash ^ u64::from(byte)).wrapping_mul(PRIME))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn parts_do_not_run_into_each_other() {
        assert_ne!(hash(&["ab", "c"]), hash(&["a", "bc"]));
        // RFC 9923 (FNV), test vectors: the empty string and "a" without the closing byte.
        assert_eq!(hash(&[]), 0xcbf2_9ce4_8422_2325);
        assert_eq!("a".bytes().fold(0xcbf2_9ce4_8422_2325u64, |hash, byte| (hash ^ u64::from(byte)).wrapping_mul(0x0100_0000_01b3)), 0xaf63_dc4c_8601_ec8c);
    }
}
