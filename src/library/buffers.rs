//! What laboratories buffer with.

use std::sync::LazyLock;

use crate::model::NameKey;

/// An ion that laboratories buffer with.
#[derive(Debug)]
pub struct Buffer {
    /// The name of its ion.
    pub ion: NameKey,
    /// Constituents that it binds, or precipitates with.
    pub not_with: Vec<NameKey>,
    /// What else to mind; empty where there is nothing.
    pub note: &'static str,
}

/// One a line; comments begin with `#`.
const TABLE: &str = include_str!("data/buffers.txt");

static BUFFERS: LazyLock<Vec<Buffer>> = LazyLock::new(|| {
    let lines = TABLE.lines().filter(|line| !line.starts_with('#'));
    lines
        .filter_map(|line| {
            let mut parts = line.split('|').map(str::trim);
            let ion = NameKey::new(parts.next()?);
            let not_with = parts.next()?.split(',').map(str::trim).filter(|name| !name.is_empty()).map(NameKey::new).collect();
            Some(Buffer { ion, not_with, note: parts.next()? })
        })
        .collect()
});

/// The ions that laboratories buffer with.
pub fn buffers() -> &'static [Buffer] {
    &BUFFERS
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::library::built_in;

    #[test]
    fn every_line_names_ions_of_the_library() {
        let constituents = &built_in().constituents;
        let lines = TABLE.lines().filter(|line| !line.starts_with('#')).count();
        assert_eq!(buffers().len(), lines);
        for buffer in buffers() {
            let names = std::iter::once(&buffer.ion).chain(&buffer.not_with);
            for name in names {
                assert!(constituents.named(name).is_some_and(|constituent| constituent.component.is_some()), "{}", name.as_str());
            }
        }
    }
}
