"""Solves one problem for problems.py: mass balances and charge balance in the
logarithms of the free activities, found in floating point and polished by Newton's
method in 40-digit arithmetic. Of solids that may form every set is tried, and exactly one
must leave none negative and none supersaturated. It shares nothing with the program."""

import itertools
import math
import re
from fractions import Fraction

import mpmath as mp
import numpy
import scipy.optimize
from iapws import IAPWS95, _iapws

import reading
from reading import exact, formula, number, quantity

mp.mp.dps = 40

# Kielland's sizes, in ångström, of the ions that the files use with this model.
ION_SIZES = {"H+": 9, "OH-": 3.5, "Pb^2+": 4.5, "IO3-": 4, "Mg^2+": 8, "NO3-": 3, "Cl-": 3, "Ca^2+": 6}
# Proton acceptors (+) and donors (−) by the definition of Dickson (1981).
ALKALINITY = {
    "HCO3-": 1, "CO3^2-": 2, "OH-": 1, "B(OH)4-": 1, "NH3": 1, "HPO4^2-": 1, "PO4^3-": 2,
    "CH3COO-": 1, "H+": -1, "HSO4-": -1, "H3PO4": -1,
}


def water(temperature):
    """pKw (IAPWS R11-07), Debye–Hückel A and B from IAPWS density and permittivity."""
    t = float(temperature)
    density = IAPWS95(T=t, x=0).rho
    permittivity = _iapws._Dielectric(density, t)
    avogadro, e, e0, k = 6.02214076e23, 1.602176634e-19, 8.8541878128e-12, 1.380649e-23
    length = e * e / (4 * math.pi * e0 * permittivity * k * t)
    a = math.sqrt(2 * math.pi * avogadro * density) * length**1.5 / math.log(10)
    b = math.sqrt(8 * math.pi * avogadro * density * length) * 1e-10
    return _iapws._Kw(density, t), a, b


def annulled(rows, columns):
    """Combinations of the columns that each row annuls, a basis of them, in fractions."""
    lines = [[Fraction(row.get(c, 0)) for c in columns] for row in rows]
    pivots = []
    for i in range(len(lines)):
        pivot = next((j for j in range(len(columns)) if lines[i][j] != 0), None)
        assert pivot is not None, "solids that depend on one another"
        lines[i] = [a / lines[i][pivot] for a in lines[i]]
        for other in range(len(lines)):
            if other != i:
                factor = lines[other][pivot]
                lines[other] = [a - factor * b for a, b in zip(lines[other], lines[i])]
        pivots.append(pivot)
    out = []
    for free in (j for j in range(len(columns)) if j not in pivots):
        vector = {columns[free]: Fraction(1)}
        vector |= {columns[p]: -line[free] for line, p in zip(lines, pivots) if line[free]}
        out.append(vector)
    return out


class Problem:
    """One variant of a file, its numbers read and its species found."""

    def __init__(self, path, base, lines, library):
        self.groups, reactions = reading.definitions(path, library)
        self.components = [
            re.sub(r'\s*"[^"]*"', "", item).strip()
            for text in base if text.startswith("component ")
            for item in text[10:].split(",")
        ]
        self.temperature, self.model, self.fixed_ionic = mp.mpf("298.15"), "davies", None
        self.totals, self.added, self.holds = {}, {}, {}
        self.candidates, self.excess = [], []
        self.expects = [t for t in lines if t.startswith("expect ")]
        self.balances = [t for t in lines if t.startswith("balance ")]
        for text in lines:
            self._read(text)
        self.own_water = any(set(r.coefficients) == {"H2O", "H+", "OH-"} for r in reactions)
        self.pkw, self.a, self.b = water(self.temperature)
        self._find_species(reactions)
        self._split_reagents()
        self.present = []
        self._hold()

    def _read(self, text):
        word = text.split()[0]
        if word == "temperature":
            self.temperature = mp.mpf(text.split()[1]) + mp.mpf("273.15")
        elif word == "activity":
            self.model = text.split()[1]
        elif word == "ionic":
            self.fixed_ionic = quantity(text[15:], "", self.groups)
        elif word == "total":
            name, value = re.match(r"total (\S+)\s+= (.*)", text).groups()
            self.totals[name] = quantity(value, name, self.groups)
        elif word == "add":
            name, value = re.match(r"add (\S+)\s+(.*)", text).groups()
            self.added[name] = self.added.get(name, 0) + quantity(value, name, self.groups)
        elif word == "precipitate":
            self.candidates.append(text.split()[1])
        elif word == "saturate":
            self.excess.append(text.split()[2])
        elif word == "hold":
            name, value = re.match(r"hold (.*?) = (.*)", text).groups()
            self.holds[name] = value

    def _find_species(self, reactions):
        """Each species as (exponents of the components, log10 of its constant)."""
        self.rows = {name: ({name: Fraction(1)}, mp.mpf(0)) for name in ["H+", *self.components]}
        self.rows["H2O"] = ({}, mp.mpf(0))
        if not self.own_water:
            self.rows["OH-"] = ({"H+": Fraction(-1)}, -mp.mpf(self.pkw))
        found = True
        while found:
            found = False
            for reaction in reactions:
                new = [s for s in reaction.coefficients if s not in self.rows]
                if len(new) != 1:
                    continue
                n = reaction.coefficients[new[0]]
                row, log_k = {}, reaction.log_k(self.temperature) / exact(n)
                for species, k in reaction.coefficients.items():
                    if species in new:
                        continue
                    for component, power in self.rows[species][0].items():
                        row[component] = row.get(component, 0) - k / n * power
                    log_k -= exact(k / n) * self.rows[species][1]
                self.rows[new[0]] = ({c: p for c, p in row.items() if p}, log_k)
                found = True
        self.charge = {s: formula(s, self.groups)[1] for s in self.rows}
        self.dissolved = [s for s in self.rows if s != "H2O" and not re.search(r"\((s|g|l)", s)]

    def _split_reagents(self):
        basis = [*self.components, "H+", "H2O"]
        parts = [formula(b, self.groups) for b in basis]
        for reagent, amount in self.added.items():
            composition, charge = formula(reagent, self.groups)
            assert charge == 0, reagent
            symbols = sorted(set(composition).union(*(p for p, _ in parts)))
            matrix = numpy.array([[p.get(s, 0) for p, _ in parts] for s in symbols] + [[z for _, z in parts]], float)
            wanted = numpy.array([composition.get(s, 0) for s in symbols] + [0], float)
            shares, _, rank, _ = numpy.linalg.lstsq(matrix, wanted, rcond=None)
            assert rank == len(basis) and abs(matrix @ shares - wanted).max() < 1e-9, reagent
            for component, share in zip(self.components, shares):
                share = Fraction(float(share)).limit_denominator(60)
                if share:
                    self.totals[component] = self.totals.get(component, 0) + amount * exact(share)

    def _hold(self):
        """Held values as (exponents, log10 of their product, ion if a concentration)."""
        self.held_ph = number(self.holds["pH"]) if "pH" in self.holds else None
        self.held, self.released = [], set()
        for what, value in self.holds.items():
            if what == "pH":
                continue
            species = what if what.endswith("(g)") else what[1:-1]
            row, log_k = self.rows[species]
            value = mp.log10(quantity(value, species, self.groups)) - log_k
            self.held.append((row, value, species if what[0] == "[" else None))
            main = [c for c in row if c != "H+" and (what.endswith("(g)") or c not in self.totals)]
            assert len(main) == 1, what
            self.released.add(main[0])
        solids = [*self.excess, *self.present]
        self.held += [(self.rows[s][0], -self.rows[s][1], None) for s in solids]
        brought = {c for s in self.excess for c in self.rows[s][0]}
        present = [c for c in self.components
                   if c in self.released or c in brought or self.totals.get(c, 0) != 0]
        self.unknowns = ["H+", *present]
        self.absent = set(self.components) - set(present)
        self.species = [s for s in self.dissolved if not self.absent & set(self.rows[s][0])]
        # Combinations of the mass balances that no solid takes part in.
        kept = [c for c in present if c not in self.released]
        self.balances_kept = annulled([self.rows[s][0] for s in solids], kept)

    # -------------------------------------------------------------- equations

    def log_gamma(self, species, ionic, lib):
        z2 = self.charge[species] ** 2
        if self.model == "ideal" or z2 == 0:
            return 0
        root = lib.sqrt(ionic)
        if self.model == "davies":
            shape = root / (1 + root) - 3 * ionic / 10
        elif self.model == "debye-huckel":
            shape = root
        elif self.model == "guntelberg":
            shape = root / (1 + root)
        else:
            shape = root / (1 + self.b * ION_SIZES.get(species, 4) * root)
        return -self.a * z2 * shape

    def residuals(self, x, lib, held_ph=None):
        """Of each equation, and the concentrations; `lib` is mpmath or numpy."""
        cast = (lambda v: v) if lib is mp else float
        ionic = cast(self.fixed_ionic) if self.fixed_ionic is not None else lib.exp(x[-1])
        log_activity = dict(zip(self.unknowns, x))
        power = lambda row: sum(cast(exact(k)) * log_activity[c] for c, k in row.items())
        amounts = {
            s: lib.exp((power(self.rows[s][0]) + cast(self.rows[s][1]) - self.log_gamma(s, ionic, lib)) * cast(mp.log(10)))
            for s in self.species
        }
        held_ph = self.held_ph if held_ph is None else held_ph
        if held_ph is None:
            out = [self._difference([(self.charge[s], amounts[s]) for s in self.species], 0, lib)]
        else:
            out = [x[0] + cast(held_ph)]
        for combination in self.balances_kept:
            share = lambda row: cast(exact(sum(k * row.get(c, 0) for c, k in combination.items()) + Fraction(0)))
            terms = [(share(self.rows[s][0]), amounts[s]) for s in self.species]
            total = sum(cast(exact(k) * self.totals.get(c, 0)) for c, k in combination.items())
            out.append(self._difference(terms, total, lib))
        for row, value, ion in self.held:
            gamma = self.log_gamma(ion, ionic, lib) if ion else 0
            out.append(power(row) - cast(value) - gamma)
        if self.fixed_ionic is None:
            out.append(x[-1] - lib.log(sum(self.charge[s] ** 2 * amounts[s] for s in self.species) / 2))
        return out, amounts, ionic

    @staticmethod
    def _difference(terms, total, lib):
        plus = sum(k * v for k, v in terms if k > 0) + max(-total, 0)
        minus = -sum(k * v for k, v in terms if k < 0) + max(total, 0)
        return lib.log(plus) - lib.log(minus)

    # ----------------------------------------------------------------- answer

    def solve(self):
        right = []
        possible = [c for c in self.candidates if not set(self.rows[c][0]) & self.absent]
        for size in range(len(possible) + 1):
            for chosen in itertools.combinations(possible, size):
                self.present = list(chosen)
                try:
                    self._hold()
                    self._solve()
                except (AssertionError, ArithmeticError, ZeroDivisionError):
                    if not possible:
                        raise
                    continue
                formed = self._formed()
                rest = [c for c in possible if c not in chosen]
                if all(formed[c] > 0 for c in chosen) and all(self.activity(c) < 1 for c in rest):
                    right.append(chosen)
        assert len(right) == 1, ("sets of solids that are right", right)
        self.present = list(right[0])
        self._hold()
        self._solve()
        self.formed = self._formed()
        return self

    def _formed(self):
        """What formed of each solid that is there; below zero where it dissolved."""
        solids = [*self.excess, *self.present]
        if not solids:
            return {}
        rows = [c for c in self.unknowns[1:] if c not in self.released]
        matrix = mp.matrix(len(rows), len(solids))
        missing = mp.matrix(len(rows), 1)
        for i, component in enumerate(rows):
            missing[i] = self.totals.get(component, 0) - self.dissolved_total(component)
            for k, solid in enumerate(solids):
                matrix[i, k] = exact(self.rows[solid][0].get(component, Fraction(0)))
        found = mp.lu_solve(matrix.T * matrix, matrix.T * missing)
        assert mp.norm(matrix * found - missing) < mp.mpf("1e-25"), "does not close"
        return dict(zip(solids, found))

    def _solve(self):
        best = None
        for ph in (7, 4, 10, 2, 12.5, 5.5, 8.5):
            start = [-float(self.held_ph if self.held_ph is not None else ph)]
            start += [float(mp.log10(self.totals[c])) if self.totals.get(c, 0) > 0 else -4.0 for c in self.unknowns[1:]]
            start += [math.log(0.01)] if self.fixed_ionic is None else []
            with numpy.errstate(all="ignore"):
                for method in ("hybr", "lm"):
                    try:
                        root = scipy.optimize.root(lambda x: self.residuals(list(x), numpy)[0], start, method=method, tol=1e-12)
                    except ValueError:
                        continue
                    worst = abs(root.fun).max()
                    if math.isfinite(worst) and (best is None or worst < best[0]):
                        best = (worst, root.x)
            if best and best[0] < 1e-9:
                break
        assert best and best[0] < 1e-6, "no start leads to a root"
        self.x = self.polish([mp.mpf(float(v)) for v in best[1]])
        _, amounts, ionic = self.residuals(self.x, mp)
        self.ph = -self.x[0]
        self.amounts = {s: amounts.get(s, mp.mpf(0)) for s in self.dissolved}
        self.ionic = sum(self.charge[s] ** 2 * v for s, v in self.amounts.items()) / 2

    def polish(self, x, held_ph=None):
        n, step = len(x), mp.mpf("1e-18")
        for _ in range(12):
            here = self.residuals(x, mp, held_ph)[0]
            jacobian = mp.matrix(n, n)
            for j in range(n):
                moved = self.residuals([v + step * (i == j) for i, v in enumerate(x)], mp, held_ph)[0]
                for i in range(n):
                    jacobian[i, j] = (moved[i] - here[i]) / step
            change = mp.lu_solve(jacobian, -mp.matrix(here))
            x = [v + d for v, d in zip(x, change)]
            if max(abs(d) for d in change) < mp.mpf("1e-34"):
                return x
        raise ArithmeticError("the polish does not settle")

    def activity(self, species):
        row, log_k = self.rows[species]
        if self.absent & set(row):
            return mp.mpf(0)
        logs = dict(zip(self.unknowns, self.x))
        return mp.mpf(10) ** (log_k + sum(exact(k) * logs[c] for c, k in row.items()))

    def total(self, component):
        formed = sum(exact(self.rows[s][0].get(component, Fraction(0))) * self.formed[s] for s in self.present)
        return self.dissolved_total(component) + formed

    def dissolved_total(self, component):
        return sum(exact(self.rows[s][0].get(component, Fraction(0))) * v for s, v in self.amounts.items())

    def buffer_capacity(self):
        """Strong base to move the pH, all totals kept, by a central difference."""
        def base(ph):
            amounts = self.residuals(self.polish(self.x, ph), mp, ph)[1]
            return -sum(self.charge[s] * v for s, v in amounts.items())
        step = mp.mpf("1e-9")
        return (base(self.ph + step) - base(self.ph - step)) / (2 * step)

    def value(self, subject, percent):
        word, _, name = subject.rpartition(" ")
        if subject == "pH":
            return self.ph
        if subject == "pOH":
            return -mp.log10(self.activity("OH-"))
        if subject == "ionic strength":
            return self.ionic
        if subject == "buffer capacity":
            return self.buffer_capacity()
        if subject == "alkalinity":
            return sum(ALKALINITY.get(s, 0) * v for s, v in self.amounts.items())
        if subject == "charge imbalance":
            charges = [self.charge[s] * v for s, v in self.amounts.items()]
            return sum(charges) / sum(abs(q) for q in charges) if percent else sum(charges)
        if subject[0] == "[":
            return self.amounts[subject[1:-1]]
        if subject[0] == "{":
            return self.activity(subject[1:-1])
        if subject.endswith("(g)") and not word:
            return self.activity(subject)
        if word == "precipitated":
            return self.formed.get(name, mp.mpf(0))
        if word == "saturation index":
            return mp.log10(self.activity(name))
        if word == "total":
            return self.total(name)
        assert word == "fraction", subject
        (component, share), = [(c, k) for c, k in self.rows[name][0].items() if c != "H+"]
        return self.amounts[name] * exact(share) / self.dissolved_total(component)
