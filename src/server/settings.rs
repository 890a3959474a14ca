//! What the user sets in the editor. What concerns the recipes themselves stands in `scruple.toml`, where a command line and
//! a colleague see it too; here is only what the screen shows.

use std::collections::BTreeSet;

use serde_json::Value;

use crate::editor::HintCategory;

/// The section of the editor's settings that is ours.
pub const SECTION: &str = "scruple";

/// The user's settings in the editor.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Settings {
    hidden: BTreeSet<HintCategory>,
}

impl Settings {
    /// Reads `{"inlayHints": {"enabled": …, CATEGORY: …}}`, bare or below `scruple`. What is not said is on; what cannot be
    /// read is as if not said.
    pub fn read(value: &Value) -> Settings {
        let own = value.get(SECTION).unwrap_or(value);
        let hints = own.get("inlayHints");
        let is_off = |name: &str| hints.and_then(|hints| hints.get(name)).and_then(Value::as_bool) == Some(false);
        let all_off = is_off("enabled") || hints.and_then(Value::as_bool) == Some(false);
        let hidden = HintCategory::ALL.iter().copied().filter(|category| all_off || is_off(category.name()));
        Settings { hidden: hidden.collect() }
    }

    /// Whether hints of this category are shown.
    pub fn shows(&self, category: HintCategory) -> bool {
        !self.hidden.contains(&category)
    }
}

#[cfg(test)]
mod tests {
    use serde_json::json;

    use super::*;

    fn shown(value: Value) -> Vec<&'static str> {
        let settings = Settings::read(&value);
        HintCategory::ALL.iter().filter(|category| settings.shows(**category)).map(|category| category.name()).collect()
    }

    #[test]
    fn every_category_has_a_switch() {
        let all: Vec<_> = HintCategory::ALL.iter().map(|category| category.name()).collect();
        for value in [json!(null), json!({}), json!(7), json!({ "inlayHints": "yes" }), json!({ "inlayHints": { "enabled": true } })] {
            assert_eq!(shown(value), all);
        }
        for name in &all {
            let without: Vec<_> = all.iter().copied().filter(|other| other != name).collect();
            assert_eq!(shown(json!({ "inlayHints": { *name: false } })), without);
            assert_eq!(shown(json!({ "scruple": { "inlayHints": { *name: false } } })), without);
        }
        for value in [json!({ "inlayHints": { "enabled": false } }), json!({ "scruple": { "inlayHints": false } })] {
            assert!(shown(value).is_empty());
        }
    }
}
