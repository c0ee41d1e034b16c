"""Reads problem files for problems.py: a small reader of its own, made for files that
are known to be right. It shares nothing with the program."""

import os
import re
from fractions import Fraction

import mpmath as mp

# IUPAC (CIAAW 2021) abridged standard atomic weights, of the elements that occur.
MASS = dict(
    H=1.008, B=10.81, C=12.011, N=14.007, O=15.999, F=18.998, Na=22.990, Mg=24.305,
    Al=26.982, Si=28.085, P=30.974, S=32.06, Cl=35.45, Ar=39.95, K=39.098, Ca=40.078,
    Cr=51.996, Mn=54.938, Fe=55.845, Co=58.933, Ni=58.693, Cu=63.546, Zn=65.38, As=74.922,
    Se=78.971, Br=79.904, Sr=87.62, Mo=95.95, Ag=107.87, Cd=112.41, I=126.90, Ba=137.33,
    Au=196.97, Hg=200.59, Pb=207.2,
)
GAS_CONSTANT = mp.mpf("8.31446261815324")
NUMBER = r"[-+]?(?:10\^[-+]?\d+|\d+(?:\.\d+)?(?:[×x]10\^[-+]?\d+|e[-+]?\d+)?)"
AMOUNT_UNITS = {
    "": "1", "%": "0.01", "mol/L": "1", "mol/kg": "1", "eq/L": "1", "mmol/L": "1e-3",
    "mmol/kg": "1e-3", "meq/L": "1e-3", "µmol/L": "1e-6", "nmol/L": "1e-9", "atm": "1",
    "matm": "1e-3", "µatm": "1e-6",
}
MASS_UNITS = {"g/L": "1", "mg/L": "1e-3", "µg/L": "1e-6"}


def exact(fraction):
    return mp.mpf(fraction.numerator) / fraction.denominator


def number(text):
    text = text.strip().replace("×10^", "e").replace("x10^", "e")
    return mp.mpf(10) ** int(text[3:]) if text.startswith("10^") else mp.mpf(text)


# ------------------------------------------------------------------ formulas


def formula(text, groups):
    """Composition and charge; a declared group counts as itself."""
    text = re.sub(r"\((s|g|l|aq)(,[^)]*)?\)$", "", text).rstrip("*")
    charge = 0
    if caret := re.search(r"\^(\d+)([+-])$", text):
        charge = int(caret[1]) * (1 if caret[2] == "+" else -1)
        text = text[: caret.start()]
    elif text[-1] in "+-":
        charge = 1 if text[-1] == "+" else -1
        text = text[:-1]
    whole = {}
    for part in re.split("[·.]", text):
        factor = re.match(r"\d*", part)[0]
        for symbol, n in _atoms(part[len(factor):], groups).items():
            whole[symbol] = whole.get(symbol, 0) + n * int(factor or 1)
    return whole, charge


def _atoms(text, groups):
    open_counts = [{}]
    at = 0
    names = sorted(groups, key=len, reverse=True)
    while at < len(text):
        if text[at] == "(":
            open_counts.append({})
            at += 1
            continue
        if text[at] == ")":
            part = open_counts.pop()
            at += 1
        else:
            symbol = next((g for g in names if text.startswith(g, at)), None)
            if symbol is None:
                symbol = next(text[at : at + k] for k in (2, 1) if text[at : at + k] in MASS)
            part = {symbol: 1}
            at += len(symbol)
        digits = re.match(r"\d*", text[at:])[0]
        at += len(digits)
        for symbol, n in part.items():
            open_counts[-1][symbol] = open_counts[-1].get(symbol, 0) + n * int(digits or 1)
    return open_counts[0]


def elements(composition, groups):
    """The composition with every group opened up."""
    out = {}
    for symbol, n in composition.items():
        inner = elements(formula(groups[symbol], {})[0], {}) if symbol in groups else {symbol: 1}
        for element, k in inner.items():
            out[element] = out.get(element, 0) + n * k
    return out


# ---------------------------------------------------------------- quantities


def quantity(text, species, groups, alkalinity=False):
    """`12 mg/L as N` of a species in moles, atmospheres or one."""
    written = re.fullmatch(rf"({NUMBER})\s*(\S*)(?:\s+as\s+(\S+))?", text.strip())
    value, unit, basis = number(written[1]), written[2], written[3]
    if unit not in MASS_UNITS:
        return value * mp.mpf(AMOUNT_UNITS[unit])
    grams = value * mp.mpf(MASS_UNITS[unit])
    if basis == "CaCO3":
        equivalents = 1 if alkalinity else abs(formula(species, groups)[1])
        return grams / mp.mpf("50.043") / equivalents
    counts = elements(formula(species, groups)[0], groups)
    if basis:
        return grams / mp.mpf(str(MASS[basis])) / counts[basis]
    return grams / sum(n * mp.mpf(str(MASS[e])) for e, n in counts.items())


# ---------------------------------------------------------------- statements


def statements(path):
    """[(inside a case, text)], continuation lines joined and comments dropped."""
    out, case_indent, in_case = [], None, False
    with open(path, encoding="utf-8") as file:
        for raw in file:
            line = re.sub(r'^((?:[^"#]|"[^"]*")*)#.*$', r"\1", raw.rstrip("\n"))
            # The name of a solid form holds no white space and no comma before one.
            line = re.sub(r"\(s, ([^)]*)\)", lambda form: "(s," + form[1].replace(" ", "_") + ")", line)
            if not line.strip():
                continue
            indent = len(line) - len(line.lstrip())
            if indent == 0:
                in_case, case_indent = line.startswith("case "), None
                out.append((False, line.strip()))
            elif in_case and (case_indent is None or indent == case_indent):
                case_indent = indent
                out.append((True, line.strip()))
            else:
                out[-1] = (out[-1][0], out[-1][1] + " " + line.strip())
    return [(inside, without_uncertainty(text)) for inside, text in out]


def without_uncertainty(text):
    """What is put in, held or at hand counts at its value; after `expect` the ± is a tolerance."""
    if text.split()[0] in ("expect", "balance", "problem", "case"):
        return text
    return re.sub(rf"\s*(?:±|\+/-)\s*{NUMBER}(?:\s*%)?", "", text)


def gather(path):
    """The base's statements and [(case, its statements)]."""
    base, cases = [], []
    for inside, text in statements(path):
        if text.startswith("case "):
            cases.append((text[5:].strip().strip('"'), []))
        else:
            (cases[-1][1] if inside else base).append(text)
    return base, cases


SUBJECT = re.compile(
    r"(temperature|activity|ionic strength(?= \d)|total \S+|add \S+|hold .*?(?= =)|balance \S+|precipitate \S+|saturate with \S+"
    r"|expect .*?(?= (?:=|<=|>=|<|>|between) ))"
)


def variant(base, extra):
    """The base with a case laid over it: what has the same subject is replaced."""
    # A curve moves nothing of the answer.
    definitions = ("problem", "use", "group", "component", "curve")
    kept = [t for t in base if t.split()[0] not in definitions]
    gone = {t[8:].strip() for t in extra if t.startswith("without ")}
    extra = [t for t in extra if not t.startswith("without ")]
    same = lambda t: "" if t.startswith("reaction ") else SUBJECT.match(t)[0].strip()
    gone |= {same(t) for t in extra} - {""}
    return [t for t in kept if same(t) not in gone] + extra


# ----------------------------------------------------------------- reactions


class Reaction:
    """`coefficients` are positive on the right; checked to conserve all elements."""

    def __init__(self, text, groups):
        body, clauses = re.match(r"reaction\s+(.*?)(?:,\s+(.*))?$", text).groups()
        self.text, self.coefficients, self.clauses = text, {}, {}
        for side, sign in zip(re.split("<=>|⇌", body), (-1, 1)):
            for term in side.strip().split(" + "):
                *factor, species = term.split()
                n = sign * Fraction(factor[0] if factor else 1)
                self.coefficients[species] = self.coefficients.get(species, 0) + n
        sums = {}
        for species, n in self.coefficients.items():
            composition, charge = formula(species, groups)
            for key, k in [*elements(composition, groups).items(), ("charge", charge)]:
                sums[key] = sums.get(key, 0) + n * k
        assert not any(sums.values()), ("not conserved", text, sums)
        for clause in re.sub(r'source\s+"[^"]*"', "", clauses or "").split(","):
            if named := re.match(r"\s*(.+?)\s*=\s*(.*)$", clause):
                self.clauses[named[1]] = named[2].strip()

    def log_k(self, temperature):
        c = self.clauses
        if "log K(T)" in c:
            code = c["log K(T)"].replace("^", "**")
            code = re.sub(r"(?<![\w.])(\d+(?:\.\d+)?)", r"mp.mpf('\1')", code)
            return eval(code, {"mp": mp, "T": temperature, "log": mp.log10, "ln": mp.log})
        kind = next(k for k in ("pKa", "pKsp", "pK", "log beta", "log K", "K") if k in c)
        value = number(c[kind].split("±")[0])
        value = mp.log10(value) if kind == "K" else -value if kind[0] == "p" else value
        standard = mp.mpf("298.15")
        if temperature != standard:
            enthalpy, capacity = (
                mp.mpf(c.get(k, "0").split()[0]) * (1000 if "kJ" in c.get(k, "") else 1)
                for k in ("enthalpy", "heat capacity")
            )
            assert "enthalpy" in c, ("no enthalpy", self.text)
            ratio = standard / temperature
            value += (
                enthalpy * (1 / standard - 1 / temperature)
                + capacity * (ratio - 1 - mp.log(ratio))
            ) / GAS_CONSTANT / mp.log(10)
        return value


def built_in(library, name, edition=None):
    """A set's file, in this edition or the newest that has it."""
    editions = [edition] if edition else sorted(os.listdir(library), key=int, reverse=True)
    files = (os.path.join(library, folder, name + ".lyate") for folder in editions)
    return next(file for file in files if os.path.exists(file))


def definitions(path, library):
    """Groups and reactions in a file's scope; its own reactions win."""
    groups, used = {}, []
    texts = [text for inside, text in statements(path) if not inside]
    for text in texts:
        if text.startswith("use "):
            name = text[4:].strip()
            if name.startswith('"'):
                target = os.path.join(os.path.dirname(path), name.strip('"'))
            else:
                target = built_in(library, *name.split())
            more_groups, more = definitions(os.path.normpath(target), library)
            groups.update(more_groups)
            known = [set(r.coefficients) for r in used]
            used += [r for r in more if set(r.coefficients) not in known]
        elif text.startswith("group "):
            _, symbol, *rest = text.split()
            groups[symbol] = rest[1]
    own = [Reaction(text, groups) for text in texts if text.startswith("reaction ")]
    species = [set(r.coefficients) for r in own]
    return groups, [r for r in used if set(r.coefficients) not in species] + own
