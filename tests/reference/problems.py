"""Solves every problem file with mpmath, by a reading and a method of its own, holds
the answers to the `expect` lines and the written balances, and stores the pH.

    pip install mpmath scipy iapws
    python problems.py [FOLDER] [--write problems.json]

Water's ionisation, density and permittivity come from the general-purpose package
`iapws`. Where `own_water` is true in the stored file, the file gives pKw itself and
nothing of `iapws` is in an ideal answer: those are good to the last digit."""

import argparse
import json
import os
import re
import sys

import mpmath as mp

import reading
from reading import NUMBER, Fraction, exact, number, quantity
from solving import Problem

HERE = os.path.dirname(os.path.abspath(__file__))
LIBRARY = os.path.join(HERE, "..", "..", "src", "library")


def met(text, problem):
    """Whether an expectation is met, and the value found."""
    text = re.sub(r',\s*(source\s+"[^"]*"|confidence\s+\S+\s*%?)', "", text)
    subject, relation, right = re.match(r"expect (.*?) (=|<=|>=|<|>|between) (.*)$", text).groups()
    species = re.sub(r"[\[\]{}]|^(fraction|total|saturation index|precipitated) ", "", subject)
    amount = lambda t: quantity(t, species, problem.groups, subject == "alkalinity")
    value = problem.value(subject, "%" in right)
    if relation == "between":
        low, high = map(amount, right.split(" and "))
        return low <= value <= high, subject, value
    if relation == "=":
        target, tolerance, unit = re.fullmatch(rf"({NUMBER}) ± ({NUMBER})\s*(.*)", right).groups()
        return abs(value - amount(f"{target} {unit}")) <= amount(f"{tolerance} {unit}"), subject, value
    bound = amount(right)
    return {"<": value < bound, ">": value > bound, "<=": value <= bound, ">=": value >= bound}[relation], subject, value


def closes(text, problem):
    """Whether a written balance closes; a charge balance must also name every ion."""
    kind, body = re.match(r"balance (\S+)\s+(.*)$", text).groups()
    sides, charges = [], {}
    for side, sign in zip(body.split(" = "), (1, -1)):
        total = mp.mpf(0)
        for coefficient, term in re.findall(r"(\d+(?:/\d+)?)?\s*(\[[^\]]+\]|total \S+|added \S+|precipitated \S+)", side):
            factor = Fraction(coefficient or 1)
            if term[0] == "[":
                total += exact(factor) * problem.amounts[term[1:-1]]
                charges[term[1:-1]] = sign * factor
            else:
                word, name = term.split()
                total += exact(factor) * (
                    problem.total(name) if word == "total"
                    else problem.added[name] if word == "added"
                    else problem.formed.get(name, 0)
                )
        sides.append(total)
    if kind == "charge":
        ions = {s: z for s, z in problem.charge.items() if z and s in problem.dissolved}
        assert charges in (ions, {s: -z for s, z in ions.items()}), ("terms", charges, ions)
    return abs(sides[0] - sides[1]) < mp.mpf("1e-25") * max(sides)


def is_read_here(texts):
    """Blends are checked by blend.py, pitzer by interaction.py; electrons and hardness by the
    sources in the files."""
    words = r"blend|activity pitzer|component .*\be-|(expect|hold) (potential|pe|hardness|carbonate hardness|acidity)"
    return not any(re.match(words, text) for text in texts)


def main():
    arguments = argparse.ArgumentParser()
    arguments.add_argument("folder", nargs="?", default=os.path.join(HERE, "..", "problems"))
    arguments.add_argument("--write", metavar="FILE")
    arguments = arguments.parse_args()
    answers, files, expectations, balances, failures = {}, 0, 0, 0, 0
    for folder, _, names in sorted(os.walk(arguments.folder)):
        for name in sorted(n for n in names if n.endswith(".lyate")):
            path = os.path.join(folder, name)
            base, cases = reading.gather(path)
            if not any(t.startswith("expect ") for t in base):
                continue  # definitions for others to use
            texts = [*base, *(t for _, extra in cases for t in extra)]
            if any(re.match(r"hold .* by |add .* of \d", t) for t in texts):
                continue  # doses.py
            if not is_read_here(texts):
                print(f"{os.path.relpath(path, arguments.folder)}: not read here")
                continue
            files += 1
            stored = answers[os.path.relpath(path, arguments.folder)] = []
            for case, extra in [(None, []), *cases]:
                problem = Problem(path, base, reading.variant(base, extra), LIBRARY).solve()
                stored.append({
                    "case": case,
                    "ph": mp.nstr(problem.ph, 25),
                    "ionic_strength": mp.nstr(problem.ionic, 20),
                    "activity": problem.model,
                    "own_water": problem.own_water,
                })
                print(f"{os.path.relpath(path, arguments.folder)} [{case or 'base'}] pH {mp.nstr(problem.ph, 8)}")
                for text in problem.expects:
                    expectations += 1
                    ok, subject, value = met(text, problem)
                    failures += not ok
                    print(f"    {'met   ' if ok else 'FAILED'} {subject} = {mp.nstr(value, 7)}")
                for text in problem.balances:
                    balances += 1
                    ok = closes(text, problem)
                    failures += not ok
                    print(f"    {'closes' if ok else 'FAILED'} balance {text.split()[1]}")
    solutions = sum(map(len, answers.values()))
    print(f"{files} files, {solutions} solutions, {expectations} expectations, {balances} balances, {failures} failures")
    if arguments.write:
        with open(arguments.write, "w", encoding="utf-8") as file:
            json.dump(answers, file, indent=1, ensure_ascii=False)
            file.write("\n")
    return failures != 0


if __name__ == "__main__":
    sys.exit(main())
