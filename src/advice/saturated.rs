//! Which solids a state is saturated with, judged by the most soluble form that forms in practice.

use crate::chemistry::{ComponentId, Phase, PhaseId, State};
use crate::units::format;

/// A solid that a state is saturated with.
pub(super) struct Solid<'a> {
    /// Its handle.
    pub id: PhaseId,
    /// The solid.
    pub phase: &'a Phase,
    /// Its saturation index.
    pub index: f64,
}

/// Products larger than this are of soluble salts, of which every gram beyond saturation crystallises, log₁₀.
const SOLUBLE: f64 = -4.0;

/// What solubilities and the activity model leave open for soluble salts, log₁₀.
const OPEN: f64 = 0.1;

/// For each set of ions that make solids, the most soluble of those that form and that the state is beyond saturation with, where its
/// index is above the limit; soluble salts have one of their own. Solids whose constants are not known at the temperature do not count.
pub(super) fn solids_beyond(state: &State, limit: f64) -> Vec<Solid<'_>> {
    let chemistry = state.chemistry();
    let mut by_ions: Vec<(Vec<ComponentId>, Solid)> = Vec::new();
    for (id, index) in state.saturation_indices() {
        let Some(phase) = chemistry.phase(id).filter(|phase| phase.forms() && phase.holds_at(chemistry, state.temperature_K)) else { continue };
        if index <= 0.0 {
            continue;
        }
        let mut ions: Vec<ComponentId> = phase.parts.iter().map(|(part, _)| *part).collect();
        ions.sort();
        let solid = Solid { id, phase, index };
        match by_ions.iter_mut().find(|(known, _)| *known == ions) {
            Some((_, known)) if index < known.index => *known = solid,
            Some(_) => {}
            None => by_ions.push((ions, solid)),
        }
    }
    let least = |solid: &Solid| if is_soluble(state, solid.phase) { OPEN } else { limit };
    by_ions.into_iter().map(|(_, solid)| solid).filter(|solid| solid.index > least(solid)).collect()
}

/// Whether a solid is a soluble salt.
pub(super) fn is_soluble(state: &State, phase: &Phase) -> bool {
    let own = phase.log_k.first().and_then(|&(_, id)| state.chemistry().constant(id));
    own.is_some_and(|constant| constant.log10_k(state.temperature_K) > SOLUBLE)
}

/// How many times a solution is saturated, in words.
pub(super) fn fold(index: f64) -> String {
    if index > 6.0 { "over a million times".to_owned() } else { format!("{}-fold", format::significant(libm::pow(10.0, index), 2)) }
}
