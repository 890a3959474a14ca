//! Water against published tables.

use crate::chemistry::{debye_hueckel, water};

fn close(value: f64, expected: f64, tolerance: f64, what: &str) {
    assert!((value - expected).abs() <= tolerance, "{what}: {value} for {expected}");
}

/// Tanaka et al. 2001, Metrologia 38:301, table 1 (to 40 °C); IAPWS SR6-08(2011) beyond, from which Kell 1975 differs by up to 1.6e-5.
#[test]
fn density() {
    for (t, expected) in [(0.0, 999.8428), (4.0, 999.9749), (20.0, 998.2067), (25.0, 997.0470), (37.0, 993.3316), (40.0, 992.2152)] {
        close(water::density_kg_per_m3(t + 273.15), expected, 4e-3, "density");
    }
    for (t, expected) in [(45.0, 990.2118), (60.0, 983.1947), (75.0, 974.8416), (99.0, 959.0648)] {
        close(water::density_kg_per_m3(t + 273.15), expected, 0.02, "density");
    }
    close(water::density_kg_per_m3(313.1499), water::density_kg_per_m3(313.1501), 1e-4, "density on both sides of 40 °C");
}

/// Kell 1975, J. Chem. Eng. Data 20:97, table of isothermal compressibility (from memory): 45.247e-6/bar at 25 °C, the minimum 44.15 at 46 °C.
#[test]
fn compressibility() {
    close(water::compressibility_per_Pa(298.15) * 1e11, 45.247, 0.01, "compressibility");
    close(water::compressibility_per_Pa(319.15) * 1e11, 44.15, 0.02, "compressibility");
}

/// IAPWS R8-97 (Fernández et al. 1997), static dielectric constant at 0.1 MPa.
#[test]
fn permittivity() {
    for (t, expected) in [(0.0, 87.9033), (25.0, 78.4084), (60.0, 66.7744), (75.0, 62.3179)] {
        close(water::relative_permittivity(t + 273.15), expected, 2e-3, "permittivity");
    }
    // At 100 °C the tabulated point is on the saturation line, within 0.01.
    close(water::relative_permittivity(372.15), 55.78, 0.02, "permittivity");
}

#[test]
fn permittivity_slope_is_that_of_differences() {
    for t in [273.15, 298.15, 350.0] {
        let density = water::density_kg_per_m3(t);
        let at = |factor: f64| libm::log(water::permittivity_and_slope(density * factor, t).0);
        let difference = (at(1.0 + 1e-5) - at(1.0 - 1e-5)) / 2e-5;
        close(water::permittivity_and_slope(density, t).1, difference, 1e-7, "slope");
    }
}

/// The values for computer-program verification in IAPWS R11-07, table 3; then the measurements in cells of Harned & Owen 1958 within
/// 0.004, and the revision of 2024 within 0.0025.
#[test]
fn ionisation() {
    close(water::pKw_at(1000.0, 300.0), 13.906565, 1e-6, "pKw");
    close(water::pKw_at(700.0, 600.0), 11.203153, 1e-6, "pKw");
    for (t, expected) in [(0.0, 14.9435), (10.0, 14.5346), (25.0, 13.9965), (40.0, 13.5348), (60.0, 13.0171)] {
        close(water::pKw(t + 273.15), expected, 4e-3, "pKw");
    }
    for (t, expected) in [(0.0, 14.9465), (25.0, 13.9944), (60.0, 13.0206), (75.0, 12.6971), (100.0, 12.2538)] {
        close(water::pKw(t + 273.15), expected, 2.5e-3, "pKw");
    }
}

/// From IAPWS density, IAPWS R8-97 permittivity and CODATA 2018 constants.
#[test]
fn debye_hueckel_slope() {
    for (t, expected) in [(0.0, 0.49043), (25.0, 0.50978), (60.0, 0.54533), (75.0, 0.56379)] {
        close(debye_hueckel::slope(t + 273.15), expected, 2e-5, "slope");
    }
}

/// Ananthaswamy & Atkinson 1984, J. Chem. Eng. Data 29:81 and Bradley & Pitzer 1979 (from memory): 1.87 to 1.90 cm³·kg^½/mol^(3/2) at 25 °C;
/// the permittivity of IAPWS R8-97 is newer.
#[test]
fn volume_slope() {
    let slope = debye_hueckel::volume_slope(298.15) * 1000.0;
    assert!((1.80..1.95).contains(&slope), "{slope}");
}
