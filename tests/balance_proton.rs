//! The proton condition, against conditions known by hand and against counting protons.

mod balance_common;

use balance_common::made::made;
use balance_common::{System, carbonate, r, sump};
use lyate::balance::Part;
use lyate::balance::charge::charge_balance;
use lyate::balance::mass::mass_balance;
use lyate::balance::proton::{ProtonCondition, Reason, ReferenceForm, proton_condition};
use lyate::balance::recipe::Recipe;
use num_rational::Rational64;
use proptest::prelude::*;

fn condition(system: &System) -> ProtonCondition {
    proton_condition(&system.stoichiometry, &system.recipe, &[]).unwrap()
}

fn shown(system: &System) -> String {
    system.show(&condition(system).balance)
}

/// The condition is the combination that it says it is.
fn check_derivation(system: &System, condition: &ProtonCondition) {
    let count = system.stoichiometry.species.len();
    let mut sum = vec![r(0); count];
    for (species, z) in charge_balance(&system.stoichiometry).terms {
        sum[species] += z * condition.charge_factor;
    }
    for (component, factor) in &condition.mass_factors {
        for (species, n) in
            mass_balance(&system.stoichiometry, &Recipe::default(), *component).terms
        {
            sum[species] -= n * factor;
        }
    }
    let mut terms = vec![r(0); count];
    for (species, coefficient) in &condition.balance.terms {
        assert!(coefficient.is_integer());
        terms[*species] = *coefficient;
    }
    assert_eq!(sum, terms);
}

#[test]
fn balances_of_the_sump() {
    let system = sump();
    let balance = |name: &str| {
        system.show(&mass_balance(
            &system.stoichiometry,
            &Recipe::default(),
            system.component(name),
        ))
    };
    assert_eq!(balance("NH3"), "[NH3] + [NH4+] = total NH3");
    assert_eq!(
        system.show(&charge_balance(&system.stoichiometry)),
        "[H+] + [Na+] + [NH4+] = 2 [SO4^2-] + [OH-] + [HSO4-]"
    );
    assert_eq!(shown(&system), "[H+] + [HSO4-] + added NaOH = [NH3] + [OH-]");
    let condition = condition(&system);
    // charge − NH3 + 2 SO4 − Na.
    assert_eq!(condition.charge_factor, 1);
    assert_eq!(condition.mass_factors, [(1, r(1)), (2, r(-2)), (3, r(1))]);
    assert!(condition.alternatives.is_empty());
    check_derivation(&system, &condition);
    assert_eq!(system.recipe.value(Part::Total(1)), Some(24e-3));
}

/// Ammonium chloride, sodium carbonate and hydrochloric acid.
#[test]
fn a_salt_of_each_kind_and_a_strong_acid() {
    let system = carbonate(System::new(&[("NH3", 0), ("CO3^2-", -2), ("Na+", 1), ("Cl-", -1)]))
        .species("NH4+", &[("NH3", 1), ("H+", 1)])
        .add("NH4Cl", &[("NH3", 1), ("H+", 1), ("Cl-", 1)], 5e-3)
        .add("Na2CO3", &[("Na+", 2), ("CO3^2-", 1)], 2e-3)
        .add("HCl", &[("H+", 1), ("Cl-", 1)], 1e-3);
    assert_eq!(shown(&system), "[H+] + [HCO3-] + 2 [H2CO3*] = [NH3] + [OH-] + added HCl");
}

#[test]
fn reagents_split_into_the_fewest_species() {
    let system =
        carbonate(System::new(&[("NH3", 0), ("CO3^2-", -2), ("SO4^2-", -2), ("Ca^2+", 2)]))
            .species("NH4+", &[("NH3", 1), ("H+", 1)])
            .species("HSO4-", &[("SO4^2-", 1), ("H+", 1)])
            .species("CaHCO3+", &[("Ca^2+", 1), ("CO3^2-", 1), ("H+", 1)]);
    let split = |counts| {
        let system = system.clone().add("X", counts, 1.0);
        let forms = &system.recipe.reagents[0].forms;
        let row = &system.recipe.reagents[0].brings;
        let left = lyate::balance::split::split_into_species(row, &system.stoichiometry)
            .map(|split| split.protons);
        let name =
            |(s, n): &(usize, Rational64)| format!("{n} {}", system.stoichiometry.species[*s].name);
        let mut names: Vec<_> = forms.iter().map(name).collect();
        names.sort();
        (names.join(", "), left)
    };
    // NH4HCO3, H2SO4, (NH4)2CO3, NH4HSO4, H2CO3, NH3, Ca(HCO3)2, CaO or Ca(OH)2.
    for (counts, forms, protons) in [
        (&[("NH3", 1), ("CO3^2-", 1), ("H+", 2)][..], "1 HCO3-, 1 NH4+", 0),
        (&[("SO4^2-", 1), ("H+", 2)], "1 HSO4-", 1),
        (&[("NH3", 2), ("CO3^2-", 1), ("H+", 2)], "1 CO3^2-, 2 NH4+", 0),
        (&[("NH3", 1), ("SO4^2-", 1), ("H+", 2)], "1 HSO4-, 1 NH4+", 0),
        (&[("CO3^2-", 1), ("H+", 2)], "1 H2CO3*", 0),
        (&[("NH3", 1)], "1 NH3", 0),
        (&[("Ca^2+", 1), ("CO3^2-", 2), ("H+", 2)], "1 Ca^2+, 2 HCO3-", 0),
        (&[("Ca^2+", 1), ("H+", -2)], "1 Ca^2+", -2),
    ] {
        assert_eq!(split(counts), (forms.to_owned(), Some(r(protons))), "{counts:?}");
    }
    assert_eq!(split(&[("Ca^2+", -1)]), (String::new(), None));
}

/// Borax, Na2B4O7: half of the boron as acid and half as its base, the base counting as
/// reference where the two amounts are equal and it is the lower index.
#[test]
fn a_moiety_may_be_put_in_as_two_forms() {
    let system = System::new(&[("B(OH)3", 0), ("Na+", 1)])
        .species("B(OH)4-", &[("B(OH)3", 1), ("H+", -1)])
        .add("Na2B4O7", &[("Na+", 2), ("B(OH)3", 4), ("H+", -2)], 0.01);
    let condition = condition(&system);
    assert_eq!(system.show(&condition.balance), "[H+] + 2 added Na2B4O7 = [OH-] + [B(OH)4-]");
    let base = system.species_index("B(OH)4-");
    let [alternative] = condition.alternatives.as_slice() else { panic!("one alternative") };
    assert_eq!((alternative.species, alternative.protons), (base, r(-1)));
    assert!((alternative.amount - 0.02).abs() < 1e-15);
    let other = proton_condition(&system.stoichiometry, &system.recipe, &[base]).unwrap();
    assert_eq!(system.show(&other.balance), "[H+] + [B(OH)3] = [OH-] + 2 added Na2B4O7");
    let taken = &condition.references[alternative.instead_of];
    assert_eq!(taken.form, ReferenceForm::Species(system.species_index("B(OH)3")));
}

#[test]
fn two_forms_added_take_the_larger_and_name_the_other() {
    let system = carbonate(System::new(&[("CO3^2-", -2), ("Na+", 1)]))
        .add("NaHCO3", &[("Na+", 1), ("CO3^2-", 1), ("H+", 1)], 5e-3)
        .add("Na2CO3", &[("Na+", 2), ("CO3^2-", 1)], 3e-3);
    let condition = condition(&system);
    assert_eq!(
        system.show(&condition.balance),
        "[H+] + [H2CO3*] + added Na2CO3 = [CO3^2-] + [OH-]"
    );
    let carbonate = system.species_index("CO3^2-");
    assert_eq!(condition.alternatives.len(), 1);
    assert_eq!(condition.alternatives[0].species, carbonate);
    assert_eq!(condition.references[0].reason, Reason::Added(8e-3 + 3e-3), "sodium");
    let other = proton_condition(&system.stoichiometry, &system.recipe, &[carbonate]).unwrap();
    assert_eq!(system.show(&other.balance), "[H+] + [HCO3-] + 2 [H2CO3*] = [OH-] + added NaHCO3");
}

/// Water open to the air: the gas is the reference, and brings no protons.
#[test]
fn a_held_gas_is_the_reference() {
    let system = carbonate(System::new(&[("CO3^2-", -2), ("Na+", 1)]))
        .add("NaHCO3", &[("Na+", 1), ("CO3^2-", 1), ("H+", 1)], 2e-3)
        .hold("CO2(g)", &[("CO3^2-", 1), ("H+", 2)], 0);
    let condition = condition(&system);
    assert_eq!(
        system.show(&condition.balance),
        "[H+] + added NaHCO3 = 2 [CO3^2-] + [OH-] + [HCO3-]"
    );
    assert_eq!(condition.references[0].reason, Reason::Held);
    check_derivation(&system, &condition);
}

/// A held fluoride is charged: what it brought stays in the constant.
#[test]
fn a_held_ion_stays_in_the_constant() {
    let system = System::new(&[("F-", -1), ("Na+", 1)])
        .species("HF", &[("F-", 1), ("H+", 1)])
        .add("NaOH", &[("Na+", 1), ("H+", -1)], 2e-3)
        .hold("F-", &[("F-", 1)], -1);
    assert_eq!(shown(&system), "[H+] + [HF] + added NaOH = [OH-] + held F-");
}

#[test]
fn totals_alone_take_the_smallest_constant() {
    // Ammonium chloride by its totals: at the level of NH4+ nothing is left over.
    let system = System::new(&[("NH3", 0), ("Cl-", -1)])
        .species("NH4+", &[("NH3", 1), ("H+", 1)])
        .total("NH3", 5e-3)
        .total("Cl-", 5e-3);
    let condition = condition(&system);
    assert_eq!(system.show(&condition.balance), "[H+] + total NH3 = [NH3] + [OH-] + total Cl-");
    assert!(condition.references.iter().all(|r| r.reason == Reason::SmallestConstant));
    // Mostly acid: the level of HCO3-, as 5 mmol/L sodium are nearer to it.
    let system = carbonate(System::new(&[("CO3^2-", -2), ("Na+", 1)]))
        .total("CO3^2-", 6e-3)
        .total("Na+", 5e-3);
    assert_eq!(shown(&system), "[H+] + [H2CO3*] + total Na+ = [CO3^2-] + [OH-] + total CO3^2-");
    // Reagents say the level where they can, totals fill the rest.
    let system = carbonate(System::new(&[("CO3^2-", -2), ("Na+", 1), ("Cl-", -1)]))
        .add("Na2CO3", &[("Na+", 2), ("CO3^2-", 1)], 1e-3)
        .total("Cl-", 1e-3);
    assert_eq!(shown(&system), "[H+] + [HCO3-] + 2 [H2CO3*] = [OH-] + total Cl-");
}

/// A reference form with two of its component and charge one: λ = 1/2, so D = 2.
#[test]
fn fractions_are_cleared() {
    let system = System::new(&[("Al^3+", 3), ("Cl-", -1)])
        .species("Al2(OH)5+", &[("Al^3+", 2), ("H+", -5)])
        .species("AlOH^2+", &[("Al^3+", 1), ("H+", -1)])
        .add("Al2(OH)5Cl", &[("Al^3+", 2), ("H+", -5), ("Cl-", 1)], 1e-3);
    let condition = condition(&system);
    assert_eq!(condition.charge_factor, 2);
    assert_eq!(system.show(&condition.balance), "2 [H+] + 5 [Al^3+] + 3 [AlOH^2+] = 2 [OH-]");
    check_derivation(&system, &condition);
}

/// Iron and oxygen with electrons counted: FeSO4 and O2 put in, hydrolysis of iron.
#[test]
fn the_electron_is_a_component_like_others() {
    let system = System::new(&[("Fe^3+", 3), ("SO4^2-", -2), ("e-", -1)])
        .species("Fe^2+", &[("Fe^3+", 1), ("e-", 1)])
        .species("FeOH^2+", &[("Fe^3+", 1), ("H+", -1)])
        .species("O2", &[("H+", -4), ("e-", -4)])
        .add("FeSO4", &[("Fe^3+", 1), ("e-", 1), ("SO4^2-", 1)], 2e-3)
        .add("O2", &[("H+", -4), ("e-", -4)], 1e-3);
    let condition = condition(&system);
    // Fe^2+ + 1/4 O2 + H+ = Fe^3+ + 1/2 H2O: each Fe^3+ has taken up a proton.
    assert_eq!(system.show(&condition.balance), "[H+] + [Fe^3+] = [OH-]");
    check_derivation(&system, &condition);
}

#[test]
fn empty_and_extreme_systems_are_answered() {
    let system = System::new(&[]);
    assert_eq!(shown(&system), "[H+] = [OH-]");
    let system = System::new(&[("NH3", 0)]);
    assert_eq!(shown(&system), "[H+] = [OH-]");
    let mut system = sump();
    system.recipe.reagents[0].amount = Some(f64::NAN);
    let _ = condition(&system);
    // Nothing the kind of which a file would hold, but no panic either.
    let mut system = sump();
    for species in &mut system.stoichiometry.species {
        species.charge = i32::MIN;
        for (_, n) in &mut species.row {
            *n = Rational64::new(i64::MAX, 3);
        }
    }
    let _ = proton_condition(&system.stoichiometry, &system.recipe, &[0, 99]);
    let empty = Default::default();
    assert!(proton_condition(&empty, &Default::default(), &[]).is_ok());
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1000))]

    /// Every coefficient is the number of protons counted; the constant is the strong
    /// acid less the strong base; the derivation adds up.
    #[test]
    fn agrees_with_counting_protons(made in made()) {
        let system = &made.system;
        let condition = condition(system);
        check_derivation(system, &condition);
        let found: Vec<(usize, Rational64)> = condition.balance.terms.clone();
        let counted: Vec<(usize, Rational64)> = made.counted.iter().enumerate()
            .filter(|(_, n)| **n != 0).map(|(i, n)| (i, r(*n))).collect();
        let d = r(condition.charge_factor);
        let found: Vec<_> = found.into_iter().map(|(i, n)| (i, n / d)).collect();
        prop_assert_eq!(found, counted);
        let constant = system.recipe.sum(&condition.balance.parts).unwrap() / condition.charge_factor as f64;
        prop_assert!((constant - (made.acid - made.base)).abs() < 1e-15);
        prop_assert_eq!(condition.references.len(), system.stoichiometry.components.len() - 1);
        prop_assert!(condition.alternatives.is_empty());
    }

    /// Without a recipe the constant is no larger than at the level of the components.
    #[test]
    fn totals_have_a_constant_no_larger_than_another_level(made in made(), totals in prop::collection::vec(0.0..1e-2_f64, 8)) {
        let mut system = made.system;
        system.recipe.reagents.clear();
        for (component, total) in totals.iter().enumerate().take(system.recipe.totals.len()) {
            system.recipe.totals[component] = Some(*total);
        }
        let condition = condition(&system);
        check_derivation(&system, &condition);
        let constant = system.recipe.sum(&condition.balance.parts).unwrap() / condition.charge_factor as f64;
        let own: f64 = (1..system.recipe.totals.len())
            .map(|c| -f64::from(system.stoichiometry.component_charges[c]) * system.recipe.totals[c].unwrap())
            .sum();
        prop_assert!(constant.abs() <= own.abs() + 1e-12);
    }
}
