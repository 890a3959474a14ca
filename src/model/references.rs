//! The names that a recipe's lines mention, and lines that one recipe takes over from another.

use super::*;
use crate::finding::Anchor;
use crate::text::{FileId, Span};

impl Action {
    /// The names of what goes into the beaker, in the order of the line; a stock follows what is taken from it.
    pub fn ingredients(&self) -> Vec<&Reference> {
        match self {
            Action::Add(addition) | Action::Alternative(addition) => {
                std::iter::once(&addition.what).chain(&addition.qualifiers.from).collect()
            }
            Action::Pair(pair) => vec![&pair.first, &pair.second],
            Action::MakeUp(make_up) => std::iter::once(&make_up.what).chain(&make_up.alternative).collect(),
            Action::AddAll(reference) => vec![reference],
            Action::BringTo(_)
            | Action::DriveOff(_)
            | Action::Filter
            | Action::Wait(_)
            | Action::Divider(_)
            | Action::Found { .. } => Vec::new(),
        }
    }

    fn goals_mut(&mut self) -> &mut [Goal] {
        match self {
            Action::Pair(pair) => &mut pair.goals,
            Action::MakeUp(make_up) => &mut make_up.goals,
            _ => &mut [],
        }
    }

    /// What the line is to reach; several in a series.
    pub fn goals(&self) -> &[Goal] {
        match self {
            Action::Pair(pair) => &pair.goals,
            Action::MakeUp(make_up) => &make_up.goals,
            _ => &[],
        }
    }

    fn references_mut(&mut self) -> Vec<&mut Reference> {
        match self {
            Action::Add(addition) | Action::Alternative(addition) => {
                std::iter::once(&mut addition.what).chain(&mut addition.qualifiers.from).collect()
            }
            Action::Pair(pair) => vec![&mut pair.first, &mut pair.second],
            Action::MakeUp(make_up) => std::iter::once(&mut make_up.what).chain(&mut make_up.alternative).collect(),
            Action::AddAll(reference) | Action::DriveOff(reference) => vec![reference],
            Action::Found { what, .. } => vec![what],
            Action::BringTo(_) | Action::Filter | Action::Wait(_) | Action::Divider(_) => Vec::new(),
        }
    }

    fn amounts_mut(&mut self) -> &mut [Amount] {
        match self {
            Action::Add(addition) | Action::Alternative(addition) => &mut addition.amounts,
            Action::Pair(pair) => std::slice::from_mut(&mut pair.amount),
            _ => &mut [],
        }
    }
}

impl Entry {
    /// The entry as a line of another recipe: it stands at that recipe's `like` line, and its names keep the meaning that
    /// they have in the file that it comes from.
    pub fn taken_over(&self, at: Anchor, home: FileId) -> Entry {
        let mut action = self.action.clone();
        for amount in action.amounts_mut() {
            amount.span = at.span;
        }
        for goal in action.goals_mut() {
            goal.at = at;
            goal.temperature = goal.temperature.map(|stated| Stated { at, ..stated });
            if let Some(reference) = goal.diluted.as_mut().and_then(|dilution| dilution.with.as_mut()) {
                reference.stand_at(at, home);
            }
        }
        for reference in action.references_mut() {
            reference.stand_at(at, home);
        }
        match &mut action {
            Action::Add(addition) | Action::Alternative(addition) => {
                addition.as_formula.iter_mut().for_each(|stated| stated.at = at);
                addition.qualifiers.stand_at(at);
            }
            Action::MakeUp(make_up) => make_up.qualifiers.stand_at(at),
            _ => {}
        }
        Entry { at, action }
    }
}

impl Reference {
    fn stand_at(&mut self, at: Anchor, home: FileId) {
        self.at = at;
        self.home.get_or_insert(home);
        self.strength = self.strength.map(|strength| Strength { span: Span::empty(at.span.start), ..strength });
    }
}

impl Qualifiers {
    fn stand_at(&mut self, at: Anchor) {
        self.tolerance.iter_mut().for_each(|stated| stated.at = at);
        for stated in [&mut self.purity, &mut self.water, &mut self.dried_at, &mut self.density, &mut self.at] {
            stated.iter_mut().for_each(|stated| stated.at = at);
        }
        for stated in [&mut self.about, &mut self.at_most] {
            stated.iter_mut().for_each(|stated| stated.at = at);
        }
    }
}

impl Recipe {
    /// Every name that the values depend on, apart from constituents.
    pub fn references(&self) -> Vec<&Reference> {
        let mut all = Vec::new();
        for entry in &self.entries {
            all.extend(entry.action.ingredients());
            all.extend(entry.action.goals().iter().filter_map(|goal| goal.diluted.as_ref()?.with.as_ref()));
            if let Action::DriveOff(what) | Action::Found { what, .. } = &entry.action {
                all.push(what);
            }
        }
        all.extend(&self.like);
        all.extend(self.expectations.iter().filter_map(|expectation| expectation.diluted.as_ref()?.with.as_ref()));
        all
    }

    /// Whether something stands at the `like` line: it was taken over, and its words are those of another block.
    pub fn is_taken_over(&self, at: Anchor) -> bool {
        self.like.as_ref().is_some_and(|like| like.at.line == at.line)
    }

    /// The name of a member of a series, as others call it: `NAME (4 mL)`. A solution that is no series has its own name.
    pub fn member_name(&self, name: &str, index: usize) -> String {
        match self.series.get(index).filter(|_| self.members > 1) {
            Some(value) => format!("{name} ({value})"),
            None => name.to_owned(),
        }
    }
}
