"""Equilibria with solids to many digits, for tests/equilibrium_phases_reference.rs.

    python3 -m venv env && env/bin/pip install mpmath==1.4.1
    env/bin/python tests/reference/solids.py

writes solids.json beside this file. Method: every set of solids that could be there
together is tried, by rising size. With a set there, ln activities are a point that meets
its solubilities plus any combination of the null space of its rows (both in fractions);
the convex function of equilibrium.py is minimised over that combination, and the amounts
follow from the balances. The set is right where no amount is negative and no other solid
is supersaturated. All sets are tried, and that exactly one is right is asserted.

Components, acids and complexes are those of equilibrium.py. Solubility products at 25
degrees C, zero ionic strength:

* calcite, aragonite, vaterite: L. N. Plummer, E. Busenberg, Geochim. Cosmochim. Acta 46,
  1011 (1982), read
* brucite, portlandite, silver chloride and carbonate, fluorite, cerussite: D. C. Harris,
  Quantitative Chemical Analysis, appendix F (2010), read
* iron(III) hydroxide, anglesite: CRC values as given by eCampusOntario, General Chemistry
  for Gee-Gees, appendix L (2023), read; copper hydroxide: OpenStax Chemistry 2e, appendix J, read
* gibbsite: C. F. Baes, R. E. Mesmer (1976) as quoted in a table of hydrolysis constants,
  read; zincite, tenorite: W. Stumm, J. J. Morgan's table, read
* gypsum, struvite, hydroxyapatite: from memory (D. K. Nordstrom et al. 1990; K. N. Ohlinger
  et al. 1998; H. McDowell et al. 1977)

The answers test arithmetic and not the constants. The totals are ours.
"""

import itertools
import json
import pathlib
from fractions import Fraction

import mpmath as mp

import equilibrium

PKW = 13.995
# Row over the components, log10 of its product at saturation.
SOLIDS = {
    "calcite": ({"Ca": 1, "CO3": 1}, -8.48),
    "aragonite": ({"Ca": 1, "CO3": 1}, -8.336),
    "vaterite": ({"Ca": 1, "CO3": 1}, -7.913),
    "gypsum": ({"Ca": 1, "SO4": 1}, -4.58),
    "brucite": ({"Mg": 1, "H": -2}, -11.15 + 2 * PKW),
    "portlandite": ({"Ca": 1, "H": -2}, -5.19 + 2 * PKW),
    "struvite": ({"Mg": 1, "NH3": 1, "H": 1, "PO4": 1}, -13.26 - 9.245),
    "hydroxyapatite": ({"Ca": 5, "PO4": 3, "H": -1}, -58.52 + PKW),
    "silver chloride": ({"Ag": 1, "Cl": 1}, -9.74),
    "silver carbonate": ({"Ag": 2, "CO3": 1}, -11.09),
    "fluorite": ({"Ca": 1, "F": 2}, -10.5),
    "cerussite": ({"Pb": 1, "CO3": 1}, -13.13),
    "anglesite": ({"Pb": 1, "SO4": 1}, -7.886),
    "gibbsite": ({"Al": 1, "H": -3}, 7.75),
    "iron hydroxide": ({"Fe3": 1, "H": -3}, -38.55 + 3 * PKW),
    "zincite": ({"Zn": 1, "H": -2}, 11.18),
    "copper hydroxide": ({"Cu": 1, "H": -2}, -19.658 + 2 * PKW),
    "tenorite": ({"Cu": 1, "H": -2}, 7.65),
}

# Name, totals, solids that may form, solids in excess.
SYSTEMS = [
    ("softener, hardly overdosed", {"Ca": 0.002, "CO3": 0.004, "Na": 0.006, "Cl": 0.004}, ["calcite", "aragonite", "vaterite"], []),
    ("soft water", {"Ca": 0.0002, "CO3": 0.0004, "Na": 0.0002, "Cl": 0.0002}, ["calcite", "aragonite"], []),
    ("lime softening", {"Ca": 0.0043, "Mg": 0.0012, "CO3": 0.0051, "Na": 0.001, "Cl": 0.0012}, ["calcite", "brucite", "portlandite"], []),
    ("lime slurry overflow", {"Ca": 0.05, "Na": 0.001, "Cl": 0.001}, ["portlandite"], []),
    ("lime slurry in air", {"Ca": 0.05, "CO3": 0.03, "Na": 0.001, "Cl": 0.001}, ["portlandite", "calcite"], []),
    ("gypsum scrubber", {"Ca": 0.04, "SO4": 0.05, "Na": 0.02}, ["gypsum", "portlandite"], []),
    ("flue gas bleed", {"Ca": 0.03, "SO4": 0.04, "CO3": 0.01, "Na": 0.04}, ["gypsum", "calcite"], []),
    ("fluoride with lime", {"Ca": 0.02, "F": 0.03, "Na": 0.002}, ["fluorite", "portlandite"], []),
    ("fluoride and sulfate", {"Ca": 0.03, "F": 0.02, "SO4": 0.03, "Na": 0.022}, ["fluorite", "gypsum", "portlandite"], []),
    ("struvite reactor", {"Mg": 0.004, "NH3": 0.04, "PO4": 0.004, "Na": 0.008, "Cl": 0.035}, ["struvite", "brucite"], []),
    ("struvite and calcium phosphate", {"Mg": 0.003, "Ca": 0.001, "NH3": 0.03, "PO4": 0.004, "Na": 0.009, "Cl": 0.03}, ["struvite", "hydroxyapatite", "brucite"], []),
    ("digester liquor", {"Mg": 0.002, "Ca": 0.002, "NH3": 0.06, "PO4": 0.003, "CO3": 0.05, "Cl": 0.012}, ["struvite", "hydroxyapatite", "calcite"], []),
    ("boiler phosphate", {"Ca": 0.0003, "PO4": 0.0006, "Na": 0.002, "CO3": 0.0002}, ["hydroxyapatite", "calcite", "portlandite"], []),
    ("silver in brine", {"Ag": 0.001, "Cl": 0.01, "Na": 0.009}, ["silver chloride"], []),
    ("silver and carbonate", {"Ag": 0.01, "Cl": 0.004, "CO3": 0.005, "Na": 0.004}, ["silver chloride", "silver carbonate"], []),
    ("silver with ammonia", {"Ag": 0.01, "Cl": 0.01, "NH3": 0.2}, ["silver chloride"], []),
    ("lead, two salts", {"Pb": 0.002, "SO4": 0.001, "CO3": 0.0015, "Na": 0.002}, ["anglesite", "cerussite"], []),
    ("lead pipe", {"Pb": 1e-5, "CO3": 0.001, "Na": 0.0011, "Cl": 0.0002}, ["cerussite"], []),
    ("alum floc", {"Al": 0.0002, "SO4": 0.0003, "CO3": 0.002, "Na": 0.0019}, ["gibbsite"], []),
    ("alum with fluoride", {"Al": 0.0005, "SO4": 0.00075, "F": 0.0006, "Na": 0.0021}, ["gibbsite"], []),
    ("aluminate liquor", {"Al": 0.05, "Na": 0.2, "Cl": 0.1}, ["gibbsite"], []),
    ("iron floc", {"Fe3": 0.0002, "Cl": 0.0006, "CO3": 0.002, "Na": 0.002}, ["iron hydroxide"], []),
    ("acid mine water, limed", {"Fe3": 0.004, "Al": 0.002, "SO4": 0.015, "Ca": 0.012}, ["iron hydroxide", "gibbsite", "gypsum", "portlandite"], []),
    ("zinc rinse, caustic", {"Zn": 0.003, "Cl": 0.006, "Na": 0.0058}, ["zincite"], []),
    ("zinc in ammonia", {"Zn": 0.003, "Cl": 0.006, "NH3": 0.3, "Na": 0.004}, ["zincite"], []),
    ("copper rinse", {"Cu": 0.002, "SO4": 0.002, "Na": 0.003}, ["copper hydroxide", "tenorite"], []),
    ("copper and zinc", {"Cu": 0.002, "Zn": 0.003, "Cl": 0.01, "Na": 0.0085}, ["tenorite", "zincite", "copper hydroxide"], []),
    ("more solids than components", {"Ca": 0.01, "Mg": 0.004, "CO3": 0.008, "Na": 0.001}, ["calcite", "aragonite", "vaterite", "brucite", "portlandite"], []),
    ("limestone bed", {"CO3": 0.002, "Ca": 0.0, "Na": 0.001}, [], ["calcite"]),
    ("limestone and gypsum", {"CO3": 0.001, "Ca": 0.001, "SO4": 0.001, "Na": 0.002}, [], ["calcite", "gypsum"]),
    ("magnesia bed with phosphate", {"Mg": 0.0, "PO4": 0.002, "NH3": 0.004, "Cl": 0.002}, ["struvite"], ["brucite"]),
    ("gypsum dosed on carbonate", {"Ca": 0.0, "SO4": 0.0, "CO3": 0.006, "Na": 0.008}, ["calcite"], ["gypsum"]),
]
DAVIES = [0, 2, 3, 4, 5, 7, 9, 11, 13, 14, 16, 18, 22, 23, 26, 28, 29, 31]


def rows_of(names, components):
    index = {name: j for j, name in enumerate(components)}
    return [
        {"name": name, "row": sorted([index[n], k] for n, k in SOLIDS[name][0].items()),
         "log_value": SOLIDS[name][1]}
        for name in names
    ]


def affine(solids, m):
    """Where all solids are saturated: a point, and the null space of their rows; none where
    one depends on others."""
    lines = []
    for solid in solids:
        line = [Fraction(0)] * m
        for j, k in solid["row"]:
            line[j] = Fraction(k)
        lines.append((line, mp.mpf(solid["log_value"]) * mp.log(10)))
    pivots = []
    for i in range(len(lines)):
        line, value = lines[i]
        pivot = next((j for j in range(m) if line[j] != 0), None)
        if pivot is None:
            return None
        by = line[pivot]
        lines[i] = ([a / by for a in line], value * by.denominator / by.numerator)
        for other in range(len(lines)):
            factor = lines[other][0][pivot]
            if other != i and factor:
                lines[other] = (
                    [a - factor * b for a, b in zip(lines[other][0], lines[i][0])],
                    lines[other][1] - lines[i][1] * factor.numerator / factor.denominator,
                )
        pivots.append(pivot)
    free = [j for j in range(m) if j not in pivots]
    point = [mp.mpf(0)] * m
    for (line, value), pivot in zip(lines, pivots):
        point[pivot] = value
    basis = []
    for j in free:
        vector = [Fraction(0)] * m
        vector[j] = Fraction(1)
        for (line, _), pivot in zip(lines, pivots):
            vector[pivot] = -line[j]
        basis.append(vector)
    return point, basis, free


def number(fraction):
    return mp.mpf(fraction.numerator) / fraction.denominator


def amounts_of(solids, missing, m, scale):
    """The amounts that make up what is missing, by least squares that must be exact."""
    if not solids:
        return []
    matrix = mp.matrix(m, len(solids))
    for k, solid in enumerate(solids):
        for j, n in solid["row"]:
            matrix[j, k] = n
    found = mp.lu_solve(matrix.T * matrix, matrix.T * mp.matrix(missing))
    left = matrix * found - mp.matrix(missing)
    assert max(abs(v) for v in left) < scale * mp.mpf(10) ** (10 - mp.mp.dps), "does not close"
    return list(found)


def with_solids(problem, solids, ln_gamma, start):
    m = len(problem["totals"])
    found = affine(solids, m)
    if found is None:
        return None
    point, basis, free = found
    species = []
    for s in problem["species"]:
        row = [[l, number(sum(k * v[j] for j, k in s["row"]))] for l, v in enumerate(basis)]
        constant = mp.mpf(s["log_k"]) + sum(k * point[j] for j, k in s["row"]) / mp.log(10)
        species.append({"row": [e for e in row if e[1] != 0], "log_k": constant})
    totals = [sum(number(v[j]) * mp.mpf(problem["totals"][j]) for j in range(m)) for v in basis]
    if start is None:
        start = [mp.log(mp.mpf(t)) if j and t > 0 else mp.mpf(-16)
                 for j, t in enumerate(problem["totals"])]
    y = [start[j] for j in free]
    y, c = equilibrium.newton({"totals": totals, "species": species}, ln_gamma, y)
    x = [point[j] + sum(number(v[j]) * a for v, a in zip(basis, y)) for j in range(m)]
    missing = [mp.mpf(t) for t in problem["totals"]]
    for s, amount in zip(problem["species"], c):
        for j, k in s["row"]:
            missing[j] -= k * amount
    return x, c, amounts_of(solids, missing, m, max(1, *c))


def state(problem, solids):
    """The state with these solids there, none negative or not; none where they depend."""
    none = [mp.mpf(0)] * len(problem["species"])
    found = None
    # Those in excess, then solid after solid, each from the state before it.
    for size in range(len(problem["excess"]), len(solids) + 1):
        found = with_solids(problem, solids[:size], none, found and found[0])
        if found is None:
            return None
    if not problem["davies"]:
        return (*found, None)
    squares = [s["charge"] ** 2 for s in problem["species"]]
    near = found

    def at(strength):
        nonlocal near
        root = mp.sqrt(strength)
        f = -mp.mpf(equilibrium.A_DEBYE_HUCKEL) * mp.log(10) * (root / (1 + root) - mp.mpf(0.3) * strength)
        near = with_solids(problem, solids, [z * f for z in squares], near[0])
        return mp.fsum(z * a for z, a in zip(squares, near[1])) / 2

    first = mp.fsum(z * a for z, a in zip(squares, found[1])) / 2
    found = mp.findroot(lambda i: at(i) / i - 1, (first / 4, first * 4), solver="anderson",
                        tol=mp.mpf(10) ** (-2 * mp.mp.dps + 20), verify=False)
    assert abs(at(found) / found - 1) < mp.mpf(10) ** (12 - mp.mp.dps)
    return (*near, found)


def index(solid, x):
    return sum(k * x[j] for j, k in solid["row"]) / mp.log(10) - mp.mpf(solid["log_value"])


def solve(problem):
    candidates, excess = problem["candidates"], problem["excess"]
    right = []
    mp.mp.dps = 30
    for size in range(len(candidates) + 1):
        for chosen in itertools.combinations(range(len(candidates)), size):
            solids = excess + [candidates[k] for k in chosen]
            try:
                found = state(problem, solids)
            except (AssertionError, RuntimeError, ValueError, ZeroDivisionError) as failure:
                print("   no state with", [s["name"] for s in solids], repr(failure)[:60])
                continue
            if found is None:
                continue
            x, _, amounts, _ = found
            rest = [c for k, c in enumerate(candidates) if k not in chosen]
            if all(n > 0 for n in amounts[len(excess):]) and all(index(c, x) < 0 for c in rest):
                right.append(chosen)
    assert len(right) == 1, ("sets that are right", right)
    mp.mp.dps = 45
    chosen, = right
    x, c, amounts, strength = state(problem, excess + [candidates[k] for k in chosen])
    digits = 25
    formed = dict(zip(chosen, amounts[len(excess):]))
    answer = {
        "ph": mp.nstr(-x[0] / mp.log(10), digits),
        "concentrations": [mp.nstr(a, digits) for a in c],
        "formed": [mp.nstr(formed[k], digits) if k in formed else None for k in range(len(candidates))],
        "indices": [mp.nstr(index(s, x), digits) for s in candidates],
        "excess": [mp.nstr(n, digits) for n in amounts[:len(excess)]],
    }
    if strength is not None:
        answer["ionic_strength"] = mp.nstr(strength, digits)
    return answer


def main():
    written = []
    for davies in (False, True):
        for number_, (name, totals, candidates, excess) in enumerate(SYSTEMS):
            if davies and number_ not in DAVIES:
                continue
            problem = equilibrium.build(totals, davies)
            components = problem.pop("components")
            problem["candidates"] = rows_of(candidates, components)
            problem["excess"] = rows_of(excess, components)
            answer = solve(problem)
            there = [c["name"] for c, n in zip(problem["candidates"], answer["formed"]) if n]
            print(f"{name}{', Davies' if davies else ''}: pH {answer['ph'][:8]} {there}", flush=True)
            written.append({"name": name, **problem, "answer": answer})
    about = ("Made by solids.py beside this file, which says how; mpmath "
             f"{mp.__version__}. Amounts in mol/L; Davies with A = {equilibrium.A_DEBYE_HUCKEL}.")
    text = ",\n".join(json.dumps(p, separators=(",", ":")) for p in written)
    path = pathlib.Path(__file__).with_suffix(".json")
    path.write_text(f'{{"about":{json.dumps(about)},"problems":[\n{text}\n]}}\n')


if __name__ == "__main__":
    main()
