"""Molar masses by `periodictable` and unit conversions by `pint`, for
tests/chemistry_outside.rs.

    python3 -m venv env && env/bin/pip install periodictable==2.1.0 pint==0.25.3
    env/bin/python tests/reference/masses_units.py

writes masses_units.json beside this file. Both are general-purpose libraries of others:
`periodictable` holds the standard atomic weights of CIAAW with all their digits, `pint`
the definitions of the SI and of what is used beside it."""

import json
import pathlib

import periodictable
import pint

ELEMENTS = """H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga
Ge As Se Br Kr Rb Sr Y Zr Nb Mo Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Sm Eu Gd Tb
Dy Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Th U""".split()

# As a problem file writes it, and as `periodictable` reads it.
COMPOUNDS = {
    "NaOH": "NaOH", "HCl": "HCl", "H2SO4": "H2SO4", "HNO3": "HNO3", "H3PO4": "H3PO4",
    "NH3": "NH3", "NH4Cl": "NH4Cl", "(NH4)2SO4": "(NH4)2SO4", "NaHCO3": "NaHCO3",
    "Na2CO3": "Na2CO3", "CaCO3": "CaCO3", "Ca(OH)2": "Ca(OH)2", "CaSO4·2H2O": "CaSO4(H2O)2",
    "MgNH4PO4·6H2O": "MgNH4PO4(H2O)6", "FeCl3·6H2O": "FeCl3(H2O)6",
    "KAl(SO4)2·12H2O": "KAl(SO4)2(H2O)12", "NaClO": "NaClO",
    "Fe(NH4)2(SO4)2·6H2O": "Fe(NH4)2(SO4)2(H2O)6", "C6H8O7": "C6H8O7", "K2Cr2O7": "K2Cr2O7",
    "KMnO4": "KMnO4", "NaCN": "NaCN", "Na2S2O3": "Na2S2O3", "NaF": "NaF", "B(OH)3": "B(OH)3",
    "Ca5(PO4)3OH": "Ca5(PO4)3OH", "CH3COOH": "CH3COOH", "SiO2": "SiO2", "AgCl": "AgCl",
    "HgS": "HgS", "PbCl2": "PbCl2", "ZnSO4·7H2O": "ZnSO4(H2O)7", "CuSO4·5H2O": "CuSO4(H2O)5",
}

# Unit of a problem file, the base unit, and both as `pint` writes them.
UNITS = [
    ("mmol/L", "mol/L", "mmol/L", "mol/L"), ("µmol/L", "mol/L", "µmol/L", "mol/L"),
    ("nmol/L", "mol/L", "nmol/L", "mol/L"), ("M", "mol/L", "molar", "mol/L"),
    ("mM", "mol/L", "millimolar", "mol/L"), ("mmol/kg", "mol/kg", "mmol/kg", "mol/kg"),
    ("mg/L", "g/L", "mg/L", "g/L"), ("µg/L", "g/L", "µg/L", "g/L"), ("ng/L", "g/L", "ng/L", "g/L"),
    ("g/m³", "g/L", "g/m^3", "g/L"), ("mg/m³", "g/L", "mg/m^3", "g/L"),
    ("kg/m³", "g/L", "kg/m^3", "g/L"), ("kg/L", "g/L", "kg/L", "g/L"), ("g/mL", "g/L", "g/mL", "g/L"),
    ("mg/kg", "g/kg", "mg/kg", "g/kg"), ("mL/L", "1", "mL/L", "dimensionless"),
    ("L/m³", "1", "L/m^3", "dimensionless"), ("bar", "atm", "bar", "atm"),
    ("mbar", "atm", "mbar", "atm"), ("kPa", "atm", "kPa", "atm"), ("Pa", "atm", "Pa", "atm"),
    ("matm", "atm", "milliatm", "atm"), ("µatm", "atm", "microatm", "atm"),
    ("kJ/mol", "J/mol", "kJ/mol", "J/mol"), ("kJ/(mol·K)", "J/(mol·K)", "kJ/mol/K", "J/mol/K"),
    ("%", "1", "percent", "dimensionless"),
]


def main():
    unit = pint.UnitRegistry()
    masses = {symbol: getattr(periodictable, symbol).mass for symbol in ELEMENTS}
    compounds = {ours: periodictable.formula(theirs).mass for ours, theirs in COMPOUNDS.items()}
    units = [
        {"unit": ours, "base": base, "factor": unit.Quantity(1.0, theirs).to(target).magnitude}
        for ours, base, theirs, target in UNITS
    ]
    celsius = [
        {"celsius": t, "kelvin": unit.Quantity(t, unit.degC).to(unit.K).magnitude}
        for t in (-5.0, 0.0, 12.5, 25.0, 100.0)
    ]
    stored = {
        "periodictable": periodictable.__version__,
        "pint": pint.__version__,
        "elements": masses,
        "compounds": compounds,
        "units": units,
        "celsius": celsius,
    }
    path = pathlib.Path(__file__).with_suffix(".json")
    path.write_text(json.dumps(stored, indent=1, ensure_ascii=False) + "\n")


main()
