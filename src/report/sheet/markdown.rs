//! A sheet as Markdown, for a review or a document.

use super::{Part, Section, Sheet, Table};

/// A sheet, with its title as a heading of the second level.
pub fn markdown(sheet: &Sheet) -> String {
    let mut out = format!("## {}\n", escaped(&sheet.title));
    if !sheet.identity.is_empty() {
        let identity: Vec<String> = sheet.identity.iter().map(|part| escaped(part)).collect();
        out.push_str(&format!("\n{}\n", identity.join(" · ")));
    }
    for section in &sheet.sections {
        write_section(section, &mut out);
    }
    out
}

fn write_section(section: &Section, out: &mut String) {
    if !section.heading.is_empty() {
        out.push_str(&format!("\n### {}\n", section.heading));
    }
    for part in &section.parts {
        out.push('\n');
        match part {
            Part::Facts(facts) => {
                out.push_str("| | |\n|---|---|\n");
                facts.iter().for_each(|(name, value)| row(&[name.clone(), value.clone()], out));
            }
            Part::Table(table) => write_table(table, out),
            Part::List(items) => items.iter().for_each(|item| out.push_str(&format!("- {}\n", escaped(item)))),
            Part::Paragraph(words) => out.push_str(&format!("{}\n", escaped(words))),
        }
    }
}

fn write_table(table: &Table, out: &mut String) {
    let headings: Vec<String> = table.columns.iter().map(|column| column.heading.to_owned()).collect();
    row(&headings, out);
    out.push('|');
    for column in &table.columns {
        out.push_str(if column.right { "---:|" } else { "---|" });
    }
    out.push('\n');
    table.rows.iter().for_each(|cells| row(cells, out));
}

fn row(cells: &[String], out: &mut String) {
    out.push('|');
    for cell in cells {
        out.push_str(&format!(" {} |", escaped(cell)));
    }
    out.push('\n');
}

/// The text with everything masked that Markdown would read as its own.
pub(in crate::report) fn escaped(text: &str) -> String {
    let mut masked = String::with_capacity(text.len());
    for character in text.chars() {
        if matches!(character, '\\' | '|' | '*' | '_' | '`' | '<' | '>' | '[' | ']' | '#' | '~') {
            masked.push('\\');
        }
        masked.push(character);
    }
    masked
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_cannot_become_markup() {
        assert_eq!(escaped("a|b *c* <script>"), "a\\|b \\*c\\* \\<script\\>");
        let sheet = Sheet { title: "Eluent #3".into(), ..Sheet::default() };
        assert_eq!(markdown(&sheet), "## Eluent \\#3\n");
    }
}
