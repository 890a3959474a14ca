//! Files that change on disk, for clients that do not watch them: looked at now and then.

use std::collections::BTreeMap;
use std::time::{Duration, SystemTime};

use camino::{Utf8Path, Utf8PathBuf};

/// How long nothing must arrive before the disk is looked at. A person who comes back from another window takes longer.
pub const INTERVAL: Duration = Duration::from_secs(2);

/// When a file or folder was changed last, and how long it is; nothing where it is not there.
type Stamp = Option<(SystemTime, u64)>;

/// What was seen last.
#[derive(Debug, Default)]
pub struct Watch {
    seen: BTreeMap<Utf8PathBuf, Stamp>,
}

impl Watch {
    /// Which of these files and folders are other than when they were looked at last; of one that was not looked at before
    /// nothing is said. A folder changes when something in it comes or goes.
    pub fn changed(&mut self, paths: impl Iterator<Item = Utf8PathBuf>) -> Vec<Utf8PathBuf> {
        let now: BTreeMap<Utf8PathBuf, Stamp> = paths.map(|path| (path.clone(), stamp(&path))).collect();
        let is_other = |(path, stamp): &(&Utf8PathBuf, &Stamp)| self.seen.get(*path).is_some_and(|seen| seen != *stamp);
        let changed = now.iter().filter(is_other).map(|(path, _)| path.clone()).collect();
        self.seen = now;
        changed
    }
}

fn stamp(path: &Utf8Path) -> Stamp {
    let state = std::fs::metadata(path).ok()?;
    Some((state.modified().ok()?, if state.is_dir() { 0 } else { state.len() }))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_changes_comes_and_goes_is_told_once() {
        let folder = Utf8PathBuf::from_path_buf(std::env::temp_dir()).unwrap().join(format!("scruple-watch-{}", std::process::id()));
        std::fs::create_dir_all(&folder).unwrap();
        let (one, other) = (folder.join("one.prep"), folder.join("other.prep"));
        std::fs::write(&one, "a").unwrap();
        let mut watch = Watch::default();
        let mut look = || watch.changed([one.clone(), other.clone()].into_iter());
        assert!(look().is_empty());
        assert!(look().is_empty());
        std::fs::write(&one, "longer").unwrap();
        assert_eq!(look(), std::slice::from_ref(&one));
        assert!(look().is_empty());
        std::fs::write(&other, "new").unwrap();
        assert_eq!(look(), std::slice::from_ref(&other));
        std::fs::remove_dir_all(&folder).unwrap();
        assert_eq!(look(), [one.clone(), other.clone()]);
    }
}
