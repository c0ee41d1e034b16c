"""Finds the doses of the files in tests/problems/doses with mpmath: every trial is a whole
problem of solving.py with the dose written into it as `add`, everything per litre of the
mixture, and the dose is where the quantity has its value. It shares nothing with the program,
the densities of stocks aside, which the file or the table below gives.

    pip install mpmath scipy iapws
    python doses.py [FOLDER] [--write doses.json]
"""

import argparse
import json
import os
import re
import sys

import mpmath as mp

import reading
from reading import MASS, NUMBER, elements, formula, number, quantity
from solving import Problem

HERE = os.path.dirname(os.path.abspath(__file__))
LIBRARY = os.path.join(HERE, "..", "..", "src", "library")
# kg/L at 20 °C, as src/chemistry/stock.rs has them.
DENSITY = {("NaOH", 30): "1.3277", ("H2SO4", 96): "1.8355"}
STOCK = re.compile(rf"({NUMBER}) (%|mol/L) (\S+)")


def litres_per_mole(strength, unit, reagent):
    if unit == "mol/L":
        return 1 / number(strength)
    counts = elements(formula(reagent, {})[0], {})
    mass = sum(n * mp.mpf(str(MASS[e])) for e, n in counts.items())
    return mass / (10 * number(strength) * mp.mpf(DENSITY[reagent, int(number(strength))]))


class Water:
    """A variant of a file whose doses are numbers."""

    def __init__(self, path, base, lines):
        self.path, self.base, self.lines, self.targets, self.volume = path, base, [], [], mp.mpf(0)
        for text in lines:
            if target := re.match(r"hold (.+?) = (.+?) by (total \S+|\S+$|dose of .*)", text):
                subject, value, by = target.groups()
                per_mole = mp.mpf(0)
                if by.startswith("dose of "):
                    strength, unit, by = STOCK.match(by[8:]).groups()
                    per_mole = litres_per_mole(strength, unit, by)
                wanted = quantity(value, "", {}, subject == "alkalinity")
                self.targets.append((subject, wanted, by, per_mole))
            elif stock := re.match(rf"add ({NUMBER}) mL/L of {STOCK.pattern}$", text):
                volume, strength, unit, reagent = stock.groups()
                volume = number(volume) / 1000
                amount = volume / litres_per_mole(strength, unit, reagent)
                self.volume += volume
                self.lines.append(f"add {reagent} {mp.nstr(amount, 35)} mol/L")
            else:
                self.lines.append(text)
        found = {by for _, _, by, _ in self.targets}
        self.lines = [t for t in self.lines if not any(t.startswith(f"add {by} ") for by in found)]

    def solve(self, doses):
        lines, volume = list(self.lines), 1 + self.volume
        for (_, _, by, per_mole), dose in zip(self.targets, doses):
            said = f"{by} =" if by.startswith("total ") else f"add {by}"
            lines.append(f"{said} {mp.nstr(dose, 35)} mol/L")
            volume += per_mole * dose
        problem = Problem(self.path, self.base, lines, LIBRARY)
        problem.totals = {component: total / volume for component, total in problem.totals.items()}
        return problem.solve()

    def doses(self):
        """Halves of each decade, then secants; one target at most."""
        if not self.targets:
            return []
        (subject, wanted, _, _), = self.targets
        open_at = lambda dose: self.solve([dose]).value(subject, False) - wanted
        marks = [(d, open_at(d)) for d in (mp.mpf(10) ** (mp.mpf(n) / 2) for n in range(-12, 3))]
        low, high = next((a, b) for a, b in zip(marks, marks[1:]) if a[1] * b[1] <= 0)
        return [mp.findroot(open_at, (low[0], high[0]), solver="anderson", tol=mp.mpf("1e-50"), verify=False)]


def main():
    arguments = argparse.ArgumentParser()
    arguments.add_argument("folder", nargs="?", default=os.path.join(HERE, "..", "problems", "doses"))
    arguments.add_argument("--write", metavar="FILE")
    arguments = arguments.parse_args()
    answers = {}
    for name in sorted(n for n in os.listdir(arguments.folder) if n.endswith(".lyate")):
        path = os.path.join(arguments.folder, name)
        base, cases = reading.gather(path)
        if not any(t.startswith("hold ") and " by " in t for t in base):
            continue  # nothing is looked for
        stored = answers[name] = []
        for case, extra in [(None, []), *cases]:
            # What a case lists as a component counts from there on.
            listed = base + [t for t in extra if t.startswith("component ")]
            lines = reading.variant(base, [t for t in extra if not t.startswith("component ")])
            water = Water(path, listed, lines)
            doses = water.doses()
            problem = water.solve(doses)
            for (subject, wanted, _, _) in water.targets:
                assert abs(problem.value(subject, False) - wanted) < mp.mpf("1e-18"), (name, case)
            stored.append({
                "case": case,
                "doses": [mp.nstr(dose, 20) for dose in doses],
                "ph": mp.nstr(problem.ph, 20),
                "exact": problem.model == "ideal" and problem.own_water,
            })
            print(name, case or "base", *(mp.nstr(dose, 10) for dose in doses), "pH", mp.nstr(problem.ph, 8))
    if arguments.write:
        with open(arguments.write, "w", encoding="utf-8") as file:
            json.dump(answers, file, indent=1, ensure_ascii=False)
            file.write("\n")
    return 0


if __name__ == "__main__":
    sys.exit(main())
