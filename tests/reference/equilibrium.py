"""Equilibrium answers to many digits, for tests/equilibrium_reference.rs.

    python3 -m venv env && env/bin/pip install mpmath==1.4.1
    env/bin/python tests/reference/equilibrium.py

writes equilibrium.json beside this file. Arithmetic is mpmath's; ideal answers are found
at 60 digits and Davies ones at 45, and stored with 40 and 30. Method: damped Newton on
the convex function sum(c) - total.x over the given components, and for Davies a bracketed
root of (ionic strength out - ionic strength in) round it. Each answer is checked by its
balances before it is written.

Every number goes in as the nearest double, which the test reads too, so that both solve
the very same problem. The constants are real where a system is named after chemistry
(25 degrees C, infinite dilution unless noted), but the answers test arithmetic and not
the constants. Where they come from:

* acids: R. N. Goldberg, N. Kishore, R. M. Lennen, J. Phys. Chem. Ref. Data 31, 231 (2002),
  from memory; boric, hydrofluoric, hydrocyanic, silicic and acetic acid and metal
  hydrolysis (after C. F. Baes, R. E. Mesmer, The Hydrolysis of Cations, 1976) from memory
* ammines and cadmium and lead chlorides: D. Harvey, Analytical Chemistry 2.1, appendix
  16.12, read
* carbonate pairs of calcium: L. N. Plummer, E. Busenberg, Geochim. Cosmochim. Acta 46,
  1011 (1982), read; all other complexes from memory
* EDTA: the usual set for an ionic strength of 0.1, from memory
* water: pKw 13.995, IAPWS R11-07(2019), rounded
The totals are ours.
"""

import json
import pathlib
import random

import mpmath as mp

A_DEBYE_HUCKEL = 0.5098

# Component: charge, then each species over it: {other component: n}, log beta.
WATER = [({"H": -1}, -13.995)]
ACIDS = {
    "NH3": (0, [({"H": 1}, 9.245)]),
    "CO3": (-2, [({"H": 1}, 10.329), ({"H": 2}, 16.680)]),
    "PO4": (-3, [({"H": 1}, 12.35), ({"H": 2}, 19.548), ({"H": 3}, 21.696)]),
    "SO4": (-2, [({"H": 1}, 1.987)]),
    "Ac": (-1, [({"H": 1}, 4.756)]),
    "BO": (-1, [({"H": 1}, 9.237)]),
    "Cit": (-3, [({"H": 1}, 6.396), ({"H": 2}, 11.157), ({"H": 3}, 14.285)]),
    "Ox": (-2, [({"H": 1}, 4.266), ({"H": 2}, 5.536)]),
    "Tart": (-2, [({"H": 1}, 4.366), ({"H": 2}, 7.402)]),
    "Pht": (-2, [({"H": 1}, 5.408), ({"H": 2}, 8.358)]),
    "HS": (-1, [({"H": 1}, 7.05), ({"H": -1}, -19.0)]),
    "F": (-1, [({"H": 1}, 3.18)]),
    "CN": (-1, [({"H": 1}, 9.21)]),
    "Si": (0, [({"H": -1}, -9.84), ({"H": -2}, -23.04)]),
    "Gly": (-1, [({"H": 1}, 9.78), ({"H": 2}, 12.131)]),
    "Y": (-4, [({"H": 1}, 10.37), ({"H": 2}, 16.50), ({"H": 3}, 19.19), ({"H": 4}, 21.19),
               ({"H": 5}, 22.69), ({"H": 6}, 22.69)]),
    "Na": (1, []), "K": (1, []), "Cl": (-1, []), "NO3": (-1, []), "ClO4": (-1, []),
    "Ca": (2, [({"H": -1}, -12.85)]),
    "Mg": (2, [({"H": -1}, -11.44)]),
    "Al": (3, [({"H": -1}, -4.98), ({"H": -2}, -10.63), ({"H": -3}, -15.66), ({"H": -4}, -22.91)]),
    "Fe3": (3, [({"H": -1}, -2.19), ({"H": -2}, -5.67), ({"H": -4}, -21.6)]),
    "Zn": (2, [({"H": -1}, -8.96), ({"H": -2}, -16.9), ({"H": -3}, -28.4), ({"H": -4}, -41.2)]),
    "Cu": (2, [({"H": -1}, -8.0)]),
    "Cd": (2, [({"H": -1}, -10.08)]),
    "Pb": (2, [({"H": -1}, -7.71), ({"H": -2}, -17.12), ({"H": -3}, -28.06)]),
    "Ag": (1, [({"H": -1}, -12.0)]),
    "Ni": (2, [({"H": -1}, -9.86)]),
    "Hg": (2, [({"H": -1}, -3.4), ({"H": -2}, -6.17)]),
}
COMPLEXES = [
    ({"Ag": 1, "NH3": 1}, 3.31), ({"Ag": 1, "NH3": 2}, 7.22),
    ({"Cu": 1, "NH3": 1}, 4.04), ({"Cu": 1, "NH3": 2}, 7.47), ({"Cu": 1, "NH3": 3}, 10.27),
    ({"Cu": 1, "NH3": 4}, 11.75),
    ({"Zn": 1, "NH3": 1}, 2.21), ({"Zn": 1, "NH3": 2}, 4.50), ({"Zn": 1, "NH3": 3}, 6.86),
    ({"Zn": 1, "NH3": 4}, 8.89),
    ({"Cd": 1, "NH3": 1}, 2.55), ({"Cd": 1, "NH3": 2}, 4.56), ({"Cd": 1, "NH3": 3}, 5.90),
    ({"Cd": 1, "NH3": 4}, 6.74),
    ({"Ni": 1, "NH3": 1}, 2.72), ({"Ni": 1, "NH3": 2}, 4.89), ({"Ni": 1, "NH3": 3}, 6.55),
    ({"Ni": 1, "NH3": 4}, 7.67), ({"Ni": 1, "NH3": 5}, 8.34), ({"Ni": 1, "NH3": 6}, 8.31),
    ({"Cd": 1, "Cl": 1}, 1.98), ({"Cd": 1, "Cl": 2}, 3.60), ({"Cd": 1, "Cl": 3}, 3.40),
    ({"Cd": 1, "Cl": 4}, 2.70), ({"Pb": 1, "Cl": 1}, 1.59), ({"Pb": 1, "Cl": 2}, 1.80),
    ({"Hg": 1, "Cl": 1}, 7.3), ({"Hg": 1, "Cl": 2}, 14.0), ({"Hg": 1, "Cl": 3}, 15.0),
    ({"Hg": 1, "Cl": 4}, 15.3),
    ({"Ca": 1, "CO3": 1}, 3.22), ({"Ca": 1, "CO3": 1, "H": 1}, 11.439),
    ({"Mg": 1, "CO3": 1}, 2.98), ({"Mg": 1, "CO3": 1, "H": 1}, 11.399),
    ({"Ca": 1, "SO4": 1}, 2.3), ({"Mg": 1, "SO4": 1}, 2.37),
    ({"Ca": 1, "PO4": 1}, 6.46), ({"Ca": 1, "PO4": 1, "H": 1}, 14.737),
    ({"Ca": 1, "PO4": 1, "H": 2}, 20.462),
    ({"Al": 1, "F": 1}, 7.01), ({"Al": 1, "F": 2}, 12.75), ({"Al": 1, "F": 3}, 17.02),
    ({"Al": 1, "F": 4}, 19.72), ({"Al": 1, "SO4": 1}, 3.02),
    ({"Fe3": 1, "F": 1}, 6.04), ({"Fe3": 1, "F": 2}, 10.5), ({"Fe3": 1, "F": 3}, 13.2),
    ({"Fe3": 1, "SO4": 1}, 4.04),
    ({"Ca": 1, "Y": 1}, 10.65), ({"Mg": 1, "Y": 1}, 8.79), ({"Zn": 1, "Y": 1}, 16.5),
    ({"Cu": 1, "Y": 1}, 18.78), ({"Fe3": 1, "Y": 1}, 25.1), ({"Ni": 1, "Y": 1}, 18.4),
    ({"Pb": 1, "Y": 1}, 18.0),
    ({"Fe3": 2, "H": -2}, -2.95),
]

# Name, totals. The proton's total follows from the charges.
IDEAL = [
    ("ammonium sulfate scrubber sump", {"NH3": 0.024, "SO4": 0.012, "Na": 0.009}),
    ("hydrochloric acid, very dilute", {"Cl": 3e-8}),
    ("pure water with salt", {"Na": 0.5, "Cl": 0.5}),
    ("caustic cleaning liquor", {"Na": 2.5}),
    ("strong acid pickle", {"Cl": 6.0}),
    ("acetate buffer", {"Ac": 0.2, "Na": 0.1}),
    ("phosphate buffer", {"PO4": 0.05, "Na": 0.081}),
    ("bicarbonate water", {"CO3": 0.0021, "Na": 0.0019}),
    ("ammonium bicarbonate solution", {"NH3": 0.3, "CO3": 0.3}),
    ("citrate cleaner", {"Cit": 0.13, "Na": 0.2}),
    ("hard well water", {"Ca": 0.0025, "Mg": 0.0011, "CO3": 0.0052, "SO4": 0.0008, "Na": 0.0014,
                         "Cl": 0.0017}),
    ("boiler feed with phosphate", {"Ca": 2e-6, "PO4": 1.1e-4, "Na": 3.6e-4, "CO3": 1e-5}),
    ("silver bath", {"Ag": 0.01, "NO3": 0.01, "NH3": 0.25}),
    ("copper ammine etchant", {"Cu": 0.05, "NH3": 1.0, "Cl": 0.1}),
    ("nickel strike", {"Ni": 0.2, "NH3": 1.5, "SO4": 0.2}),
    ("zinc rinse water", {"Zn": 3e-4, "NH3": 0.004, "Cl": 0.0006, "Na": 0.002}),
    ("cadmium in brine", {"Cd": 1e-6, "Cl": 0.6, "Na": 0.6}),
    ("lead in soft water", {"Pb": 5e-9, "Cl": 1e-4, "Na": 2e-4, "CO3": 1.5e-4}),
    ("mercury in a brine trap", {"Hg": 1e-4, "Cl": 1.0, "Na": 1.0}),
    ("aluminium fluoride rinse", {"Al": 0.002, "F": 0.011, "Na": 0.004, "SO4": 0.0015}),
    ("alum dose", {"Al": 1e-4, "SO4": 1.5e-4, "CO3": 0.002, "Na": 0.0019}),
    ("iron pickle with sulfate", {"Fe3": 0.02, "SO4": 0.08}),
    ("iron and EDTA", {"Fe3": 0.001, "Y": 0.001, "Na": 0.004, "Cl": 0.003}),
    ("metal mixture short of EDTA", {"Fe3": 1e-4, "Cu": 2e-4, "Zn": 3e-4, "Ca": 0.002, "Mg": 0.001,
                                     "Y": 0.0008, "Na": 0.0032, "Cl": 0.0075}),
    ("hydrogen sulfide wash", {"HS": 0.04, "Na": 0.03}),
    ("cyanide rinse", {"CN": 0.001, "Na": 0.0012}),
    ("sixteen decades of totals", {"Cu": 1e-14, "NH3": 1e-9, "Y": 1e-16, "PO4": 2e-3, "Na": 1.0,
                                   "Cl": 0.9968}),
    ("borate and silicate", {"BO": 0.01, "Si": 0.003, "Na": 0.006}),
]
DAVIES = [
    ("ammonium sulfate scrubber sump", {"NH3": 0.024, "SO4": 0.012, "Na": 0.009}),
    ("pure water with salt", {"Na": 0.1, "Cl": 0.1}),
    ("phthalate standard", {"Pht": 0.05, "K": 0.05}),
    ("phosphate standard", {"PO4": 0.05, "Na": 0.05, "K": 0.025}),
    ("tetroxalate standard", {"Ox": 0.1, "K": 0.05}),
    ("borax standard", {"BO": 0.04, "Na": 0.02}),
    ("carbonate standard", {"CO3": 0.05, "Na": 0.075}),
    ("hard well water", {"Ca": 0.0025, "Mg": 0.0011, "CO3": 0.0052, "SO4": 0.0008, "Na": 0.0014,
                         "Cl": 0.0017}),
    ("alum dose", {"Al": 1e-4, "SO4": 1.5e-4, "CO3": 0.002, "Na": 0.0019}),
    ("zinc rinse water", {"Zn": 3e-4, "NH3": 0.004, "Cl": 0.0006, "Na": 0.002}),
    ("copper ammine etchant", {"Cu": 0.05, "NH3": 1.0, "Cl": 0.1}),
    ("strong phosphate", {"PO4": 0.12, "Na": 0.3}),
]


def build(totals, davies):
    names = ["H"] + list(totals)
    charges = [1] + [ACIDS[name][0] for name in totals]
    index = {name: j for j, name in enumerate(names)}
    rows = [({"H": 1}, 0.0)] + WATER
    for name in totals:
        rows.append(({name: 1}, 0.0))
        rows += [({name: 1, **others}, log_beta) for others, log_beta in ACIDS[name][1]]
    rows += [(row, log_beta) for row, log_beta in COMPLEXES if all(n in index for n in row)]
    species = [
        {
            "row": sorted([index[n], k] for n, k in row.items()),
            "log_k": log_beta,
            "charge": sum(charges[index[n]] * k for n, k in row.items()),
        }
        for row, log_beta in rows
    ]
    given = [float(t) for t in totals.values()]
    proton = -sum(z * t for z, t in zip(charges[1:], given))
    return {"components": names, "species": species, "totals": [float(proton)] + given,
            "davies": davies}


def invented(seed, components, count, reach):
    """Any whole coefficients, constants over many decades, a state known to exist."""
    dice = random.Random(seed)
    x = [dice.uniform(-30, 0) for _ in range(components)]
    rows = [[[j, 1]] for j in range(components)] + [[[0, -1]]]
    while len(rows) < count:
        chosen = sorted(dice.sample(range(components), dice.randint(1, min(3, components))))
        row = [[j, dice.choice([-2, -1, 1, 1, 2, 3])] for j in chosen]
        if row not in rows:
            rows.append(row)
    species, totals = [], [0.0] * components
    for row in rows:
        log_c = -dice.uniform(0, reach)
        log_k = log_c - sum(k * x[j] for j, k in row) / 2.302585092994046
        species.append({"row": row, "log_k": log_k, "charge": 0})
        for j, k in row:
            totals[j] += k * 10**log_c
    return {"components": [f"X{j}" for j in range(components)], "species": species,
            "totals": totals, "davies": False}


def newton(problem, ln_gamma, x):
    """The minimum of the convex function; x is where to start."""
    m = len(problem["totals"])
    totals = [mp.mpf(t) for t in problem["totals"]]
    rows = [s["row"] for s in problem["species"]]
    constants = [mp.mpf(s["log_k"]) * mp.log(10) - g
                 for s, g in zip(problem["species"], ln_gamma)]

    def state(x):
        c = [mp.e ** (b + sum(k * x[j] for j, k in row)) for b, row in zip(constants, rows)]
        gradient = [-t for t in totals]
        size = [abs(t) for t in totals]
        for row, amount in zip(rows, c):
            for j, k in row:
                gradient[j] += k * amount
                size[j] += abs(k * amount)
        return c, gradient, max(abs(g) / s for g, s in zip(gradient, size))

    c, gradient, worst = state(x)
    for _ in range(5000):
        if worst < mp.mpf(10) ** (8 - mp.mp.dps):
            return x, c
        hessian = mp.matrix(m, m)
        for row, amount in zip(rows, c):
            for j, k in row:
                for l, n in row:
                    hessian[j, l] += k * n * amount
        scale = [mp.sqrt(hessian[j, j]) for j in range(m)]
        for j in range(m):
            for l in range(m):
                hessian[j, l] /= scale[j] * scale[l]
        step = mp.lu_solve(hessian, mp.matrix([-g / s for g, s in zip(gradient, scale)]))
        step = [step[j] / scale[j] for j in range(m)]
        slope = sum(g * s for g, s in zip(gradient, step))
        t = mp.mpf(1)
        longest = max(abs(s) for s in step)
        if longest > 20:
            t = 20 / longest
        while True:
            tried = [a + t * s for a, s in zip(x, step)]
            c, new, worst = state(tried)
            if sum(g * s for g, s in zip(new, step)) <= -slope / 2 or t < 1e-30:
                break
            t /= 2
        x, gradient = tried, new
    raise RuntimeError("not converged")


def solve(problem):
    start = [mp.log(mp.mpf(t)) if j and t > 0 else mp.mpf(-16)
             for j, t in enumerate(problem["totals"])]
    none = [mp.mpf(0)] * len(problem["species"])
    if not problem["davies"]:
        mp.mp.dps = 60
        return newton(problem, none, start) + (None,)
    mp.mp.dps = 45
    squares = [s["charge"] ** 2 for s in problem["species"]]
    near, c = newton(problem, none, start)

    def at(ionic_strength):
        nonlocal near
        root = mp.sqrt(ionic_strength)
        f = -mp.mpf(A_DEBYE_HUCKEL) * mp.log(10) * (root / (1 + root) - mp.mpf(0.3) * ionic_strength)
        near, c = newton(problem, [z * f for z in squares], near)
        return c, mp.fsum(z * a for z, a in zip(squares, c)) / 2

    first = mp.fsum(z * a for z, a in zip(squares, c)) / 2
    low, high = first / 4, first * 4
    found = mp.findroot(lambda i: at(i)[1] / i - 1, (low, high), solver="anderson",
                        tol=mp.mpf(10) ** -70, verify=False)
    c, out = at(found)
    assert abs(out / found - 1) < mp.mpf(10) ** -33, abs(out / found - 1)
    return near, c, found


def main():
    problems = []
    for davies, systems in ((False, IDEAL), (True, DAVIES)):
        for name, totals in systems:
            problems.append((name, build(totals, davies)))
    for seed, components, count, reach in ((1, 3, 8, 6), (2, 4, 12, 12), (3, 6, 20, 9), (4, 8, 30, 14)):
        problems.append((f"invented {seed}", invented(seed, components, count, reach)))
    written = []
    for name, problem in problems:
        x, c, ionic_strength = solve(problem)
        digits = 30 if problem["davies"] else 40
        answer = {
            "ph": mp.nstr(-x[0] / mp.log(10), digits),
            "concentrations": [mp.nstr(a, digits) for a in c],
        }
        if ionic_strength is not None:
            answer["ionic_strength"] = mp.nstr(ionic_strength, digits)
        written.append({"name": name, **problem, "answer": answer})
        print(f"{name}: pH {answer['ph'][:12]}")
    about = ("Made by equilibrium.py beside this file, which says how; mpmath "
             f"{mp.__version__}. Amounts in mol/L; Davies with A = {A_DEBYE_HUCKEL}.")
    text = ",\n".join(json.dumps(p, separators=(",", ":")) for p in written)
    path = pathlib.Path(__file__).with_suffix(".json")
    path.write_text(f'{{"about":{json.dumps(about)},"problems":[\n{text}\n]}}\n')


if __name__ == "__main__":
    main()
