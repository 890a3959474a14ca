"""Density, permittivity and ionisation of water, written from the published formulas.

Density: Tanaka et al. 2001 (Metrologia 38:301) to 40 °C, Kell 1975 (J. Chem. Eng. Data 20:97) above, moved to meet it. The permittivity
(IAPWS R8-97) comes from the PyPI package iapws; the ionisation (IAPWS R11-07, Bandura & Lvov 2006) is written out here,
because that package may follow a later issue of the release.
"""

import math

from iapws._iapws import _Dielectric
from scipy import constants

MOLAR_MASS = 0.018015268  # kg/mol, IAPWS R11-07


def tanaka(t):
    return 999.974950 * (1 - (t - 3.983035) ** 2 * (t + 301.797) / (522528.9 * (t + 69.34881)))


def kell(t):
    top = (999.83952 + 16.945176 * t - 7.9870401e-3 * t**2 - 46.170461e-6 * t**3 + 105.56302e-9 * t**4
           - 280.54253e-12 * t**5)
    return top / (1 + 16.879850e-3 * t)


def density(kelvin):
    """kg/m³ at 0.1 MPa."""
    t = kelvin - 273.15
    return tanaka(t) if t <= 40 else kell(t) + tanaka(40) - kell(40)


def permittivity(kelvin):
    return _Dielectric(density(kelvin), kelvin)


def pkw(kelvin):
    """On the molality scale."""
    rho = density(kelvin) / 1000
    q = rho * math.exp(-0.864671 + 8659.19 / kelvin - 22786.2 / kelvin**2 * rho ** (2 / 3))
    gas = 0.61415 + 48251.33 / kelvin - 67707.93 / kelvin**2 + 10102100 / kelvin**3
    cluster = 6
    bracket = math.log10(1 + q) - q / (1 + q) * rho * (0.642044 - 56.8534 / kelvin - 0.375754 * rho)
    return -2 * cluster * bracket + gas + 2 * math.log10(MOLAR_MASS)


def debye_hueckel_slope(kelvin):
    """A of log10 gamma = -A z² sqrt(I), (kg/mol)^½."""
    bjerrum = constants.e**2 / (4 * math.pi * constants.epsilon_0 * permittivity(kelvin) * constants.k * kelvin)
    return math.sqrt(2 * math.pi * constants.N_A * density(kelvin)) * bjerrum**1.5 / math.log(10)
