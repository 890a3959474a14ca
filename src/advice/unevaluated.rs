//! Statements that are read but not yet worked out: nothing is silently ignored.

use super::Case;
use super::definitions::line_anchor;
use crate::finding::{Code, Finding};
use crate::model::{Body, Lookup, NameKey, Namespace};
use crate::syntax::tree::{Content, Name, Slot, Statement};

/// Says which statements have no effect on the values yet.
pub(super) fn not_evaluated_yet(case: &Case, findings: &mut Vec<Finding>) {
    for (index, line) in case.block.lines.iter().enumerate() {
        let Content::Statement(statement) = &line.content else { continue };
        let what = match statement {
            Statement::DriveOff(name) if !is_gas(case, name) => "Driving off what the library does not know as a gas",
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

/// Whether a name means a substance that is known as a gas.
fn is_gas(case: &Case, name: &Slot<Name>) -> bool {
    let Some(name) = name.given() else { return true };
    match case.context.scope.find(Namespace::Ingredient, &NameKey::new(&name.text), &name.text) {
        Lookup::One(definition) => case.context.constituents.phases.gas(&definition.key).is_some(),
        _ => true,
    }
}
