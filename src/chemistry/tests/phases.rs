//! Solids and gases beside a solution: balances close, indices vanish, and the figures are those of the handbooks.

use super::laboratory::acid;
use crate::chemistry::gases::{CARBON_DIOXIDE_OF_AIR_Pa, water_vapour_Pa};
use crate::chemistry::*;

const T: f64 = 298.15;

struct Shelf {
    chemistry: Chemistry,
    calcium: ComponentId,
    sulfate: ComponentId,
    carbonate: ComponentId,
    silver: ComponentId,
    chloride: ComponentId,
    sodium: ComponentId,
    gypsum: PhaseId,
    calcite: PhaseId,
    aragonite: PhaseId,
    portlandite: PhaseId,
    silver_chloride: PhaseId,
    carbon_dioxide: PhaseId,
}

fn constant(b: &mut ChemistryBuilder, log10_k: f64, enthalpy: f64) -> ConstantId {
    let value = ConstantValue::VantHoff { log10_k, enthalpy_J_per_mol: Some(enthalpy), heat_capacity_J_per_mol_K: None };
    b.add_constant(Constant { name: "constant".into(), value, standard_uncertainty: 0.02 })
}

/// Plummer & Busenberg 1982 for the carbonates and carbon dioxide; CODATA 1989 for silver chloride; the rest from memory.
fn shelf() -> Shelf {
    let mut b = ChemistryBuilder::new();
    let (second, first) = (constant(&mut b, -10.329, 14_900.0), constant(&mut b, -6.352, 9_100.0));
    let (carbonate, _) = acid(&mut b, "carbonate", -2, 60.009, &[second, first]);
    let (calcium, _) = acid(&mut b, "calcium", 2, 40.078, &[]);
    let (sulfate, _) = acid(&mut b, "sulfate", -2, 96.06, &[]);
    let (silver, _) = acid(&mut b, "silver", 1, 107.868, &[]);
    let (chloride, _) = acid(&mut b, "chloride", -1, 35.45, &[]);
    let (sodium, _) = acid(&mut b, "sodium", 1, 22.99, &[]);
    for (name, parts, charge, log10_k) in [
        ("calcium sulfate", vec![(calcium, 1), (sulfate, 1)], 0, 2.31),
        ("calcium carbonate", vec![(calcium, 1), (carbonate, 1)], 0, 3.22),
    ] {
        let log_beta = vec![(1.0, constant(&mut b, log10_k, 0.0))];
        b.add_species(Species { name: name.into(), charge, parts, hydrogen: 0, water: 0, log_beta });
    }
    let ionisation = ChemistryBuilder::WATER_IONISATION;
    let mut solid = |name: &str, parts: Vec<(ComponentId, u32)>, hydrogen, water, log10_k, forms, more: &[(f64, ConstantId)]| {
        let mut log_k = vec![(1.0, constant(&mut b, log10_k, 0.0))];
        log_k.extend_from_slice(more);
        b.add_phase(Phase { name: name.into(), kind: PhaseKind::Solid(forms), parts, hydrogen, water, log_k })
    };
    let gypsum = solid("gypsum", vec![(calcium, 1), (sulfate, 1)], 0, 2.0, -4.58, Forming::Readily, &[]);
    let calcite = solid("calcite", vec![(calcium, 1), (carbonate, 1)], 0, 0.0, -8.48, Forming::Readily, &[]);
    let aragonite = solid("aragonite", vec![(calcium, 1), (carbonate, 1)], 0, 0.0, -8.336, Forming::Readily, &[]);
    let portlandite = solid("portlandite", vec![(calcium, 1)], -2, 2.0, -5.19, Forming::Readily, &[(-2.0, ionisation)]);
    let silver_chloride = solid("silver chloride", vec![(silver, 1), (chloride, 1)], 0, 0.0, -9.75, Forming::AtOnce, &[]);
    let henry = constant(&mut b, -1.468, -19_980.0);
    // CO2(g) + H2O = CO3 + 2 H.
    let log_k = vec![(1.0, henry), (1.0, first), (1.0, second)];
    let carbon_dioxide = b.add_phase(Phase {
        name: "carbon dioxide".into(),
        kind: PhaseKind::Gas,
        parts: vec![(carbonate, 1)],
        hydrogen: 2,
        water: -1.0,
        log_k,
    });
    let chemistry = b.finish().unwrap();
    Shelf {
        chemistry, calcium, sulfate, carbonate, silver, chloride, sodium, gypsum, calcite, aragonite, portlandite,
        silver_chloride, carbon_dioxide,
    }
}

impl Shelf {
    fn closed(&self, mixture: &Mixture) -> State {
        self.chemistry.solve(mixture, T, &Settings::default()).unwrap()
    }

    /// Everything that was there is in the liquid, the solids or the gas, and the liquid by itself is the same liquid.
    fn check(&self, before: &State, settled: &Settled) {
        let mut all = settled.state.mixture().clone();
        for (id, amount) in &settled.solids {
            assert!(*amount > 0.0);
            all.add(&self.chemistry.phase(*id).unwrap().mixture(), *amount);
        }
        for (id, amount) in &settled.taken_up {
            all.add(&self.chemistry.phase(*id).unwrap().mixture(), -amount);
        }
        let mixture = before.mixture();
        assert!((all.water_kg - mixture.water_kg).abs() < 1e-12, "{} {}", all.water_kg, mixture.water_kg);
        assert!((all.hydrogen_mol - mixture.hydrogen_mol).abs() < 1e-12);
        for (id, amount) in &all.amounts_mol {
            let was = mixture.amounts_mol.get(id).copied().unwrap_or(0.0);
            assert!((amount - was).abs() < 1e-11 * was.max(1e-2), "{id:?}: {amount} {was}");
        }
        for (id, _) in &settled.solids {
            assert!(settled.state.saturation_index(*id).unwrap().abs() < 1e-9);
        }
        let alone = self.closed(settled.state.mixture());
        assert!((alone.pH() - settled.state.pH()).abs() < 1e-8, "{} {}", alone.pH(), settled.state.pH());
        assert!((alone.water_kg - settled.state.water_kg).abs() < 1e-10);
    }
}

#[test]
fn excess_gypsum_leaves_a_saturated_solution() {
    let shelf = shelf();
    let mixture = Mixture::water(1.0).with(shelf.calcium, 0.1).with(shelf.sulfate, 0.1);
    let before = shelf.closed(&mixture);
    assert!(before.saturation_index(shelf.gypsum).unwrap() > 0.5);
    let settled = before.settled(Phase::forms).unwrap();
    shelf.check(&before, &settled);
    assert_eq!(settled.solids.len(), 1);
    // 15.2 mmol/kg at 25 °C (Marshall & Slusher 1966, from memory); this small shelf has no interactions.
    let dissolved = settled.state.mixture().amounts_mol[&shelf.calcium];
    assert!((dissolved - 0.0152).abs() < 0.001, "{dissolved}");
    // Two moles of water went with each mole of the solid.
    assert!(settled.state.mixture().water_kg < 1.0 - 0.08 * 2.0 * 0.018);
}

#[test]
fn a_clear_solution_stays_as_it_is() {
    let shelf = shelf();
    let before = shelf.closed(&Mixture::water(1.0).with(shelf.calcium, 0.001).with(shelf.sulfate, 0.001));
    let settled = before.settled(Phase::forms).unwrap();
    assert!(settled.solids.is_empty());
    assert_eq!(settled.state, before);
}

#[test]
fn water_in_air_has_its_textbook_ph() {
    let shelf = shelf();
    let before = shelf.closed(&Mixture::water(1.0));
    let settled = before.under(shelf.carbon_dioxide, CARBON_DIOXIDE_OF_AIR_Pa).unwrap();
    shelf.check(&before, &settled);
    assert!((settled.state.pH() - 5.60).abs() < 0.02, "{}", settled.state.pH());
    let pressure = settled.state.partial_pressure_Pa(shelf.carbon_dioxide).unwrap();
    assert!((pressure - CARBON_DIOXIDE_OF_AIR_Pa).abs() < 1e-6);
    assert!(settled.taken_up[0].1 > 1e-5);
}

#[test]
fn calcite_in_air_has_its_textbook_ph() {
    let shelf = shelf();
    let before = shelf.closed(&Mixture::water(1.0).with(shelf.calcium, 0.01).with(shelf.carbonate, 0.01));
    // pH 8.3 under 10^-3.5 atm (Stumm & Morgan 1996, Aquatic Chemistry; from memory).
    let settled = before.equilibrated(&[(shelf.carbon_dioxide, 32.0)], Phase::forms).unwrap();
    shelf.check(&before, &settled);
    assert!((settled.state.pH() - 8.3).abs() < 0.05, "{}", settled.state.pH());
    assert_eq!(settled.solids.len(), 1);
    assert_eq!(settled.solids[0].0, shelf.calcite);
    assert!(settled.state.saturation_index(shelf.aragonite).unwrap() < 0.0);
}

#[test]
fn lye_takes_up_carbon_dioxide_of_the_air() {
    let shelf = shelf();
    let before = shelf.closed(&Mixture::water(1.0).with(shelf.sodium, 0.01).with_hydrogen(-0.01));
    let settled = before.under(shelf.carbon_dioxide, CARBON_DIOXIDE_OF_AIR_Pa).unwrap();
    shelf.check(&before, &settled);
    assert!(settled.state.pH() > 8.5 && settled.state.pH() < 9.5);
    assert!((settled.taken_up[0].1 - 0.0094).abs() < 0.0006, "{:?}", settled.taken_up);
}

#[test]
fn silver_goes_but_for_a_trace() {
    let shelf = shelf();
    let mixture = Mixture::water(1.0).with(shelf.silver, 0.1).with(shelf.chloride, 0.3).with(shelf.sodium, 0.2);
    let before = shelf.closed(&mixture);
    let settled = before.settled(Phase::forms).unwrap();
    shelf.check(&before, &settled);
    let silver = settled.state.mixture().amounts_mol[&shelf.silver];
    assert!(silver > 1e-10 && silver < 2e-9, "{silver}");
    assert_eq!(settled.solids[0].0, shelf.silver_chloride);
}

#[test]
fn several_solids_settle_together() {
    let shelf = shelf();
    let mixture = Mixture::water(1.0)
        .with(shelf.calcium, 0.5)
        .with(shelf.sulfate, 0.2)
        .with(shelf.carbonate, 0.1)
        .with(shelf.silver, 0.01)
        .with(shelf.chloride, 0.01)
        .with_hydrogen(-0.4);
    let before = shelf.closed(&mixture);
    let settled = before.settled(Phase::forms).unwrap();
    shelf.check(&before, &settled);
    let names: Vec<PhaseId> = settled.solids.iter().map(|(id, _)| *id).collect();
    for id in [shelf.gypsum, shelf.calcite, shelf.portlandite, shelf.silver_chloride] {
        assert!(names.contains(&id), "{names:?}");
    }
    for (id, index) in settled.state.saturation_indices() {
        assert!(index < 1e-6, "{id:?} {index}");
    }
    // Saturated lime has pH 12.4 to 12.5 at 25 °C (IUPAC 2002); this shelf has no CaOH+.
    assert!((settled.state.pH() - 12.45).abs() < 0.15, "{}", settled.state.pH());
}

#[test]
fn the_stabler_of_two_forms_takes_the_place_of_the_other() {
    let shelf = shelf();
    let before = shelf.closed(&Mixture::water(1.0).with(shelf.calcium, 0.01).with(shelf.carbonate, 0.01));
    let mut solids = vec![shelf.aragonite, shelf.calcite];
    assert!(before.with_phases(&[], &solids).unwrap().is_none());
    let settled = before.exchanged(&[], &mut solids).unwrap();
    assert_eq!(solids, [shelf.calcite]);
    shelf.check(&before, &settled);
    let slow = before.settled(|phase| phase.name == "aragonite").unwrap();
    assert!(slow.state.saturation_index(shelf.calcite).unwrap() > 0.1);
}

/// International Association for the Properties of Water and Steam, SR1-86(1992): 0.611 213 kPa at 0 °C, 101.325 kPa at 373.1243 K;
/// 6.2823 kPa at 37 °C (CRC Handbook).
#[test]
fn vapour_pressure_of_water_is_that_of_the_steam_tables() {
    assert!((water_vapour_Pa(273.15) - 611.213).abs() < 0.01);
    assert!((water_vapour_Pa(310.15) - 6_282.3).abs() < 3.0, "{}", water_vapour_Pa(310.15));
    assert!((water_vapour_Pa(373.1243) / 101_325.0 - 1.0).abs() < 1e-4);
}
