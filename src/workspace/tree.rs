//! Files held in memory: those of one revision of a repository, or none at all.

use std::collections::BTreeMap;
use std::ops::Bound;

use camino::{Utf8Path, Utf8PathBuf};

use super::disk::CONFIGURATION_FILE;
use super::reader::{Reader, text_of};

/// The recipe and configuration files of a revision, under the paths that they have when it is checked out.
#[derive(Clone, Debug, Default)]
pub struct RevisionFiles {
    top: Utf8PathBuf,
    files: BTreeMap<Utf8PathBuf, Result<String, String>>,
}

impl RevisionFiles {
    /// A revision without files, of the repository whose top folder this is.
    pub fn new(top: Utf8PathBuf) -> Self {
        RevisionFiles { top, files: BTreeMap::new() }
    }

    /// Whether a file of this name (`/` between its parts, from the top) is one that matters.
    pub fn matters(name: &str) -> bool {
        name.ends_with(".prep") || name.rsplit('/').next() == Some(CONFIGURATION_FILE)
    }

    /// Adds a file by its name from the top, with what stands in it.
    pub fn add(&mut self, name: &str, contents: Result<Vec<u8>, String>) {
        self.files.insert(name.split('/').fold(self.top.clone(), |path, part| path.join(part)), contents.and_then(text_of));
    }

    /// The files below a folder, hidden ones left out, each with its path from there.
    fn below<'a>(&'a self, folder: &'a Utf8Path) -> impl Iterator<Item = (&'a Utf8PathBuf, &'a Utf8Path)> {
        self.files
            .range::<Utf8Path, _>((Bound::Included(folder), Bound::Unbounded))
            .map(|(path, _)| path)
            .take_while(move |path| path.starts_with(folder))
            .filter_map(move |path| Some((path, path.strip_prefix(folder).ok()?)))
            .filter(|(_, name)| !name.components().any(|part| part.as_str().starts_with('.')))
    }
}

impl Reader for RevisionFiles {
    fn read(&self, path: &Utf8Path) -> Result<Option<String>, String> {
        self.files.get(path).cloned().transpose()
    }

    fn is_file(&self, path: &Utf8Path) -> bool {
        self.files.contains_key(path)
    }

    fn is_folder(&self, path: &Utf8Path) -> bool {
        let after = self.files.range::<Utf8Path, _>((Bound::Excluded(path), Bound::Unbounded)).next();
        self.is_top(path) || after.is_some_and(|(next, _)| next.starts_with(path))
    }

    fn is_top(&self, folder: &Utf8Path) -> bool {
        folder == self.top
    }

    fn is_forbidden(&self, _: &Utf8Path) -> bool {
        false
    }

    fn recipe_files(&self, folder: &Utf8Path) -> Vec<Utf8PathBuf> {
        let own = |name: &Utf8Path| {
            let between = name.ancestors().skip(1).filter(|between| !between.as_str().is_empty());
            name.extension() == Some("prep") && !between.into_iter().any(|between| self.is_file(&folder.join(between).join(CONFIGURATION_FILE)))
        };
        self.below(folder).filter(|(_, name)| own(name)).map(|(path, _)| path.clone()).collect()
    }

    fn nested_roots(&self, folder: &Utf8Path) -> Vec<Utf8PathBuf> {
        let marks = self.below(folder).filter(|(_, name)| name.file_name() == Some(CONFIGURATION_FILE) && name.components().count() > 1);
        let mut roots: Vec<Utf8PathBuf> = marks.filter_map(|(path, _)| path.parent().map(Utf8Path::to_owned)).collect();
        roots.sort();
        roots
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn revision(names: &[&str]) -> RevisionFiles {
        let mut files = RevisionFiles::new("/repository".into());
        names.iter().for_each(|name| files.add(name, Ok(Vec::new())));
        files
    }

    #[test]
    fn a_revision_is_walked_as_the_disk_is() {
        let files = revision(&[
            "a.prep",
            "deep/b.prep",
            "deep/.hidden/c.prep",
            "deep er/f.prep",
            "own/scruple.toml",
            "own/d.prep",
            "own/below/e.prep",
        ]);
        let top = Utf8Path::new("/repository");
        assert_eq!(files.recipe_files(top), ["/repository/a.prep", "/repository/deep/b.prep", "/repository/deep er/f.prep"]);
        assert_eq!(files.nested_roots(top), ["/repository/own"]);
        assert_eq!(files.recipe_files(Utf8Path::new("/repository/own")), ["/repository/own/below/e.prep", "/repository/own/d.prep"]);
        assert_eq!(files.find_root(Utf8Path::new("/repository/own/below/e.prep"), top), "/repository/own");
        assert_eq!(files.find_root(Utf8Path::new("/repository/deep"), Utf8Path::new("/repository/deep")), top);
        assert!(files.is_folder(Utf8Path::new("/repository/own/below")) && !files.is_folder(Utf8Path::new("/repository/ow")));
    }

    #[test]
    fn what_is_no_text_says_so() {
        let mut files = RevisionFiles::new("/repository".into());
        files.add("a.prep", Ok(b"# fine\n\xb0C\n".to_vec()));
        assert!(files.read(Utf8Path::new("/repository/a.prep")).unwrap_err().contains("line 2"));
        assert_eq!(files.read(Utf8Path::new("/repository/b.prep")), Ok(None));
    }
}
