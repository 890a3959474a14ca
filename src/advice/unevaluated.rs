//! Statements that are read but not yet worked out: nothing is silently ignored.

use super::Case;
use super::definitions::line_anchor;
use crate::finding::{Code, Finding};
use crate::model::Body;
use crate::syntax::tree::{Content, Statement};

/// Says which statements have no effect on the values yet.
pub(super) fn not_evaluated_yet(case: &Case, findings: &mut Vec<Finding>) {
    for (index, line) in case.block.lines.iter().enumerate() {
        let Content::Statement(statement) = &line.content else { continue };
        let what = match statement {
            Statement::CoolTo(_) | Statement::WarmTo(_) => "A change of temperature on the way",
            Statement::DriveOff(_) => "`drive off`",
            Statement::Filter => "`filter`",
            Statement::Wait(_) => "`wait`",
            Statement::Open => "`open`",
            Statement::Under(_) => "A gas above the liquid",
            Statement::UsedAt(used) if used.under.is_some() => "A gas above the liquid",
            Statement::Header(header) if header.kind == crate::syntax::tree::BlockKind::Solid => "A solid that can precipitate",
            Statement::Balance(_) | Statement::Ware(_) | Statement::Meter(_) if matches!(case.block.body, Body::Lab(_)) => {
                "Equipment"
            }
            _ => continue,
        };
        let is_first_of_its_kind = !findings
            .iter()
            .any(|finding| finding.code == Code::NotEvaluatedYet && finding.message.starts_with(what) && what == "Equipment");
        if is_first_of_its_kind {
            findings.push(
                Finding::new(Code::NotEvaluatedYet, line_anchor(case.block, index), format!("{what} is read, but not worked out yet."))
                    .help("The values of the solution do not depend on this line for now."),
            );
        }
    }
}
