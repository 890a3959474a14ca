//! What people and machines read outside an editor: findings, solutions and substances, each as JSON, as text or as Markdown.
//! Nothing here prints; every function returns text or data.

mod assumptions;
mod cautions;
mod excerpt;
mod finding;
mod line_words;
mod number;
mod reasons;
mod reasons_sheet;
mod selection;
pub mod sheet;
mod solution;
mod solution_sheet;
mod substance;
mod substance_sheet;

pub use excerpt::{configuration_excerpt, excerpt};
pub use finding::{FindingReport, configuration_findings, finding_reports};
pub use reasons::{ReasonsReport, reasons_report};
pub use reasons_sheet::reasons_sheet;
pub use selection::{Selection, Subject};
pub use sheet::Sheet;
pub use solution::{SolutionReport, solution_report, solution_report_with_reasons};
pub use solution_sheet::solution_sheet;
pub use substance::{Entry, LibraryReport, all, found};
pub use substance_sheet::library_sheets;

/// The schema of what `scruple show --format json` prints (JSON Schema, draft 2020-12).
pub const SHOW_SCHEMA: &str = include_str!("show.schema.json");
