//! A small page of text for a hover: a title, aligned rows, sentences. As Markdown and as plain text.

/// A piece of a page.
#[derive(Clone, Debug, PartialEq, Eq)]
enum Part {
    Title(String, String),
    Rows(Vec<(String, String)>),
    Sentence(String),
    Code(String),
}

/// A page that is being put together.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Page(Vec<Part>);

impl Page {
    /// A page without text.
    pub fn new() -> Self {
        Page::default()
    }

    /// Adds a heading: a name, and what it is.
    pub fn title(&mut self, name: impl Into<String>, what: impl Into<String>) {
        self.0.push(Part::Title(name.into(), what.into()));
    }

    /// Adds a row of a label and a value below the rows before it.
    pub fn row(&mut self, label: impl Into<String>, value: impl Into<String>) {
        let row = (label.into(), value.into());
        match self.0.last_mut() {
            Some(Part::Rows(rows)) => rows.push(row),
            _ => self.0.push(Part::Rows(vec![row])),
        }
    }

    /// Adds a row where there is a value.
    pub fn row_if(&mut self, label: &str, value: Option<String>) {
        if let Some(value) = value {
            self.row(label, value);
        }
    }

    /// Adds a sentence of its own.
    pub fn sentence(&mut self, text: impl Into<String>) {
        self.0.push(Part::Sentence(text.into()));
    }

    /// Adds a line of the language.
    pub fn code(&mut self, text: impl Into<String>) {
        self.0.push(Part::Code(text.into()));
    }

    /// Adds another page below.
    pub fn append(&mut self, other: Page) {
        self.0.extend(other.0);
    }

    /// Whether nothing stands on it.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// The page as Markdown. Rows stand in a fenced block, because many editors show the source of a table.
    pub fn markdown(&self) -> String {
        let parts = self.0.iter().map(|part| match part {
            Part::Title(name, what) if what.is_empty() => format!("**{}**", escaped(name)),
            Part::Title(name, what) => format!("**{}** – {}", escaped(name), escaped(what)),
            Part::Rows(rows) => format!("```text\n{}\n```", aligned(rows)),
            Part::Sentence(text) => escaped(text),
            Part::Code(text) => format!("```scruple\n{text}\n```"),
        });
        parts.collect::<Vec<String>>().join("\n\n")
    }

    /// The page as plain text.
    pub fn plain(&self) -> String {
        let parts = self.0.iter().map(|part| match part {
            Part::Title(name, what) if what.is_empty() => name.clone(),
            Part::Title(name, what) => format!("{name} – {what}"),
            Part::Rows(rows) => aligned(rows),
            Part::Sentence(text) => text.clone(),
            Part::Code(text) => text.clone(),
        });
        parts.collect::<Vec<String>>().join("\n")
    }
}

/// Rows with their values in one column.
fn aligned(rows: &[(String, String)]) -> String {
    let width = rows.iter().map(|(label, _)| label.chars().count()).max().unwrap_or(0);
    let lines = rows.iter().map(|(label, value)| {
        let padding = " ".repeat(width - label.chars().count());
        format!("{label}{padding}  {value}").trim_end().to_owned()
    });
    lines.collect::<Vec<String>>().join("\n")
}

/// Text with the characters that Markdown would take for marks.
fn escaped(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    for letter in text.chars() {
        if matches!(letter, '\\' | '*' | '_' | '[' | ']' | '<' | '>' | '#' | '|') {
            escaped.push('\\');
        }
        escaped.push(letter);
    }
    escaped
}

#[cfg(test)]
mod tests {
    use super::Page;

    #[test]
    fn rows_are_aligned_and_marks_are_text() {
        let mut page = Page::new();
        page.title("CuSO4*5H2O", "substance");
        page.row("pH", "7.02");
        page.row("ionic strength", "0.19 mol/L");
        page.sentence("Done.");
        assert_eq!(
            page.markdown(),
            "**CuSO4\\*5H2O** – substance\n\n```text\npH              7.02\nionic strength  0.19 mol/L\n```\n\nDone."
        );
        assert_eq!(page.plain(), "CuSO4*5H2O – substance\npH              7.02\nionic strength  0.19 mol/L\nDone.");
    }
}
