//! Molar masses and unit conversions against general-purpose libraries of others:
//! `periodictable` and `pint`, whose answers tests/reference/masses_units.py stored.

use std::path::Path;

use lyate::chemistry::element::Element;
use lyate::chemistry::formula::{Formula, Groups};
use lyate::chemistry::unit::Unit;
use serde_json::Value;

fn stored() -> Value {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/masses_units.json");
    serde_json::from_str(&std::fs::read_to_string(path).expect("the stored answers")).unwrap()
}

/// The abridged weights are rounded to five digits, and where nature varies more than that
/// the table of CIAAW gives fewer.
#[test]
fn atomic_weights_are_those_of_periodictable_rounded() {
    let stored = stored();
    let mut compared = 0;
    for (symbol, full) in stored["elements"].as_object().unwrap() {
        let element = Element::from_symbol(symbol).expect(symbol);
        let ours = element.atomic_weight().expect(symbol);
        let full = full.as_f64().unwrap();
        let half_digit = 0.5 * 10f64.powf(full.log10().floor() - 4.0);
        // Where the last digit was in doubt the abridged table steps by two or more: Zn, Se,
        // Mo and such are given as 65.38(2), 78.971(8), 95.95.
        assert!((ours - full).abs() <= 1.01 * half_digit, "{symbol}: {ours}, {full} in full");
        compared += 1;
    }
    assert!(compared >= 80, "{compared} elements");
}

#[test]
fn molar_masses_are_those_of_periodictable() {
    let stored = stored();
    let groups = Groups::default();
    for (text, mass) in stored["compounds"].as_object().unwrap() {
        let ours = Formula::parse(text, &groups).expect(text).molar_mass().expect(text);
        let theirs = mass.as_f64().unwrap();
        assert!((ours / theirs - 1.0).abs() < 2e-5, "{text}: {ours}, {theirs}");
    }
}

#[test]
fn unit_factors_are_those_of_pint() {
    let stored = stored();
    for entry in stored["units"].as_array().unwrap() {
        let name = entry["unit"].as_str().unwrap();
        let unit = Unit::parse(name).expect(name);
        let theirs = entry["factor"].as_f64().unwrap();
        let base = entry["base"].as_str().unwrap();
        assert!((unit.factor / theirs - 1.0).abs() < 1e-12, "{name} in {base}: {}", unit.factor);
    }
    let celsius = Unit::parse("°C").unwrap();
    for entry in stored["celsius"].as_array().unwrap() {
        let kelvin = celsius.to_base(entry["celsius"].as_f64().unwrap());
        assert!((kelvin - entry["kelvin"].as_f64().unwrap()).abs() < 1e-12);
    }
}
