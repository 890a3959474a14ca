//! A sheet as plain text for a terminal or a printer: columns aligned, long sentences wrapped.

use super::{Part, Section, Sheet, Table};

/// Where the text of a section begins.
const INDENT: &str = "  ";

/// What separates columns.
const GAP: &str = "   ";

/// A sheet, at most `width` columns wide where its words allow it.
pub fn text(sheet: &Sheet, width: usize) -> String {
    let mut out = String::new();
    out.push_str(&sheet.title);
    out.push('\n');
    out.push_str(&"─".repeat(length(&sheet.title)));
    out.push('\n');
    if !sheet.identity.is_empty() {
        out.push_str(&sheet.identity.join(" · "));
        out.push('\n');
    }
    for section in &sheet.sections {
        out.push('\n');
        write_section(section, width, &mut out);
    }
    out
}

fn write_section(section: &Section, width: usize, out: &mut String) {
    if !section.heading.is_empty() {
        out.push_str(section.heading);
        out.push('\n');
    }
    for part in &section.parts {
        match part {
            Part::Facts(facts) => {
                let rows: Vec<Vec<String>> = facts.iter().map(|(name, value)| vec![name.clone(), value.clone()]).collect();
                write_rows(&rows, &[false, false], width, out);
            }
            Part::Table(table) => write_table(table, width, out),
            Part::List(items) => items.iter().for_each(|item| write_wrapped("- ", item, width, out)),
            Part::Paragraph(words) => write_wrapped("", words, width, out),
        }
    }
}

fn write_table(table: &Table, width: usize, out: &mut String) {
    let right: Vec<bool> = table.columns.iter().map(|column| column.right).collect();
    let mut rows = vec![table.columns.iter().map(|column| column.heading.to_owned()).collect()];
    rows.extend(table.rows.iter().cloned());
    write_rows(&rows, &right, width, out);
}

/// Rows in aligned columns. The last column wraps below itself where the line grows too long.
fn write_rows(rows: &[Vec<String>], right: &[bool], width: usize, out: &mut String) {
    let widths: Vec<usize> = (0..right.len())
        .map(|column| rows.iter().filter_map(|row| row.get(column)).map(|cell| length(cell)).max().unwrap_or(0))
        .collect();
    for row in rows {
        let mut line = String::from(INDENT);
        let last = row.iter().rposition(|cell| !cell.is_empty()).unwrap_or(0);
        for (column, cell) in row.iter().enumerate().take(last + 1) {
            let padding = " ".repeat(widths.get(column).copied().unwrap_or(0).saturating_sub(length(cell)));
            if right.get(column) == Some(&true) {
                line.push_str(&padding);
                line.push_str(cell);
            } else if column < last {
                line.push_str(cell);
                line.push_str(&padding);
            } else {
                let at = length(&line);
                let hanging = " ".repeat(at);
                line.push_str(&wrapped(cell, width.saturating_sub(at).max(30)).join(&format!("\n{hanging}")));
            }
            if column < last {
                line.push_str(GAP);
            }
        }
        out.push_str(line.trim_end());
        out.push('\n');
    }
}

fn write_wrapped(bullet: &str, words: &str, width: usize, out: &mut String) {
    let hanging = " ".repeat(length(bullet));
    for (number, line) in wrapped(words, width.saturating_sub(INDENT.len() + bullet.len()).max(30)).iter().enumerate() {
        out.push_str(INDENT);
        out.push_str(if number == 0 { bullet } else { &hanging });
        out.push_str(line);
        out.push('\n');
    }
}

/// Words on lines of at most so many characters; a longer word has its own line. A number keeps its unit.
fn wrapped(words: &str, width: usize) -> Vec<String> {
    let mut lines = vec![String::new()];
    for word in pieces(words) {
        if let Some(line) = lines.last_mut() {
            if line.is_empty() {
                line.push_str(&word);
            } else if length(line) + 1 + length(&word) <= width {
                line.push(' ');
                line.push_str(&word);
            } else {
                lines.push(word);
            }
        }
    }
    lines
}

/// The words, a number together with the word that follows it.
fn pieces(words: &str) -> Vec<String> {
    let mut pieces: Vec<String> = Vec::new();
    for word in words.split_whitespace() {
        let follows_number =
            pieces.last().is_some_and(|last| last.ends_with(|end: char| end.is_ascii_digit()) && !last.contains(' '));
        match pieces.last_mut() {
            Some(last) if follows_number => {
                last.push(' ');
                last.push_str(word);
            }
            _ => pieces.push(word.to_owned()),
        }
    }
    pieces
}

fn length(text: &str) -> usize {
    text.chars().count()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::sheet::Column;

    #[test]
    fn columns_stand_under_each_other() {
        let mut sheet = Sheet { title: "Eluent".into(), ..Sheet::default() };
        sheet.section(
            "To weigh",
            vec![Part::Table(Table {
                columns: vec![Column::numbers("take"), Column::words("of")],
                rows: vec![vec!["3.120 g".into(), "salt".into()], vec!["12.5 µL".into(), "µ-stock".into()]],
            })],
        );
        assert_eq!(
            text(&sheet, 80),
            "Eluent\n──────\n\nTo weigh\n     take   of\n  3.120 g   salt\n  12.5 µL   µ-stock\n"
        );
    }

    #[test]
    fn a_number_keeps_its_unit_when_a_sentence_is_wrapped() {
        assert_eq!(wrapped("made at about 22 °C in the hall", 15), ["made at about", "22 °C in the", "hall"]);
    }
}
