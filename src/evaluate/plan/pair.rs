//! Pairs: two forms that differ by protons, or two solutions, split to meet a target.

use super::{Dose, Planner, Work, pick};
use crate::chemistry::ComponentId;
use crate::evaluate::goods::Goods;
use crate::evaluate::Refusal;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Pair, Qualifiers};
use crate::units::Dimension;

impl Planner<'_, '_> {
    pub(super) fn pair(&self, pair: &Pair) -> Result<Work, Refusal> {
        let goal = pick(&pair.goals, self.index).ok_or_else(Refusal::reported)?.clone();
        let none = Qualifiers::default();
        let is_volume = pair.amount.dimension() == Dimension::Volume;
        let members = [self.goods(&pair.first, is_volume, &none)?, self.goods(&pair.second, is_volume, &none)?];
        if is_volume {
            let [Some(first), Some(second)] = [members[0].density, members[1].density] else {
                return Err(self.not_a_pair(pair, "their volumes are not known").into());
            };
            return Ok(Work::Pair {
                members,
                kg_per_unit: [first / 1000.0, second / 1000.0],
                total: Dose::Fixed(pair.amount.value),
                goal,
            });
        }
        let Some(shared) = self.shared(&members) else {
            return Err(self.not_a_pair(pair, "they share nothing that differs by protons only").into());
        };
        let per_unit = |goods: &Goods| goods.per_kg.amounts_mol.get(&shared).map_or(f64::INFINITY, |moles| 1.0 / moles);
        let total = match pair.amount.dimension() {
            Dimension::Amount => Dose::Fixed(pair.amount.value),
            Dimension::AmountConcentration => Dose::PerLitre(pair.amount.value),
            Dimension::Molality => Dose::PerKgWater(pair.amount.value),
            _ => {
                return Err(Finding::new(
                    Code::UnitOfWrongKind,
                    Anchor::new(self.at.line, pair.amount.span),
                    "A pair needs its total as an amount: mol, mol/L or mol/kg.",
                )
                .help("State the total in mmol/L, or the volume of two solutions.")
                .into());
            }
        };
        let kg_per_unit = [per_unit(&members[0]), per_unit(&members[1])];
        Ok(Work::Pair { members, kg_per_unit, total, goal })
    }

    /// The component that both members give and that differs between them by protons only.
    fn shared(&self, members: &[Goods; 2]) -> Option<ComponentId> {
        let chemistry = &self.context.constituents.chemistry;
        let [first, second] = members;
        let protonates = |component: &ComponentId| {
            chemistry.all_species().any(|(_, species)| {
                species.hydrogen > 0 && species.parts.len() == 1 && species.parts.iter().all(|(part, _)| part == component)
            })
        };
        let mut shared = first
            .per_kg
            .amounts_mol
            .iter()
            .filter(|(component, amount)| {
                **amount > 0.0
                    && second.per_kg.amounts_mol.get(component).is_some_and(|other| *other > 0.0)
                    && protonates(component)
            })
            .map(|(component, _)| *component);
        let one = shared.next()?;
        if shared.next().is_some() {
            return None;
        }
        let protons = |goods: &Goods| {
            goods.per_kg.amounts_mol.get(&one).map_or(0.0, |amount| goods.per_kg.hydrogen_mol / amount)
        };
        ((protons(first) - protons(second)).abs() > 1e-6).then_some(one)
    }

    fn not_a_pair(&self, pair: &Pair, why: &str) -> Finding {
        Finding::new(
            Code::NotAPair,
            Anchor::new(self.at.line, pair.first.at.span.to(pair.second.at.span)),
            format!("{} and {} are not a pair: {why}.", pair.first.text, pair.second.text),
        )
        .help("State one of them by amount and bring the other in with `q.s. … to pH`.")
    }
}
