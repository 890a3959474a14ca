//! Statement words, units, targets, properties, qualifiers, codes and paths.

use std::collections::BTreeSet;

use super::items::{Draft, Items};
use super::CompletionKind;
use crate::editor::cursor::Cursor;
use crate::editor::values::Values;
use crate::editor::words::{self, Word, WordKind};
use crate::finding::{Code, Level};
use crate::model::BlockRole;
use crate::syntax::tree::{PropertyKind, Statement};
use crate::text::Span;
use crate::units::{Dimension, Unit, format};

/// The column at which what follows a statement word begins, counted from the word.
const REST_COLUMN: usize = 11;

/// The words that open a line in a block of this role.
pub fn statements(items: &mut Items, role: BlockRole, span: Span) {
    let kind = match role {
        BlockRole::Defines(kind) => Some(kind),
        BlockRole::Head | BlockRole::Nameless => None,
    };
    for (index, word) in words::of_kind(WordKind::Statement).enumerate() {
        let fits = match kind {
            Some(kind) => word.blocks.contains(&kind) || word.word == "note",
            None => word.blocks.is_empty(),
        };
        if fits {
            items.add(span, statement_draft(word, 100 + index as u32));
        }
    }
    for (index, word) in words::of_kind(WordKind::Header).enumerate() {
        let rank = if kind.is_some() { 300 } else { 50 } + index as u32;
        items.add(span, Draft { insert: format!("{} ", word.word), ..word_draft(word, CompletionKind::Keyword, rank) });
    }
}

/// A statement word with what follows it in its column.
fn statement_draft(word: &Word, rank: u32) -> Draft {
    let takes_more = word.form.len() > word.word.len();
    let insert = match (takes_more, word.word.len() < REST_COLUMN) {
        (false, _) => word.word.to_owned(),
        (true, true) => format!("{:REST_COLUMN$}", word.word),
        (true, false) => format!("{} ", word.word),
    };
    // `use` stands at the head of a file, without columns.
    let insert = if word.word == "use" || word.word == "language" { format!("{} ", word.word) } else { insert };
    Draft { insert, ..word_draft(word, CompletionKind::Keyword, rank) }
}

fn word_draft(word: &Word, kind: CompletionKind, rank: u32) -> Draft {
    Draft {
        detail: if word.form == word.word { String::new() } else { word.form.to_owned() },
        documentation: word.help.to_owned(),
        ..Draft::plain(word.word, kind, rank)
    }
}

/// A joining word, before anything else.
pub fn word(items: &mut Items, spelling: &str, span: Span) {
    ranked_word(items, spelling, span, 5);
}

fn ranked_word(items: &mut Items, spelling: &str, span: Span, rank: u32) {
    if let Some(word) = words::find(spelling, &[WordKind::Joint]) {
        let insert = if word.form.len() > word.word.len() { format!("{spelling} ") } else { spelling.to_owned() };
        items.add(span, Draft { insert, ..word_draft(word, CompletionKind::Keyword, rank) });
    }
}

/// `to`, and on a `q.s.` line `or`.
pub fn to(items: &mut Items, statement: &Statement, span: Span) {
    word(items, "to", span);
    if matches!(statement, Statement::QuantumSatis(line) if line.alternative.is_none()) {
        ranked_word(items, "or", span, 6);
    }
}

/// What a `q.s.` line or a pair can be made up to.
pub fn targets(items: &mut Items, cursor: &Cursor, span: Span) {
    let is_pair = !matches!(cursor.statement(), Some(Statement::QuantumSatis(_)));
    properties(items, span);
    if is_pair {
        return;
    }
    for (index, extent) in ["100 mL", "250 mL", "500 mL", "1 L", "1 kg"].into_iter().enumerate() {
        items.add(span, Draft::plain(extent, CompletionKind::Value, 60 + index as u32));
    }
    ranked_word(items, "saturation", span, 70);
}

/// The properties that can be expected or sought.
pub fn properties(items: &mut Items, span: Span) {
    for (index, word) in words::of_kind(WordKind::Property).enumerate() {
        items.add(span, Draft { insert: format!("{} ", word.word), ..word_draft(word, CompletionKind::Property, 30 + index as u32) });
    }
}

/// Ranges round the present value of what is expected.
pub fn ranges(items: &mut Items, cursor: &Cursor, statement: &Statement, span: Span) {
    let values = Values::of(items.snapshot, items.file, cursor.block_index);
    let property = match statement {
        Statement::Expect(expect) => expect.property.given().map(|property| &property.kind),
        _ => None,
    };
    let state = values.and_then(|values| values.single()).and_then(|outcome| outcome.finished.as_ref().ok());
    let present = state.zip(property).and_then(|(state, property)| match property {
        PropertyKind::Ph => Some(format!("{} ± 0.05", format::ph(state.pH()))),
        PropertyKind::IonicStrength => Some(format::concentration(state.ionic_strength_mol_per_L(), 2)),
        PropertyKind::BufferCapacity => Some(format!("at least {}", format::concentration(state.buffer_capacity_mol_per_L(), 1))),
        PropertyKind::Osmolality => Some(format::osmolality(state.osmolality_mol_per_kg(), 2)),
        PropertyKind::WaterActivity => Some(format!("{} ± 0.005", format::fixed(state.water_activity(), 3))),
        PropertyKind::Density => Some(format::density(state.density_kg_per_m3(), 4)),
        _ => None,
    });
    if let Some(present) = present {
        items.add(span, Draft { detail: "round the present value".to_owned(), ..Draft::plain(present, CompletionKind::Value, 20) });
    }
    for spelling in ["at least", "at most"] {
        ranked_word(items, spelling, span, 30);
    }
}

/// The temperatures that the file's recipes state, then those of room, cold room and body.
pub fn temperatures(items: &mut Items, cursor: &Cursor, span: Span) {
    let mut stated: BTreeSet<i64> = BTreeSet::new();
    for recipe in cursor.file.model.blocks.iter().filter_map(|block| block.recipe()) {
        let of_recipe = recipe.made_at.iter().chain(&recipe.used_at);
        stated.extend(of_recipe.map(|kelvin| (10.0 * (kelvin.value - 273.15)).round() as i64));
    }
    for tenth in &stated {
        let shown = format::temperature(*tenth as f64 / 10.0 + 273.15);
        items.add(span, Draft { detail: "stated in this file".to_owned(), ..Draft::plain(shown, CompletionKind::Value, 20) });
    }
    for (index, usual) in ["20 °C", "25 °C", "37 °C", "4 °C"].into_iter().enumerate() {
        items.add(span, Draft::plain(usual, CompletionKind::Value, 30 + index as u32));
    }
}

/// The qualifiers of a line by which something goes in.
pub fn qualifiers(items: &mut Items, statement: &Statement, span: Span) {
    let fits = |word: &str| match statement {
        Statement::Ingredient(_) | Statement::Or(_) => true,
        Statement::QuantumSatis(_) => matches!(word, "about" | "at most" | "density" | "purity" | "from" | "by weight" | "grade" | "lot"),
        Statement::Pair(_) => matches!(word, "purity" | "grade" | "lot"),
        _ => false,
    };
    for (index, word) in words::of_kind(WordKind::Qualifier).enumerate().filter(|(_, word)| fits(word.word)) {
        let insert = if word.form == word.word { word.word.to_owned() } else { format!("{} ", word.word) };
        items.add(span, Draft { insert, ..word_draft(word, CompletionKind::Keyword, 20 + index as u32) });
    }
    let joints: &[&str] = match statement {
        Statement::StoredAt(_) => &["in", "in the dark"],
        Statement::Document(_) => &["revision", "effective"],
        Statement::Pka(_) => &["of", "enthalpy", "heat capacity"],
        Statement::ComplexWith(_) => &["log K", "enthalpy", "heat capacity", "named", "itself", "at ionic strength"],
        Statement::Meter(_) => &["reference", "compensation"],
        Statement::Under(_) => &["moist"],
        _ => &[],
    };
    for (index, spelling) in joints.iter().enumerate() {
        ranked_word(items, spelling, span, 40 + index as u32);
    }
}

/// The units that can stand behind a number on a line of this statement.
pub fn units(items: &mut Items, cursor: &Cursor, statement: &Statement, span: Span) {
    let dimensions = dimensions(cursor, statement, span);
    for (index, dimension) in dimensions.iter().enumerate() {
        for (place, unit) in Unit::of(*dimension).enumerate() {
            let rank = (10 * index + place.min(9)) as u32 % 900;
            items.add(span, Draft { detail: dimension_words(*dimension).to_owned(), ..Draft::plain(unit.symbol(), CompletionKind::Unit, rank) });
        }
    }
}

/// What a number on a line measures.
fn dimensions(cursor: &Cursor, statement: &Statement, span: Span) -> Vec<Dimension> {
    use Dimension as D;
    use Statement as S;
    const OPENING: &[Dimension] = &[
        D::Mass,
        D::Volume,
        D::AmountConcentration,
        D::MassConcentration,
        D::Amount,
        D::MassFraction,
        D::VolumeFraction,
        D::Molality,
        D::Parts,
        D::Fold,
        D::EnzymeActivity,
        D::EnzymeActivityConcentration,
        D::Count,
    ];
    let list: &[Dimension] = match statement {
        S::MadeAt(_) | S::UsedAt(_) | S::CoolTo(_) | S::WarmTo(_) | S::Room(_) => &[D::Temperature],
        S::StoredAt(_) => {
            let before = cursor.line.text.get(..span.start.saturating_sub(cursor.line_start)).unwrap_or_default();
            if before.contains(" for ") { &[D::Time] } else { &[D::Temperature] }
        }
        S::Wait(_) | S::ReadyAfter(_) | S::UseWithin(_) => &[D::Time],
        S::Makes(_) => &[D::Volume, D::Mass],
        S::QuantumSatis(line) if line.target.given().is_none() && line.name.given().is_some() => &[D::Volume, D::Mass],
        S::Expect(expect) => match expect.property.given().map(|property| &property.kind) {
            Some(PropertyKind::IonicStrength) => &[D::AmountConcentration, D::Molality],
            Some(PropertyKind::BufferCapacity) => &[D::AmountConcentration],
            Some(PropertyKind::Osmolality) => &[D::Osmolality],
            Some(PropertyKind::Conductivity) => &[D::Conductivity],
            Some(PropertyKind::Density) => &[D::MassConcentration],
            Some(PropertyKind::Alkalinity | PropertyKind::Hardness) => &[D::AmountConcentration, D::EquivalentConcentration, D::MassConcentration],
            Some(PropertyKind::Total(_) | PropertyKind::Free(_)) => {
                &[D::AmountConcentration, D::MassConcentration, D::Molality, D::MassFraction]
            }
            _ => &[D::Temperature],
        },
        S::Under(_) => &[D::Percent, D::Pressure],
        S::Density(_) => &[D::MassConcentration],
        S::MolarMass(_) => &[D::MassPerAmount],
        S::MolarVolume(_) => &[D::MolarVolume],
        S::MolarConductivity(_) => &[D::MolarConductivity],
        S::Activity(_) => &[D::EnzymeActivityConcentration],
        S::Solubility(_) => &[D::MassConcentration, D::AmountConcentration, D::MassFraction],
        S::Balance(_) => &[D::Mass],
        S::Ware(_) => &[D::Volume],
        _ => OPENING,
    };
    list.to_vec()
}

fn dimension_words(dimension: Dimension) -> &'static str {
    match dimension {
        Dimension::Mass => "mass",
        Dimension::Volume => "volume",
        Dimension::Amount => "amount of substance",
        Dimension::AmountConcentration => "concentration in the finished solution",
        Dimension::Molality => "per kilogram of water",
        Dimension::MassConcentration => "mass per volume",
        Dimension::MassFraction => "mass per mass",
        Dimension::VolumeFraction => "volume per volume",
        Dimension::Parts => "parts by volume",
        Dimension::Percent => "share",
        Dimension::Temperature => "temperature",
        Dimension::Pressure => "pressure",
        Dimension::Time => "time",
        Dimension::Conductivity => "conductivity",
        Dimension::Osmolality => "osmolality",
        Dimension::MolarEnergy => "molar energy",
        Dimension::MolarHeatCapacity => "molar heat capacity",
        Dimension::MassPerAmount => "mass per amount",
        Dimension::MolarConductivity => "molar conductivity",
        Dimension::MolarVolume => "molar volume",
        Dimension::EnzymeActivity => "enzyme activity",
        Dimension::EnzymeActivityConcentration => "enzyme activity per volume",
        Dimension::Count => "tablets, vials",
        Dimension::Fold => "times the strength at which it is used",
        Dimension::EquivalentConcentration => "equivalents",
    }
}

/// Codes that can be accepted: those that the block raises first, errors never.
pub fn codes(items: &mut Items, cursor: &Cursor, span: Span) {
    let findings = items.snapshot.findings(items.file);
    let raised: BTreeSet<Code> = findings
        .iter()
        .filter(|located| located.block == cursor.block_index && located.finding.level != Level::Error)
        .map(|located| located.finding.code)
        .collect();
    for code in Code::ALL.iter().filter(|code| code.level() != Level::Error || raised.contains(code)) {
        let rank = if raised.contains(code) { 10 } else { 50 };
        items.add(span, Draft {
            insert: format!("{} ", code.name()),
            detail: if rank == 10 { "raised here".to_owned() } else { code.level().word().to_owned() },
            documentation: code.summary().to_owned(),
            ..Draft::plain(code.name(), CompletionKind::Code, rank)
        });
    }
}

/// The files of the root, as paths from this file's folder.
pub fn paths(items: &mut Items, cursor: &Cursor, span: Span) {
    let from = cursor.file;
    let Some(folder) = from.path.parent() else { return };
    let used: BTreeSet<&str> = from.model.uses.iter().filter(|used| used.path_at.line != cursor.line_index).map(|used| used.path.as_str()).collect();
    let files: Vec<_> = items.snapshot.files.values().filter(|file| file.root == from.root && file.id != from.id).cloned().collect();
    for file in files {
        let Some(path) = relative(folder, &file.path) else { continue };
        if used.contains(path.as_str()) {
            continue;
        }
        let names: Vec<&str> = file.model.blocks.iter().filter_map(|block| block.name.as_ref()).map(|name| name.text.as_str()).take(5).collect();
        items.add(span, Draft {
            insert: format!("\"{path}\""),
            detail: names.join(", "),
            ..Draft::plain(path, CompletionKind::File, 10)
        });
    }
}

/// The path of a file from a folder, with forward slashes.
fn relative(folder: &camino::Utf8Path, file: &camino::Utf8Path) -> Option<String> {
    folder.ancestors().enumerate().find_map(|(up, ancestor)| {
        let rest = file.strip_prefix(ancestor).ok()?;
        Some(format!("{}{}", "../".repeat(up), rest.as_str().replace('\\', "/")))
    })
}

/// What can stand above the liquid.
pub fn gases(items: &mut Items, span: Span) {
    word(items, "air", span);
    items.add(span, Draft { detail: "as in an incubator".to_owned(), ..Draft::plain("5 % CO2, moist", CompletionKind::Value, 50) });
}
