//! A small number that stands for a file, so that places can be compared and copied.

/// A file known to a workspace. The number stays the file's for as long as the workspace lives.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct FileId(pub u32);
