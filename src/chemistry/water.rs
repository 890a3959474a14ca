//! Properties of liquid water at 0.1 MPa between 0 °C and 100 °C: density, compressibility, permittivity, ionisation.

/// Molar mass of water, kg/mol (IAPWS R11-07, table 2).
pub const MOLAR_MASS_kg_per_mol: f64 = 0.018015268;
/// Zero of the Celsius scale, K.
pub const ZERO_CELSIUS_K: f64 = 273.15;
/// Temperatures at which the formulas below hold, K.
pub const RANGE_K: (f64, f64) = (273.15, 373.15);

/// Density of air-free water, kg/m³: Tanaka et al. 2001 (Metrologia 38:301) up to 40 °C, Kell 1975 (J. Chem. Eng. Data 20:97) above.
pub fn density_kg_per_m3(temperature_K: f64) -> f64 {
    let t = temperature_K - ZERO_CELSIUS_K;
    if t <= 40.0 {
        999.974950 * (1.0 - (t - 3.983035) * (t - 3.983035) * (t + 301.797) / (522528.9 * (t + 69.34881)))
    } else {
        let numerator = 999.83952
            + t * (16.945176 + t * (-7.9870401e-3 + t * (-46.170461e-6 + t * (105.56302e-9 - t * 280.54253e-12))));
        numerator / (1.0 + 16.879850e-3 * t)
    }
}

/// Isothermal compressibility, 1/Pa: Kell 1975 (J. Chem. Eng. Data 20:97).
pub fn compressibility_per_Pa(temperature_K: f64) -> f64 {
    let t = temperature_K - ZERO_CELSIUS_K;
    let numerator = 50.88496
        + t * (0.6163813 + t * (1.459187e-3 + t * (20.08438e-6 + t * (-58.47727e-9 + t * 410.4110e-12))));
    numerator / (1.0 + 19.67348e-3 * t) * 1e-11
}

/// Static relative permittivity at the density of the liquid at 0.1 MPa: IAPWS R8-97 (Fernández et al. 1997).
pub fn relative_permittivity(temperature_K: f64) -> f64 {
    relative_permittivity_at(density_kg_per_m3(temperature_K), temperature_K)
}

/// Static relative permittivity as a function of density (kg/m³) and temperature (K): IAPWS R8-97, equations 1 to 5.
pub fn relative_permittivity_at(density_kg_per_m3: f64, temperature_K: f64) -> f64 {
    const TERMS: [(f64, f64, f64); 11] = [
        (0.978224486826, 1.0, 0.25),
        (-0.957771379375, 1.0, 1.0),
        (0.237511794148, 1.0, 2.5),
        (0.714692244396, 2.0, 1.5),
        (-0.298217036956, 3.0, 1.5),
        (-0.108863472196, 3.0, 2.5),
        (0.949327488264e-1, 4.0, 2.0),
        (-0.980469816509e-2, 5.0, 2.0),
        (0.165167634970e-4, 6.0, 5.0),
        (0.937359795772e-4, 7.0, 0.5),
        (-0.123179218720e-9, 10.0, 10.0),
    ];
    const AVOGADRO_per_mol: f64 = 6.0221367e23;
    const BOLTZMANN_J_per_K: f64 = 1.380658e-23;
    const VACUUM_PERMITTIVITY_F_per_m: f64 = 8.854187817e-12;
    const POLARISABILITY: f64 = 1.636e-40;
    const DIPOLE_C_m: f64 = 6.138e-30;
    let molar_density = density_kg_per_m3 / MOLAR_MASS_kg_per_mol;
    let delta = density_kg_per_m3 / 322.0;
    let tau = 647.096 / temperature_K;
    let mut g = 1.0 + 0.196096504426e-2 * delta * libm::pow(temperature_K / 228.0 - 1.0, -1.2);
    for (n, i, j) in TERMS {
        g += n * libm::pow(delta, i) * libm::pow(tau, j);
    }
    let a = AVOGADRO_per_mol * DIPOLE_C_m * DIPOLE_C_m * molar_density * g
        / (VACUUM_PERMITTIVITY_F_per_m * BOLTZMANN_J_per_K * temperature_K);
    let b = AVOGADRO_per_mol * POLARISABILITY * molar_density / (3.0 * VACUUM_PERMITTIVITY_F_per_m);
    (1.0 + a + 5.0 * b + libm::sqrt(9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b)) / (4.0 - 4.0 * b)
}

/// pKw on the molality scale at the density of the liquid at 0.1 MPa: IAPWS R11-07 (Bandura & Lvov 2006).
pub fn pKw(temperature_K: f64) -> f64 {
    let t = temperature_K;
    let density = density_kg_per_m3(t) / 1000.0;
    let q = density * libm::exp(-0.864671 + 8659.19 / t - 22786.2 / (t * t) * libm::pow(density, 2.0 / 3.0));
    let gas = 0.61415 + 48251.33 / t - 67707.93 / (t * t) + 10102100.0 / (t * t * t);
    -12.0 * (libm::log10(1.0 + q) - q / (q + 1.0) * density * (0.642044 - 56.8534 / t - 0.375754 * density))
        + gas
        + 2.0 * libm::log10(MOLAR_MASS_kg_per_mol)
}
