"""The equilibrium of a mixture of ions by other means than the program's: SciPy's root finder inside, activities by
repetition outside, the osmotic integral by quadrature.

Model: mass action on the molality scale; specific ion interaction theory with B·a = 1.5 (Grenthe et al. 1992); activity of
water by Gibbs-Duhem; hydroxide and some complexes take or set free water.
"""

import math

import numpy as np
from scipy import integrate, optimize

import water

LN10 = math.log(10)


class System:
    """What can be present, and in what proportions."""

    def __init__(self, library, totals, hydrogen, kelvin):
        """`totals`: mol of each ion for each kilogram of water; `hydrogen`: mol of hydrogen ions, negative for a base."""
        self.names = [name for name, amount in totals.items() if amount]
        self.targets = np.array([totals[name] for name in self.names] + [hydrogen])
        self.kelvin = kelvin
        rows, labels, betas, charges, waters = [], [], [], [], []

        def add(label, parts, protons, log_beta, charge, bound_water):
            rows.append([parts.get(name, 0) for name in self.names] + [protons])
            labels.append(label)
            betas.append(log_beta * LN10)
            charges.append(charge)
            waters.append(bound_water)

        add("hydrogen", {}, 1, 0.0, 1, 0)
        add("hydroxide", {}, -1, -water.pkw(kelvin), -1, 1)
        for species in library.species:
            if species.name in ("hydrogen", "hydroxide"):
                continue
            if all(part in self.names for part in species.parts):
                charge = species.hydrogen + sum(library.charges[p] * n for p, n in species.parts.items())
                add(species.name, species.parts, species.hydrogen, species.log_beta(kelvin), charge, species.water)
        self.rows, self.labels = np.array(rows, float), labels
        self.ln_beta, self.charge = np.array(betas), np.array(charges, float)
        self.water = np.array(waters, float)
        size = len(labels)
        self.epsilon = np.zeros((size, size))
        for i in range(size):
            for j in range(i + 1):
                value = library.interactions.get(frozenset((labels[i], labels[j])), 0.0)
                self.epsilon[i, j] = self.epsilon[j, i] = value

    def activities(self, molality):
        """ln gamma of every species, ln of the water activity."""
        strength = 0.5 * float(self.charge**2 @ molality)
        slope = water.debye_hueckel_slope(self.kelvin) * LN10
        root = math.sqrt(strength)
        ln_gamma = -self.charge**2 * slope * root / (1 + 1.5 * root) + LN10 * self.epsilon @ molality
        # 2 ∫ I dD with D = a√I/(1 + 1.5√I), in x = √I.
        electric = 2 * integrate.quad(lambda x: slope * x**2 / (1 + 1.5 * x) ** 2, 0, root, epsabs=1e-15)[0]
        pairs = 0.5 * LN10 * float(molality @ self.epsilon @ molality)
        ln_water = -water.MOLAR_MASS * (float(molality.sum()) - electric + pairs)
        return ln_gamma, ln_water, strength

    def solve(self):
        """pH and ionic strength."""
        free = np.log(np.maximum(np.abs(self.targets), 1e-8) * 0.3)
        free[-1] = math.log(1e-7)
        ln_gamma, ln_water, free_water = np.zeros(len(self.labels)), 0.0, 1.0
        for repetition in range(400):
            # Molality of the free ions are the unknowns; their own gammas enter with them.
            def molalities(x):
                own = np.array([ln_gamma[self.labels.index(name)] for name in self.names] + [ln_gamma[0]])
                return np.exp(self.ln_beta + self.rows @ (x + own) + self.water * ln_water - ln_gamma)

            def residual(x):
                return self.rows.T @ molalities(x) * free_water - self.targets

            def jacobian(x):
                return (self.rows.T * molalities(x)) @ self.rows * free_water

            free = self.root(residual, jacobian, free)
            molality = molalities(free)
            fresh_gamma, fresh_water, strength = self.activities(molality)
            fresh_free = 1.0 - water.MOLAR_MASS * float(self.water @ molality) * free_water
            change = max(np.max(np.abs(fresh_gamma - ln_gamma)), abs(fresh_free - free_water))
            ln_gamma = 0.5 * ln_gamma + 0.5 * fresh_gamma
            ln_water, free_water = 0.5 * (ln_water + fresh_water), 0.5 * (free_water + fresh_free)
            if change < 1e-11:
                self.log_activity = dict(zip(self.labels, (np.log(molality) + ln_gamma) / LN10))
                self.log_water = ln_water / LN10
                return -(free[-1] + ln_gamma[0]) / LN10, strength
        raise ArithmeticError("the activities did not settle")

    def root(self, residual, jacobian, start):
        """Balances to 1e-13 of what takes part: SciPy's least squares to come near, its hybrid method to finish."""
        scale = np.maximum(np.abs(self.targets), 1e-7)
        near = optimize.least_squares(
            lambda x: residual(x) / scale, start, lambda x: jacobian(x) / scale[:, None], bounds=(-80, 4),
            x_scale=1.0, xtol=1e-15, ftol=1e-15, gtol=1e-15, max_nfev=2000)
        found = optimize.root(lambda x: residual(x) / scale, near.x, jac=lambda x: jacobian(x) / scale[:, None],
                              method="hybr", options={"xtol": 1e-14})
        best = min((near.x, found.x), key=lambda x: np.max(np.abs(residual(x))))
        worst = np.max(np.abs(residual(best)) / scale)
        if worst > 1e-8:
            raise ArithmeticError(f"the balances did not close: {worst:.1e}")
        return best
