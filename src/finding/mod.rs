//! Findings as data: code, level, place, words and fixes. Words and levels are decided in the core, never at an edge.

mod code;

pub use code::Code;

use crate::text::{FileId, Span};

/// How much a finding weighs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Level {
    /// Worth knowing; never fails a check.
    Hint,
    /// A careful reviewer would ask about it.
    Warning,
    /// The recipe is not what it says, or cannot be made.
    Error,
}

impl Level {
    /// The level's word, as reports and configuration write it.
    pub fn word(self) -> &'static str {
        match self {
            Level::Hint => "hint",
            Level::Warning => "warning",
            Level::Error => "error",
        }
    }
}

/// A place inside a block, free of file positions: the logical line, counted from the block's header (which is 0), and
/// a span inside that line's text.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Anchor {
    /// Index of the logical line within its block.
    pub line: usize,
    /// Range within the text of that logical line.
    pub span: Span,
}

impl Anchor {
    /// The place of `span` on the block's line of index `line`.
    pub fn new(line: usize, span: Span) -> Self {
        Anchor { line, span }
    }
}

/// A place that a finding points to besides its own.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Place {
    /// In the finding's own block.
    Here(Anchor),
    /// In another block, counted within its file; resolved when the finding is shown.
    Block {
        /// The file.
        file: FileId,
        /// The header's name, compared as names are.
        key: String,
        /// Where in the block; line 0 is its header.
        anchor: Anchor,
    },
}

/// A related place with what it has to do with the finding.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Related {
    /// Where.
    pub place: Place,
    /// What stands there.
    pub message: String,
}

/// One replacement of text. An empty span inserts.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Edit {
    /// Where, in the finding's own block or file.
    pub place: EditPlace,
    /// The new text.
    pub text: String,
}

/// Where an edit goes.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EditPlace {
    /// Replaces the characters at this place of the finding's block.
    Here(Anchor),
    /// Inserts a line of its own below the block's line of this index.
    LineBelow(usize),
    /// Removes the block's line of this index, line break included.
    WholeLine(usize),
    /// Inserts a line of its own below the `use` lines at the head of the file.
    FileHead,
}

/// A change that answers a finding.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fix {
    /// What the change does, in a few words.
    pub title: String,
    /// The replacements; they do not overlap.
    pub edits: Vec<Edit>,
}

impl Fix {
    /// A fix that replaces the characters at one place.
    pub fn replace(title: impl Into<String>, at: Anchor, text: impl Into<String>) -> Self {
        Fix { title: title.into(), edits: vec![Edit { place: EditPlace::Here(at), text: text.into() }] }
    }

    /// The same fix, which puts this text at another place as well.
    pub fn with(mut self, at: Anchor, text: impl Into<String>) -> Self {
        self.edits.push(Edit { place: EditPlace::Here(at), text: text.into() });
        self
    }

    /// A fix that adds a line below the block's line of index `line`.
    pub fn line_below(title: impl Into<String>, line: usize, text: impl Into<String>) -> Self {
        Fix { title: title.into(), edits: vec![Edit { place: EditPlace::LineBelow(line), text: text.into() }] }
    }
}

/// Something that the author or the reviewer should look at.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Finding {
    /// What kind of finding it is.
    pub code: Code,
    /// Its level; the code's own unless the place says otherwise.
    pub level: Level,
    /// The characters that caused it.
    pub at: Anchor,
    /// One sentence that says what is wrong, with its numbers.
    pub message: String,
    /// One sentence that says what to do; empty where the message says all.
    pub help: String,
    /// Other places that have to do with it.
    pub related: Vec<Related>,
    /// Changes that would answer it, the likeliest first.
    pub fixes: Vec<Fix>,
    /// The names (as keys) of what the finding is about, for `accept CODE on NAME`.
    pub about: Vec<String>,
}

impl Finding {
    /// A finding of this code at this place, with the code's own level.
    pub fn new(code: Code, at: Anchor, message: impl Into<String>) -> Self {
        Finding {
            code,
            level: code.level(),
            at,
            message: message.into(),
            help: String::new(),
            related: Vec::new(),
            fixes: Vec::new(),
            about: Vec::new(),
        }
    }

    /// The same finding at another level.
    pub fn at_level(mut self, level: Level) -> Self {
        self.level = level;
        self
    }

    /// Adds the sentence that says what to do.
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = help.into();
        self
    }

    /// Adds a related place in the same block.
    pub fn related(mut self, at: Anchor, message: impl Into<String>) -> Self {
        self.related.push(Related { place: Place::Here(at), message: message.into() });
        self
    }

    /// Adds a related place anywhere.
    pub fn related_at(mut self, place: Place, message: impl Into<String>) -> Self {
        self.related.push(Related { place, message: message.into() });
        self
    }

    /// Adds a fix.
    pub fn fix(mut self, fix: Fix) -> Self {
        self.fixes.push(fix);
        self
    }

    /// Adds fixes.
    pub fn fixes(mut self, fixes: impl IntoIterator<Item = Fix>) -> Self {
        self.fixes.extend(fixes);
        self
    }

    /// Says which name (as a key) the finding is about.
    pub fn about(mut self, key: impl Into<String>) -> Self {
        self.about.push(key.into());
        self
    }
}
