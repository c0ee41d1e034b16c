"""Propagates every `±` of a problem file and of the library to the pH and to each expected
quantity: each is written anew a little higher and a little lower, the whole file is read and
solved again by problems.py's own reading and method, and the differences come together in
quadrature. It shares nothing with the program.

    pip install mpmath scipy iapws
    python uncertainty.py FILE… [--write uncertainty.json]"""

import argparse
import json
import os
import re
import shutil
import sys
import tempfile

import mpmath as mp

import reading
from problems import HERE, LIBRARY
from reading import NUMBER, number
from solving import Problem

PROBLEMS = os.path.join(HERE, "..", "problems")
STATED = re.compile(rf"({NUMBER})(\s*)±\s*({NUMBER})(\s*%(?!\s*w))?")
# Of one standard uncertainty, to either side.
STEP = mp.mpf("1e-3")


def stated(path):
    """Where a file states a ± on an input: [(line, match)]."""
    found = []
    with open(path, encoding="utf-8") as file:
        for index, line in enumerate(file):
            code = re.sub(r'^((?:[^"#]|"[^"]*")*)#.*$', r"\1", line)
            if code.split()[:1] and code.split()[0] in ("expect", "balance"):
                continue
            if line.startswith("case "):
                break
            found += [(index, match) for match in STATED.finditer(re.sub(r'"[^"]*"', lambda m: "x" * len(m[0]), code))]
    return found


def moved(path, index, match, by):
    """The text of a file with one value moved by so many of its standard uncertainties."""
    value, size = number(match[1]), number(match[3])
    if match[4]:
        size *= abs(value) / 100
    with open(path, encoding="utf-8") as file:
        lines = file.readlines()
    text = mp.nstr(value + by * size, 30, min_fixed=-mp.inf, max_fixed=mp.inf)
    lines[index] = lines[index][: match.start(1)] + text + lines[index][match.end(1):]
    return "".join(lines)


def asked(base):
    subjects = [re.match(r"expect (.*?) (?:=|<=|>=|<|>|between) (.*)$", t).groups() for t in base if t.startswith("expect ")]
    return [("pH", False)] + [(subject, "%" in right.split(",")[0]) for subject, right in subjects if subject != "pH"]


def values(path, library):
    base, _ = reading.gather(path)
    problem = Problem(path, base, reading.variant(base, []), library).solve()
    return {subject: problem.value(subject, percent) for subject, percent in asked(base)}


def budget(path):
    """Standard uncertainty of each quantity."""
    here = values(path, LIBRARY)
    squares = {subject: mp.mpf(0) for subject in here}
    with tempfile.TemporaryDirectory() as folder:
        library = os.path.join(folder, "library")
        shutil.copytree(LIBRARY, library)
        own = os.path.join(folder, "own.lyate")
        shutil.copy(path, own)
        copies = [own] + [os.path.join(library, name) for name in sorted(os.listdir(library)) if name.endswith(".lyate")]
        for copy in copies:
            with open(copy, encoding="utf-8") as file:
                original = file.read()
            for index, match in stated(copy):
                sides = []
                for by in (STEP, -STEP):
                    text = moved(copy, index, match, by)
                    with open(copy, "w", encoding="utf-8") as file:
                        file.write(text)
                    sides.append(values(own, library))
                    with open(copy, "w", encoding="utf-8") as file:
                        file.write(original)
                for subject in here:
                    squares[subject] += ((sides[0][subject] - sides[1][subject]) / (2 * STEP)) ** 2
    return {s: {"value": mp.nstr(here[s], 15), "standard_uncertainty": mp.nstr(mp.sqrt(squares[s]), 12)} for s in here}


def main():
    arguments = argparse.ArgumentParser()
    arguments.add_argument("files", nargs="+")
    arguments.add_argument("--write", metavar="FILE")
    arguments = arguments.parse_args()
    answers = {}
    for path in arguments.files:
        name = os.path.relpath(path, PROBLEMS)
        answers[name] = budget(path)
        for subject, found in answers[name].items():
            print(f"{name}: {subject} = {found['value']} ± {found['standard_uncertainty']}")
    if arguments.write:
        with open(arguments.write, "w", encoding="utf-8") as file:
            json.dump(answers, file, indent=1, ensure_ascii=False)
            file.write("\n")


if __name__ == "__main__":
    sys.exit(main())
