//! A sheet of paper as data: a title, and sections of facts, tables and sentences. Written out as text or as Markdown.

mod markdown;
mod text;

pub(super) use markdown::escaped as escaped_markdown;
pub use markdown::markdown;
pub use text::text;

/// A sheet.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Sheet {
    /// What the sheet is about.
    pub title: String,
    /// What identifies it: file and line, document and revision.
    pub identity: Vec<String>,
    /// Its sections in order; none is empty.
    pub sections: Vec<Section>,
}

/// A part of a sheet.
#[derive(Clone, Debug, PartialEq)]
pub struct Section {
    /// Its heading; empty for the first part, which needs none.
    pub heading: &'static str,
    /// What stands below.
    pub parts: Vec<Part>,
}

/// A piece of a section.
#[derive(Clone, Debug, PartialEq)]
pub enum Part {
    /// Names with what is to be said of each.
    Facts(Vec<(String, String)>),
    /// Rows and columns.
    Table(Table),
    /// Sentences, each on its own.
    List(Vec<String>),
    /// A sentence or several in one piece.
    Paragraph(String),
}

/// Rows and columns.
#[derive(Clone, Debug, PartialEq)]
pub struct Table {
    /// The columns.
    pub columns: Vec<Column>,
    /// The rows, with a cell for each column.
    pub rows: Vec<Vec<String>>,
}

/// A column of a table.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Column {
    /// Its heading.
    pub heading: &'static str,
    /// Whether its cells are numbers, aligned to the right.
    pub right: bool,
}

impl Column {
    /// A column of words.
    pub fn words(heading: &'static str) -> Self {
        Column { heading, right: false }
    }

    /// A column of numbers.
    pub fn numbers(heading: &'static str) -> Self {
        Column { heading, right: true }
    }
}

impl Sheet {
    /// Adds a section, unless nothing stands in it.
    pub fn section(&mut self, heading: &'static str, parts: Vec<Part>) {
        let parts: Vec<Part> = parts.into_iter().filter(|part| !part.is_empty()).collect();
        if !parts.is_empty() {
            self.sections.push(Section { heading, parts });
        }
    }
}

impl Part {
    fn is_empty(&self) -> bool {
        match self {
            Part::Facts(facts) => facts.is_empty(),
            Part::Table(table) => table.rows.is_empty(),
            Part::List(items) => items.is_empty(),
            Part::Paragraph(text) => text.is_empty(),
        }
    }
}
