#!/usr/bin/env python3
"""Writes the files that the editing benchmark edits: problem files of a hundred, a thousand
and ten thousand lines, and Python files of the same lengths to hold a general-purpose
language server against.

    files.py FOLDER
"""
import pathlib
import random
import sys

BASE = """\
# Off-gas scrubber with two sumps: one recipe, many operating points.
problem "Scrubber, operating points"

use aqueous

temperature 18 °C
activity davies

component NH3 "ammonia nitrogen", SO4^2-, Na+, PO4^3-, CO3^2-

reaction NH4+ <=> NH3 + H+, pKa = 9.25 ± 0.02, enthalpy = 52.1 kJ/mol,
    source "plant constants, sheet 3"

add (NH4)2SO4 12 mmol/L
add NaOH 9 mmol/L
add NaHCO3 2.5 mmol/L
add NaH2PO4 0.4 mmol/L

balance charge
    [H+] + [NH4+] + [Na+]
        = [OH-] + [HSO4-] + 2 [SO4^2-] + [HCO3-] + 2 [CO3^2-]
        + [H2PO4-] + 2 [HPO4^2-] + 3 [PO4^3-]
balance NH3
    [NH4+] + [NH3] = total NH3

expect pH between 8.2 and 10.2
expect [NH3] < 400 mg/L as N
"""

CASE = """
# Shift {n}: read from the log sheet of the day.
case "shift {n}"
    temperature {t:.1f} °C
    add NaOH {naoh:.2f} mmol/L
    add (NH4)2SO4 {salt:.2f} mmol/L
    expect pH between 7.5 and 10.8
    expect [NH3] < {limit} mg/L as N
"""

PYTHON = '''
def shift_{n}(temperature={t:.1f}, naoh={naoh:.2f}, salt={salt:.2f}):
    """Shift {n}: read from the log sheet of the day."""
    total = salt * 2.0
    ratio = naoh / total if total else 0.0
    limit = {limit}
    return temperature + ratio < limit
'''


def numbers(n, seed):
    draw = random.Random(seed * 1_000_003 + n)
    return {
        "n": n,
        "t": draw.uniform(4, 30),
        "naoh": draw.uniform(4, 12),
        "salt": draw.uniform(9, 15),
        "limit": draw.randrange(300, 500),
    }


def fill(head, part, lines):
    text, n = head, 0
    while text.count("\n") + part.count("\n") <= lines:
        n += 1
        text += part.format(**numbers(n, 7))
    while text.count("\n") < lines:
        text += "# end of the sheet\n"
    return text


def main():
    folder = pathlib.Path(sys.argv[1])
    folder.mkdir(parents=True, exist_ok=True)
    for lines in (100, 1_000, 10_000):
        (folder / f"points_{lines}.lyate").write_text(fill(BASE, CASE, lines), "utf-8")
        head = '"""Operating points of a scrubber."""\n\nimport math\n'
        (folder / f"points_{lines}.py").write_text(fill(head, PYTHON, lines), "utf-8")


if __name__ == "__main__":
    main()
