//! Volume of a solution from partial molar volumes of its species.
//!
//! Published volumes are at 25 °C and infinite dilution with V(H⁺) = 0; the Debye–Hückel term makes them apparent volumes at the ionic
//! strength at hand, and they expand with temperature as water does.

use super::{Chemistry, SpeciesId, constants::REFERENCE_K, debye_hueckel, water};

/// Volume that a unit of squared charge takes from the water around it, cm³/mol. An estimate for ions without a published volume: the
/// steps PO₄³⁻ to HPO₄²⁻ to H₂PO₄⁻ to H₃PO₄ and acetate to acetic acid are 7 to 18 (Millero 1971, Chem. Rev. 71:147).
const ELECTROSTRICTION_cm3_per_mol: f64 = 8.0;
/// Volume of dissolved matter, cm³ for each gram, where nothing is published: common for organic solutes, no source.
const SPECIFIC_VOLUME_cm3_per_g: f64 = 0.7;
/// Denominator constant of the Debye–Hückel term of volumes, (kg/mol)^½ (Pitzer 1973, J. Phys. Chem. 77:268).
const B: f64 = 1.2;

/// Partial molar volume of a species at 25 °C and infinite dilution, cm³/mol, and whether it is an estimate.
pub fn molar_volume_cm3_per_mol(chemistry: &Chemistry, id: SpeciesId) -> (f64, bool) {
    if id == chemistry.hydrogen() {
        return (0.0, false);
    }
    if let Some(volume) = chemistry.molar_volume_cm3_per_mol(id) {
        return (volume, false);
    }
    let Some(species) = chemistry.species(id) else { return (0.0, true) };
    // From the volumes of its parts, less the electrostriction that they lose.
    let mut volume = -ELECTROSTRICTION_cm3_per_mol * f64::from(species.charge * species.charge);
    for &(part, count) in &species.parts {
        let Some(component) = chemistry.component(part) else { continue };
        let squared = f64::from(component.charge * component.charge);
        let published = chemistry.base_species(part).and_then(|base| chemistry.molar_volume_cm3_per_mol(base));
        let bare = match published {
            Some(published) => published + ELECTROSTRICTION_cm3_per_mol * squared,
            None => SPECIFIC_VOLUME_cm3_per_g * component.molar_mass_kg_per_mol * 1000.0,
        };
        volume += f64::from(count) * bare;
    }
    // OH⁻ has −4.04 cm³/mol (Millero 1971); other water that a species contains keeps its volume.
    if id == chemistry.hydroxide() {
        return (-4.04, false);
    }
    (volume + 18.07 * f64::from(species.water), true)
}

/// Volume of free water (kg) with dissolved species (mol) at an ionic strength (mol/kg), L; and whether species without a published volume
/// make up more than a tenth of a per cent of it.
pub(crate) fn volume_L(
    chemistry: &Chemistry,
    water_kg: f64,
    species_mol: impl Iterator<Item = (SpeciesId, f64)>,
    ionic_strength_mol_per_kg: f64,
    temperature_K: f64,
) -> (f64, bool) {
    let expansion = water::density_kg_per_m3(REFERENCE_K) / water::density_kg_per_m3(temperature_K);
    let (mut dissolved_cm3, mut estimated_cm3) = (0.0, 0.0);
    for (id, amount_mol) in species_mol {
        let (volume, estimated) = molar_volume_cm3_per_mol(chemistry, id);
        dissolved_cm3 += amount_mol * volume;
        if estimated {
            // An estimate may be off by its size or by that of the smallest molecule.
            estimated_cm3 += amount_mol * volume.abs().max(18.0);
        }
    }
    let excess_L = water_kg * debye_hueckel::volume_slope(temperature_K) * ionic_strength_mol_per_kg / B
        * libm::log(1.0 + B * libm::sqrt(ionic_strength_mol_per_kg));
    let volume = water_kg * 1000.0 / water::density_kg_per_m3(temperature_K) + dissolved_cm3 * expansion / 1000.0 + excess_L;
    (volume, estimated_cm3 > volume)
}
