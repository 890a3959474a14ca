//! Properties of liquid water at 0.1 MPa between 0 °C and 100 °C: density, compressibility, viscosity, permittivity, ionisation.

/// Molar mass of water, kg/mol (IAPWS R11-07, table 2).
pub const MOLAR_MASS_kg_per_mol: f64 = 0.018015268;
/// Zero of the Celsius scale, K.
pub const ZERO_CELSIUS_K: f64 = 273.15;
/// Temperatures at which the formulas below hold, K.
pub const RANGE_K: (f64, f64) = (273.15, 373.15);

/// Density of air-free water, kg/m³: Tanaka et al. 2001 (Metrologia 38:301) up to 40 °C, Kell 1975 (J. Chem. Eng. Data 20:97) above, moved by
/// their difference at 40 °C, 6e-7 of the density, so that nothing jumps there.
pub fn density_kg_per_m3(temperature_K: f64) -> f64 {
    const JOINT_C: f64 = 40.0;
    let t = temperature_K - ZERO_CELSIUS_K;
    if t <= JOINT_C { tanaka(t) } else { kell(t) + (tanaka(JOINT_C) - kell(JOINT_C)) }
}

fn tanaka(t: f64) -> f64 {
    999.974950 * (1.0 - (t - 3.983035) * (t - 3.983035) * (t + 301.797) / (522528.9 * (t + 69.34881)))
}

fn kell(t: f64) -> f64 {
    let numerator = 999.83952
        + t * (16.945176 + t * (-7.9870401e-3 + t * (-46.170461e-6 + t * (105.56302e-9 - t * 280.54253e-12))));
    numerator / (1.0 + 16.879850e-3 * t)
}

/// Isothermal compressibility, 1/Pa: Kell 1975 (J. Chem. Eng. Data 20:97).
pub fn compressibility_per_Pa(temperature_K: f64) -> f64 {
    let t = temperature_K - ZERO_CELSIUS_K;
    let numerator = 50.88496
        + t * (0.6163813 + t * (1.459187e-3 + t * (20.08438e-6 + t * (-58.47727e-9 + t * 410.4110e-12))));
    numerator / (1.0 + 19.67348e-3 * t) * 1e-11
}

/// Viscosity of the liquid at 0.1 MPa, Pa·s: IAPWS SR6-08(2011), equation for the viscosity, −20 °C to 110 °C.
pub fn viscosity_Pa_s(temperature_K: f64) -> f64 {
    let t = temperature_K / 300.0;
    1e-6 * (280.68 * libm::pow(t, -1.9)
        + 511.45 * libm::pow(t, -7.7)
        + 61.131 * libm::pow(t, -19.6)
        + 0.45903 * libm::pow(t, -40.0))
}

/// Static relative permittivity at the density of the liquid at 0.1 MPa: IAPWS R8-97 (Fernández et al. 1997).
pub fn relative_permittivity(temperature_K: f64) -> f64 {
    permittivity_and_slope(density_kg_per_m3(temperature_K), temperature_K).0
}

/// Static relative permittivity ε as a function of density (kg/m³) and temperature (K), and ∂ ln ε/∂ ln ρ: IAPWS R8-97, equations 1 to 5.
pub fn permittivity_and_slope(density_kg_per_m3: f64, temperature_K: f64) -> (f64, f64) {
    const AVOGADRO_per_mol: f64 = 6.0221367e23;
    const BOLTZMANN_J_per_K: f64 = 1.380658e-23;
    const VACUUM_PERMITTIVITY_F_per_m: f64 = 8.854187817e-12;
    const POLARISABILITY_C2_m2_per_J: f64 = 1.636e-40;
    const DIPOLE_C_m: f64 = 6.138e-30;
    let molar_density = density_kg_per_m3 / MOLAR_MASS_kg_per_mol;
    let (delta, tau) = (density_kg_per_m3 / 322.0, 647.096 / temperature_K);
    // Powers by multiplication: this is called for every solution.
    let (d2, d3) = (delta * delta, delta * delta * delta);
    let (t2, root) = (tau * tau, libm::sqrt(tau));
    let t5 = t2 * t2 * tau;
    let terms = [
        (0.978224486826 * delta * libm::sqrt(root), 1.0),
        (-0.957771379375 * delta * tau, 1.0),
        (0.237511794148 * delta * t2 * root, 1.0),
        (0.714692244396 * d2 * tau * root, 2.0),
        (-0.298217036956 * d3 * tau * root, 3.0),
        (-0.108863472196 * d3 * t2 * root, 3.0),
        (0.949327488264e-1 * d2 * d2 * t2, 4.0),
        (-0.980469816509e-2 * d3 * d2 * t2, 5.0),
        (0.165167634970e-4 * d3 * d3 * t5, 6.0),
        (0.937359795772e-4 * d3 * d3 * delta * root, 7.0),
        (-0.123179218720e-9 * d3 * d3 * d3 * delta * t5 * t5, 10.0),
        (0.196096504426e-2 * delta * libm::pow(temperature_K / 228.0 - 1.0, -1.2), 1.0),
    ];
    let g = 1.0 + terms.iter().map(|(term, _)| term).sum::<f64>();
    let dg = terms.iter().map(|(term, power)| term * power).sum::<f64>();
    let a = AVOGADRO_per_mol * DIPOLE_C_m * DIPOLE_C_m * molar_density * g
        / (VACUUM_PERMITTIVITY_F_per_m * BOLTZMANN_J_per_K * temperature_K);
    let b = AVOGADRO_per_mol * POLARISABILITY_C2_m2_per_J * molar_density / (3.0 * VACUUM_PERMITTIVITY_F_per_m);
    let root = libm::sqrt(9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b);
    let permittivity = (1.0 + a + 5.0 * b + root) / (4.0 - 4.0 * b);
    // Derivatives with respect to ln ρ.
    let (da, db) = (a * (1.0 + dg / g), b);
    let droot = ((1.0 + a + 5.0 * b) * da + (9.0 + 5.0 * a + 9.0 * b) * db) / root;
    let slope = (da + 5.0 * db + droot) / (4.0 - 4.0 * b) / permittivity + db / (1.0 - b);
    (permittivity, slope)
}

/// pKw on the molality scale of the liquid at 0.1 MPa.
pub fn pKw(temperature_K: f64) -> f64 {
    pKw_at(density_kg_per_m3(temperature_K), temperature_K)
}

/// pKw on the molality scale as a function of density (kg/m³) and temperature (K): IAPWS R11-07 (Bandura & Lvov 2006). The revision of
/// 2024 differs by up to 0.0021 at 100 °C, and by 0.0001 up to 40 °C.
pub fn pKw_at(density_kg_per_m3: f64, temperature_K: f64) -> f64 {
    let t = temperature_K;
    let density = density_kg_per_m3 / 1000.0;
    let q = density * libm::exp(-0.864671 + 8659.19 / t - 22786.2 / (t * t) * libm::pow(density, 2.0 / 3.0));
    let gas = 0.61415 + 48251.33 / t - 67707.93 / (t * t) + 10102100.0 / (t * t * t);
    -12.0 * (libm::log10(1.0 + q) - q / (q + 1.0) * density * (0.642044 - 56.8534 / t - 0.375754 * density))
        + gas
        + 2.0 * libm::log10(MOLAR_MASS_kg_per_mol)
}
