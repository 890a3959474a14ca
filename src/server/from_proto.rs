//! From the protocol to ours: places and addresses as the client writes them.

use camino::{Utf8Path, Utf8PathBuf};
use tower_lsp::lsp_types::{Position, Range, Url};

use crate::text::{self, Columns, SourceText, Span};

/// The offset of a position; one that does not fit is moved to the nearest that does.
pub fn offset(text: &SourceText, position: Position, columns: Columns) -> usize {
    let position = text::Position { line: position.line as usize, column: position.character as usize };
    text.offset(position, columns)
}

/// The bytes of a range; one that runs backwards is read forwards.
pub fn span(text: &SourceText, range: Range, columns: Columns) -> Span {
    let (start, end) = (offset(text, range.start, columns), offset(text, range.end, columns));
    Span::new(start.min(end), start.max(end))
}

/// The path that an address stands for. Different spellings of one file (`file:///c%3A/…`, `file:///C:/…`) give one path.
/// A text that is no file yet (`untitled:Untitled-1`) gets its address as file name in `folder`, so that what it uses is
/// found from there; the top of the disk where there is no folder.
pub fn path(uri: &Url, folder: &Utf8Path) -> Utf8PathBuf {
    match file_path(uri) {
        Some(path) => path,
        None => folder.join(uri.as_str().replace(['/', '\\'], "_")),
    }
}

/// The path of a file address, and `None` for any other address.
pub fn file_path(uri: &Url) -> Option<Utf8PathBuf> {
    if uri.scheme() != "file" {
        return None;
    }
    let path = Utf8PathBuf::from_path_buf(uri.to_file_path().ok()?).ok()?;
    let text = path.as_str();
    // A drive letter in lower case, behind a slash where the system has no drives.
    let at = usize::from(text.starts_with('/'));
    match (text.get(at..at + 1), text.get(at + 1..at + 2)) {
        (Some(drive), Some(":")) => {
            let rest = text.get(at + 1..).unwrap_or_default();
            Some(format!("{}{}{rest}", text.get(..at).unwrap_or_default(), drive.to_ascii_lowercase()).into())
        }
        _ => Some(path),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn path_of(uri: &str) -> String {
        path(&Url::parse(uri).unwrap(), Utf8Path::new("/lab")).into_string()
    }

    #[test]
    fn one_file_has_one_path() {
        assert_eq!(path_of("file:///lab/a%20b.prep"), "/lab/a b.prep");
        assert_eq!(path_of("file:///lab/x/../%C2%B5.prep"), "/lab/µ.prep");
        #[cfg(not(windows))]
        for uri in ["file:///c%3A/lab/a.prep", "file:///C:/lab/a.prep", "file:///c:/lab/a.prep"] {
            assert_eq!(path_of(uri), "/c:/lab/a.prep");
        }
    }

    #[test]
    fn a_text_without_a_file_stands_in_the_folder() {
        assert_eq!(path_of("untitled:Untitled-1"), "/lab/untitled:Untitled-1");
        assert_eq!(path_of("vscode-vfs://github/x/a.prep"), "/lab/vscode-vfs:__github_x_a.prep");
    }

    #[test]
    fn positions_outside_the_text_are_moved_into_it() {
        let text = SourceText::from("5 µL 𝛂\nx");
        let at = |line, character| offset(&text, Position { line, character }, Columns::Utf16);
        assert_eq!(at(0, 3), 4);
        assert_eq!(at(0, 6), 6, "inside a surrogate pair");
        assert_eq!(at(0, 99), 10);
        assert_eq!(at(99, 0), text.len());
        assert_eq!(at(u32::MAX, u32::MAX), text.len());
        let backwards = Range::new(Position::new(1, 1), Position::new(0, 0));
        assert_eq!(span(&text, backwards, Columns::Utf8), Span::new(0, 12));
    }
}
