"""Mixed solutions by Pitzer's method, solved in 40-digit arithmetic for
tests/equilibrium_interaction.rs: `python3 interaction.py > interaction.json`.

The equations are those of K. S. Pitzer, J. Phys. Chem. 77, 268 (1973) and of C. E. Harvie,
N. Moller, J. H. Weare, Geochim. Cosmochim. Acta 48, 723 (1984), ion by ion with F, B, B',
Phi and Phi' (recalled). They share nothing with the program, which differentiates one
function; only the parameters are read from its table. The derivative of the mixing
integral is taken numerically here."""

import json
import math
import re
import sys
from pathlib import Path

import mpmath as mp

mp.mp.dps = 40
A_PHI = mp.mpf("0.3915")
B = mp.mpf("1.2")
MOLAR_MASS = mp.mpf("0.018015268")

table = (Path(__file__).parents[2] / "src/chemistry/interaction/parameters.rs").read_text()


def section(name):
    return re.search(rf"pub const {name}: .*?= \[(.*?)\n\];", table, re.S)[1]


BINARY, THETA, PSI, LAMBDA = {}, {}, {}, {}
for name in ["BINARY_HARVIE", "BINARY_PITZER"]:
    for c, a, beta, c_phi in re.findall(r'\(\("(\S+)", "(\S+)"\), \[(.*?)\], (\S+?),', section(name)):
        BINARY[c, a] = [mp.mpf(v) for v in beta.split(",")] + [mp.mpf(c_phi)]
for i, j, v in re.findall(r'\("(\S+)", "(\S+)", (\S+?)\)', section("THETA")):
    THETA[frozenset((i, j))] = mp.mpf(v)
for i, j, k, v in re.findall(r'\("(\S+)", "(\S+)", "(\S+)", (\S+?)\)', section("PSI")):
    PSI[frozenset((i, j, k))] = mp.mpf(v)
for n, i, v in re.findall(r'\("(\S+)", "(\S+)", (\S+?)\)', section("LAMBDA")):
    LAMBDA[n, i] = mp.mpf(v)
KNOWN = {name for pair in BINARY for name in pair}


def charge(name):
    match = re.search(r"\^?(\d?)([+-])$", name)
    if not match:
        return 0
    digits = match[1] if "^" in name else "1"
    return int(digits or 1) * (1 if match[2] == "+" else -1)


def g(x):
    return 2 * (1 - (1 + x) * mp.exp(-x)) / x**2


def g_prime(x):
    return -2 * (1 - (1 + x + x**2 / 2) * mp.exp(-x)) / x**2


def integral(x):
    """Pitzer's closed form of J (J. Solution Chem. 4, 249, 1975; recalled)."""
    return x / (4 + mp.mpf("4.581") * x ** mp.mpf("-0.7237") * mp.exp(-mp.mpf("0.0120") * x ** mp.mpf("0.528")))


def e_theta(z, y, ionic):
    if z == y:
        return mp.mpf(0), mp.mpf(0)
    x = lambda p: 6 * p * A_PHI * mp.sqrt(ionic)
    products = [(1, abs(z * y)), (-mp.mpf(1) / 2, z * z), (-mp.mpf(1) / 2, y * y)]
    value = abs(z * y) / (4 * ionic) * sum(w * integral(x(p)) for w, p in products)
    slope = abs(z * y) / (8 * ionic**2) * sum(w * x(p) * mp.diff(integral, x(p)) for w, p in products)
    return value, -value / ionic + slope


def pitzer(m):
    """ln gamma of each species and ln activity of water at molalities by name."""
    z = {s: charge(s) for s in m}
    cations = [s for s in m if z[s] > 0]
    anions = [s for s in m if z[s] < 0]
    neutrals = [s for s in m if z[s] == 0]
    ionic = sum(m[s] * z[s] ** 2 for s in m) / 2
    root = mp.sqrt(ionic)
    whole = sum(m[s] * abs(z[s]) for s in m)
    b, b_prime, b_phi, c = {}, {}, {}, {}
    for x in cations:
        for a in anions:
            if (x, a) not in BINARY:
                b[x, a] = b_prime[x, a] = b_phi[x, a] = c[x, a] = mp.mpf(0)
                continue
            b0, b1, b2, c_phi = BINARY[x, a]
            a1 = mp.mpf("1.4") if z[x] == 2 and z[a] == -2 else mp.mpf(2)
            b[x, a] = b0 + b1 * g(a1 * root) + b2 * g(12 * root)
            b_prime[x, a] = (b1 * g_prime(a1 * root) + b2 * g_prime(12 * root)) / ionic
            b_phi[x, a] = b0 + b1 * mp.exp(-a1 * root) + b2 * mp.exp(-12 * root)
            c[x, a] = c_phi / (2 * mp.sqrt(abs(z[x] * z[a])))
    phi, phi_prime = {}, {}
    for group in (cations, anions):
        for i in group:
            for j in group:
                if i != j:
                    both = i in KNOWN and j in KNOWN
                    value, slope = e_theta(z[i], z[j], ionic) if both else (mp.mpf(0), mp.mpf(0))
                    phi[i, j] = THETA.get(frozenset((i, j)), mp.mpf(0)) + value
                    phi_prime[i, j] = slope
    psi = lambda *ions: PSI.get(frozenset(ions), mp.mpf(0))
    lam = lambda n, i: LAMBDA.get((n, i), mp.mpf(0))
    pairs = lambda group: [(i, j) for k, i in enumerate(group) for j in group[k + 1 :]]
    f = -A_PHI * (root / (1 + B * root) + 2 / B * mp.log(1 + B * root))
    f += sum(m[x] * m[a] * b_prime[x, a] for x in cations for a in anions)
    f += sum(m[i] * m[j] * phi_prime[i, j] for group in (cations, anions) for i, j in pairs(group))
    third = sum(m[x] * m[a] * c[x, a] for x in cations for a in anions)
    ln_gamma = {}
    for own, other in ((cations, anions), (anions, cations)):
        for i in own:
            of = (lambda a: (i, a)) if z[i] > 0 else (lambda x: (x, i))
            ln = z[i] ** 2 * f + abs(z[i]) * third
            ln += sum(m[a] * (2 * b[of(a)] + whole * c[of(a)]) for a in other)
            ln += sum(m[j] * (2 * phi[i, j] + sum(m[a] * psi(i, j, a) for a in other)) for j in own if j != i)
            ln += sum(m[a] * m[o] * psi(a, o, i) for a, o in pairs(other))
            ln += sum(2 * m[n] * lam(n, i) for n in neutrals)
            ln_gamma[i] = ln
    for n in neutrals:
        ln_gamma[n] = 2 * sum(m[i] * lam(n, i) for i in m if z[i] != 0)
    osmotic = -A_PHI * root**3 / (1 + B * root)
    osmotic += sum(m[x] * m[a] * (b_phi[x, a] + whole * c[x, a]) for x in cations for a in anions)
    for group, other in ((cations, anions), (anions, cations)):
        for i, j in pairs(group):
            phi_phi = phi[i, j] + ionic * phi_prime[i, j]
            osmotic += m[i] * m[j] * (phi_phi + sum(m[a] * psi(i, j, a) for a in other))
    osmotic += sum(m[n] * m[i] * lam(n, i) for n in neutrals for i in m)
    ln_water = -MOLAR_MASS * (sum(m.values()) + 2 * osmotic)
    return ln_gamma, ln_water


# Constants, log10 of formation from the components; from memory, and no matter here: what
# is checked is the solution of the equations.
FORMED = {
    "OH-": ({"H+": -1}, "-13.995", 1),
    "HSO4-": ({"H+": 1, "SO4^2-": 1}, "1.979", 0),
    "HCO3-": ({"H+": 1, "CO3^2-": 1}, "10.339", 0),
    "CO2": ({"H+": 2, "CO3^2-": 1}, "16.678", -1),
    "MgOH+": ({"H+": -1, "Mg^2+": 1}, "-11.81", 1),
    "MgCO3": ({"Mg^2+": 1, "CO3^2-": 1}, "2.928", 0),
    "CaCO3": ({"Ca^2+": 1, "CO3^2-": 1}, "3.151", 0),
    "CH3COOH": ({"H+": 1, "CH3COO-": 1}, "4.757", 0),
    "NH3": ({"H+": -1, "NH4+": 1}, "-9.244", 0),
    "FeOH^2+": ({"H+": -1, "Fe^3+": 1}, "-2.19", 1),
    "FeCl^2+": ({"Fe^3+": 1, "Cl-": 1}, "1.48", 0),
}

SYSTEMS = {
    "sea water": {"Na+": "0.4861", "Mg^2+": "0.05475", "Ca^2+": "0.01066", "K+": "0.01058", "Cl-": "0.5658", "SO4^2-": "0.02927", "CO3^2-": "0.00218"},
    "sea water, four times": {"Na+": "1.95", "Mg^2+": "0.22", "Ca^2+": "0.012", "K+": "0.042", "Cl-": "2.26", "SO4^2-": "0.085", "CO3^2-": "0.003"},
    "hydrochloric acid in salt": {"Na+": "3", "Cl-": "4"},
    "caustic soda in salt": {"Na+": "4", "Cl-": "1.5"},
    "sulfuric acid": {"SO4^2-": "1.2"},
    "bisulfate pickling bath": {"Na+": "1", "SO4^2-": "1.1", "Cl-": "0.2", "Fe^3+": "0.05"},
    "soda liquor": {"Na+": "2.4", "CO3^2-": "1.1", "Cl-": "0.15"},
    "bicarbonate and carbon dioxide": {"Na+": "0.9", "CO3^2-": "0.95"},
    "lime and salt": {"Ca^2+": "0.02", "Na+": "1", "Cl-": "1"},
    "magnesia and salt": {"Mg^2+": "0.51", "Na+": "0.8", "Cl-": "1.8"},
    "ammonium nitrate and ammonia": {"NH4+": "2.5", "NO3-": "2.1"},
    "acetate buffer in nitrate": {"Na+": "1.5", "CH3COO-": "1.1", "NO3-": "0.9"},
    "dilute": {"Na+": "0.001", "Ca^2+": "0.0005", "CO3^2-": "0.0015", "SO4^2-": "0.0002"},
}


def solve(totals):
    components = ["H+", *totals]
    species = {c: ({c: 1}, mp.mpf(0), 0) for c in components}
    for name, (row, log_k, water) in FORMED.items():
        if all(c in components for c in row):
            species[name] = (row, mp.mpf(log_k) * mp.log(10), water)
    total = {c: mp.mpf(v) for c, v in totals.items()}
    total["H+"] = -sum(charge(c) * v for c, v in total.items())
    names = list(species)

    def concentrations(x, ln_gamma, ln_water):
        out = {}
        for s, (row, ln_k, water) in species.items():
            out[s] = mp.exp(ln_k + sum(n * x[components.index(c)] for c, n in row.items()) + water * ln_water - ln_gamma[s])
        return out

    def rows(c):
        out = []
        for component in components:
            terms = [species[s][0].get(component, 0) * c[s] for s in names]
            size = sum(abs(t) for t in terms) + abs(total[component])
            out.append((sum(terms) - total[component]) / size)
        return out

    # The inner problem by damped Newton on the balances, coefficients given.
    def inner(x, ln_gamma, ln_water):
        for _ in range(300):
            c = concentrations(x, ln_gamma, ln_water)
            n = len(components)
            hessian, gradient = mp.matrix(n, n), mp.matrix(n, 1)
            for s in names:
                row = species[s][0]
                for k, v in row.items():
                    gradient[components.index(k)] += v * c[s]
                    for l, w in row.items():
                        hessian[components.index(k), components.index(l)] += v * w * c[s]
            for k, component in enumerate(components):
                gradient[k] -= total[component]
            step = mp.lu_solve(hessian, -gradient)
            longest = max(abs(v) for v in step)
            t = min(mp.mpf(1), 1 / longest) if longest else mp.mpf(1)
            x = [v + t * step[k] for k, v in enumerate(x)]
            if longest < mp.mpf("1e-30"):
                return x
        raise SystemExit("not closed")

    x = [mp.log(total[c]) if c != "H+" else mp.log(10) * -7 for c in components]
    ln_gamma, ln_water = {s: mp.mpf(0) for s in names}, mp.mpf(0)
    damping = mp.mpf("0.5")
    for _ in range(400):
        x = inner(x, ln_gamma, ln_water)
        c = concentrations(x, ln_gamma, ln_water)
        now, now_water = pitzer(c)
        off = max([abs(now[s] - ln_gamma[s]) for s in names] + [abs(now_water - ln_water)])
        if off < mp.mpf("1e-22"):
            assert max(abs(r) for r in rows(c)) < mp.mpf("1e-22")
            break
        ln_gamma = {s: ln_gamma[s] + damping * (now[s] - ln_gamma[s]) for s in names}
        ln_water += damping * (now_water - ln_water)
    else:
        raise SystemExit("no fixed point")
    return {
        "components": components,
        "totals": [float(total[c]) for c in components],
        "ln_water": mp.nstr(ln_water, 20),
        "species": [
            {
                "name": s,
                "row": [[components.index(k), n] for k, n in species[s][0].items()],
                "ln_k": float(species[s][1]),
                "water": species[s][2],
                "ln_gamma": mp.nstr(ln_gamma[s], 20),
                "ln_c": mp.nstr(mp.log(c[s]), 20),
            }
            for s in names
        ],
    }


def main():
    out = []
    for name, totals in SYSTEMS.items():
        print(name, file=sys.stderr)
        out.append({"name": name, "a_phi": float(A_PHI), **solve(totals)})
    json.dump(out, sys.stdout, indent=1)
    print()


main()
