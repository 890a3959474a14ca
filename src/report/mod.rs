//! What people and machines read outside an editor: findings, solutions and substances, each as JSON, as text or as Markdown.
//! Nothing here prints; every function returns text or data.

mod annotated;
mod assumptions;
mod baseline;
mod cautions;
mod code_quality;
pub mod comparison;
mod excerpt;
mod finding;
mod fingerprint;
mod junit;
mod line_words;
mod number;
mod phases;
mod rdjson;
mod reasons;
mod reasons_sheet;
mod sarif;
mod selection;
pub mod sheet;
mod solution;
mod solution_sheet;
mod substance;
mod substance_sheet;
mod workflow_commands;

pub use annotated::annotated;
pub use baseline::Baseline;
pub use code_quality::code_quality;
pub use comparison::ComparisonReport;
pub use excerpt::{configuration_excerpt, excerpt};
pub use finding::{EditReport, FindingReport, configuration_findings, finding_reports};
pub use junit::junit;
pub use rdjson::rdjson;
pub use reasons::{ReasonsReport, reasons_report};
pub use reasons_sheet::reasons_sheet;
pub use sarif::sarif;
pub use selection::{Selection, Subject};
pub use sheet::Sheet;
pub use solution::{SolutionReport, solution_report, solution_report_with_reasons, with_settled};
pub use solution_sheet::{settled_sheet, solution_sheet};
pub use substance::{Entry, LibraryReport, all, found};
pub use substance_sheet::library_sheets;
pub use workflow_commands::workflow_commands;

/// The schema of what `scruple check --format json` prints (JSON Schema, draft 2020-12).
pub const CHECK_SCHEMA: &str = include_str!("check.schema.json");

/// The schema of what `scruple show --format json` prints (JSON Schema, draft 2020-12).
pub const SHOW_SCHEMA: &str = include_str!("show.schema.json");

/// The schema of what `scruple compare --format json` prints (JSON Schema, draft 2020-12).
pub const COMPARE_SCHEMA: &str = include_str!("compare.schema.json");
