//! A component of which the solution has none: how a first trace of it would spread over its forms, and what that takes from the others.
//!
//! Needed for derivatives in the direction of something new, such as a titrant; exact to first order, without another solve.

use super::{ComponentId, State, water::MOLAR_MASS_kg_per_mol as WATER_kg_per_mol};

/// What one mole of an absent component changes.
pub(super) struct Trace {
    /// What its forms take of hydrogen and of each component present, in the order of the balances, mol.
    pub taken: Vec<f64>,
    /// Water that its forms contain, mol.
    pub water: f64,
    /// By how much ln m of each species present would change at fixed activities, through its ions.
    pub sources: Vec<f64>,
}

/// A form of the component: hydrogen, other components, water, charge, ε with each species present, and ln of its weight.
struct Form {
    parts: Vec<(usize, f64)>,
    water: f64,
    squared_charge: f64,
    interactions: Vec<(usize, f64)>,
    ln_weight: f64,
}

impl Trace {
    /// The trace of a component that is not in the state's mixture.
    pub fn new(state: &State, component: ComponentId) -> Self {
        let (system, point) = (&state.system, &state.point);
        let forms = forms(state, component);
        let top = forms.iter().map(|form| form.ln_weight).fold(f64::NEG_INFINITY, f64::max);
        let total: f64 = forms.iter().map(|form| libm::exp(form.ln_weight - top)).sum();
        let mut trace =
            Self { taken: vec![0.0; system.totals_mol.len()], water: 0.0, sources: vec![0.0; system.species.len()] };
        let slope = system.model.ionic_term(system.slope, state.ionic_strength_mol_per_kg).slope_kg_per_mol;
        for form in forms {
            let share = libm::exp(form.ln_weight - top) / total;
            for (column, count) in form.parts {
                if let Some(taken) = trace.taken.get_mut(column) {
                    *taken += share * count;
                }
            }
            trace.water += share * form.water;
            // ∂ ln γ/∂m of each species present by this form, and ∂ ln a_w/∂m by Gibbs–Duhem.
            let mut by_form: Vec<f64> = system.charge.iter().map(|z| -0.5 * slope * z * z * form.squared_charge).collect();
            for (row, epsilon) in form.interactions {
                if let Some(entry) = by_form.get_mut(row) {
                    *entry += epsilon;
                }
            }
            let osmotic = 1.0 + by_form.iter().zip(&point.molality).map(|(g, m)| g * m).sum::<f64>();
            let molality = share / point.water_kg;
            for ((source, g), water) in trace.sources.iter_mut().zip(by_form).zip(&system.water) {
                *source -= (g + water * WATER_kg_per_mol * osmotic) * molality;
            }
        }
        trace
    }
}

/// The forms with one of the component and else only what is present.
fn forms(state: &State, component: ComponentId) -> Vec<Form> {
    let (system, point, chemistry) = (&state.system, &state.point, &state.chemistry);
    let term = system.model.ionic_term(system.slope, state.ionic_strength_mol_per_kg);
    let column = |id: ComponentId| system.components.iter().position(|c| *c == id).map(|at| at + 1);
    let mut forms = Vec::new();
    for (id, species) in chemistry.all_species() {
        let own: u32 = species.parts.iter().filter(|(part, _)| *part == component).map(|(_, count)| count).sum();
        let others: Option<Vec<(usize, f64)>> = species
            .parts
            .iter()
            .filter(|(part, _)| *part != component)
            .map(|&(part, count)| column(part).map(|column| (column, f64::from(count))))
            .collect();
        let (1, Some(mut parts)) = (own, others) else { continue };
        parts.push((0, f64::from(species.hydrogen)));
        let squared_charge = f64::from(species.charge * species.charge);
        let interactions: Vec<(usize, f64)> = if system.model.uses_interactions() {
            let all = chemistry.interactions(id).iter();
            all.filter_map(|(partner, interaction)| {
                let row = system.species.iter().position(|s| s == partner)?;
                Some((row, interaction.epsilon_kg_per_mol * core::f64::consts::LN_10))
            })
            .collect()
        } else {
            Vec::new()
        };
        let water = f64::from(species.water);
        let mut ln_weight = squared_charge * term.value + water * point.ln_water_activity;
        ln_weight -= interactions.iter().map(|&(row, e)| e * point.molality.get(row).unwrap_or(&0.0)).sum::<f64>();
        ln_weight += parts.iter().map(|&(column, n)| n * point.ln_activity.get(column).unwrap_or(&0.0)).sum::<f64>();
        for &(factor, constant) in &species.log_beta {
            let log10_k = chemistry.constant(constant).map_or(0.0, |c| c.log10_k(state.temperature_K));
            ln_weight += factor * log10_k * core::f64::consts::LN_10;
        }
        forms.push(Form { parts, water, squared_charge, interactions, ln_weight });
    }
    forms
}
