//! A small database built by hand, with its sources, for the checks.

use crate::chemistry::*;

/// Goldberg, Kishore & Lennen 2002, J. Phys. Chem. Ref. Data 31:231: pK, ΔH°/J mol⁻¹, ΔCp°/J mol⁻¹ K⁻¹ at 25 °C, I = 0.
pub fn pKa(b: &mut ChemistryBuilder, name: &str, pKa: f64, enthalpy: f64, heat_capacity: f64) -> ConstantId {
    b.add_constant(Constant {
        name: name.into(),
        value: ConstantValue::VantHoff {
            log10_k: -pKa,
            enthalpy_J_per_mol: Some(enthalpy),
            heat_capacity_J_per_mol_K: Some(heat_capacity),
        },
        standard_uncertainty: 0.01,
    })
}

/// A component with the acids on it, from the least acidic up.
pub fn acid(
    b: &mut ChemistryBuilder,
    name: &str,
    charge: i32,
    molar_mass_g_per_mol: f64,
    constants: &[ConstantId],
) -> (ComponentId, Vec<SpeciesId>) {
    let id = b.add_component(Component {
        name: name.into(),
        charge,
        molar_mass_kg_per_mol: molar_mass_g_per_mol / 1000.0,
    });
    let mut species = vec![b.base_species(id).unwrap()];
    for n in 1..=constants.len() {
        species.push(b.add_species(Species {
            name: format!("H{n} {name}"),
            charge: charge + n as i32,
            parts: vec![(id, 1)],
            hydrogen: n as i32,
            water: 0,
            log_beta: constants[..n].iter().map(|&c| (-1.0, c)).collect(),
        }));
    }
    (id, species)
}

/// Ions of the checks.
#[allow(dead_code)]
pub struct Laboratory {
    pub chemistry: Chemistry,
    pub sodium: ComponentId,
    pub potassium: ComponentId,
    pub chloride: ComponentId,
    pub phosphate: ComponentId,
    pub acetate: ComponentId,
    pub tris: ComponentId,
    pub borate: ComponentId,
    pub citrate: ComponentId,
    pub calcium: ComponentId,
}

pub fn laboratory() -> Laboratory {
    let mut b = ChemistryBuilder::new();
    let (sodium, na) = acid(&mut b, "sodium", 1, 22.990, &[]);
    let (potassium, k) = acid(&mut b, "potassium", 1, 39.098, &[]);
    let (chloride, cl) = acid(&mut b, "chloride", -1, 35.45, &[]);
    let p3 = pKa(&mut b, "hydrogen phosphate", 12.35, 16000.0, -242.0);
    let p2 = pKa(&mut b, "dihydrogen phosphate", 7.198, 3600.0, -230.0);
    let p1 = pKa(&mut b, "phosphoric acid", 2.148, -8000.0, -141.0);
    let (phosphate, po4) = acid(&mut b, "phosphate", -3, 94.971, &[p3, p2, p1]);
    let ac = pKa(&mut b, "acetic acid", 4.756, -410.0, -142.0);
    let (acetate, ac_species) = acid(&mut b, "acetate", -1, 59.044, &[ac]);
    let t = pKa(&mut b, "protonated Tris", 8.072, 47450.0, -59.0);
    let (tris, _) = acid(&mut b, "Tris", 0, 121.136, &[t]);
    let c3 = pKa(&mut b, "hydrogen citrate", 6.396, -3380.0, -254.0);
    let c2 = pKa(&mut b, "dihydrogen citrate", 4.761, 2230.0, -178.0);
    let c1 = pKa(&mut b, "citric acid", 3.128, 4070.0, -131.0);
    let (citrate, cit) = acid(&mut b, "citrate", -3, 189.099, &[c3, c2, c1]);
    let (calcium, ca) = acid(&mut b, "calcium", 2, 40.078, &[]);
    // log K 4.87 from memory; only solver and derivatives are checked with it.
    let cacit = pKa(&mut b, "calcium citrate", -4.87, 0.0, 0.0);
    b.add_species(Species {
        name: "calcium citrate".into(),
        charge: -1,
        parts: vec![(calcium, 1), (citrate, 1)],
        hydrogen: 0,
        water: 0,
        log_beta: vec![(1.0, cacit)],
    });
    let boric = pKa(&mut b, "boric acid", 9.237, 13800.0, -240.0);
    let borate = b.add_component(Component { name: "borate".into(), charge: -1, molar_mass_kg_per_mol: 0.078840 });
    b.add_species(Species {
        name: "boric acid".into(),
        charge: 0,
        parts: vec![(borate, 1)],
        hydrogen: 1,
        water: -1,
        log_beta: vec![(-1.0, boric)],
    });
    // NEA Thermochemical Database (Grenthe et al. 1992; Guillaumont et al. 2003): SIT coefficients.
    let hydrogen = ChemistryBuilder::HYDROGEN;
    for (one, other, epsilon) in [
        (na[0], cl[0], 0.03),
        (k[0], cl[0], 0.00),
        (hydrogen, cl[0], 0.12),
        (na[0], ChemistryBuilder::HYDROXIDE, 0.04),
        (k[0], ChemistryBuilder::HYDROXIDE, 0.09),
        (na[0], po4[1], -0.15),
        (na[0], po4[2], -0.08),
        (k[0], po4[1], -0.10),
        (k[0], po4[2], -0.14),
        (na[0], cit[0], -0.076),
        (ca[0], cl[0], 0.14),
    ] {
        b.add_interaction(one, other, Interaction { epsilon_kg_per_mol: epsilon, uncertainty: 0.01 });
    }
    // Millero 1971, Chem. Rev. 71:147: partial molar volumes at 25 °C.
    for (species, volume) in [
        (na[0], -1.21),
        (k[0], 9.02),
        (cl[0], 17.83),
        (ca[0], -17.85),
        (po4[1], 7.6),
        (po4[2], 29.1),
        (ChemistryBuilder::HYDROXIDE, -4.04),
    ] {
        b.set_molar_volume(species, volume);
    }
    // CRC Handbook of Chemistry and Physics, 'Ionic conductivity and diffusion at infinite dilution', 25 °C.
    for (species, conductivity) in
        [(na[0], 50.08), (k[0], 73.48), (cl[0], 76.31), (ca[0], 118.94), (ac_species[0], 40.9)]
    {
        b.set_molar_conductivity(species, conductivity);
    }
    let chemistry = b.finish().unwrap();
    Laboratory { chemistry, sodium, potassium, chloride, phosphate, acetate, tris, borate, citrate, calcium }
}

pub fn celsius(t: f64) -> f64 {
    t + 273.15
}
