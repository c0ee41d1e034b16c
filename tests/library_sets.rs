//! The built-in sets: that each stands alone and all stand together, that they close, and
//! that an edition, once released, stays as it is.

mod library_support;

use std::collections::{BTreeMap, BTreeSet};

use library_support::{all_sets, checked, newest, scope_of, union};
use lyate::problem::builtin::definitions;
use lyate::problem::reaction::{Origin, STANDARD};
use lyate::problem::sets::{self, Set};
use lyate::problem::sort::Sort;
use lyate::rules::finding::Severity;

/// Edition 1 as it was released: the length of each file and the sum of its bytes, each
/// times its place (Fletcher's way, so that exchanged bytes count).
const FIRST_EDITION: [(&str, usize, u64); 7] = [
    ("aqueous", 1281, 298952049041715020),
    ("ammonia", 623, 63188233168664208),
    ("carbonate", 865, 116949193511202506),
    ("phosphate", 987, 158426401358291564),
    ("sulfate", 371, 23688677372751786),
    ("acetate", 318, 14980678424746426),
    ("borate", 341, 20096963726828465),
];

fn digest(text: &str) -> u64 {
    let (one, two) = text.bytes().fold((0_u64, 0_u64), |(one, two), byte| {
        let one = (one + u64::from(byte)) % 0xffff_ffff;
        (one, (two + one) % 0xffff_ffff)
    });
    (two << 32) | one
}

#[test]
fn the_first_edition_is_frozen() {
    let first: Vec<_> = sets::all()
        .filter(|set| set.edition == 1)
        .map(|set| (set.name, set.text.len(), digest(set.text)))
        .collect();
    assert_eq!(first, FIRST_EDITION, "`use aqueous 1` must mean the same next year");
}

#[test]
fn the_newest_edition_is_taken_and_a_number_asks_for_one() {
    for set in newest() {
        assert_eq!(sets::find(set.name, None).unwrap().edition, 2, "{}", set.name);
    }
    let one = definitions(sets::find("aqueous", Some(1)).unwrap());
    let two = definitions(sets::find("aqueous", None).unwrap());
    assert_eq!(one.reactions.len(), 11);
    // What a set uses is of its own edition.
    for (definitions, edition) in [(&one, 1), (&two, 2)] {
        for reaction in &definitions.reactions {
            let Origin::Set { edition: found, .. } = reaction.origin else { panic!() };
            assert_eq!(found, edition, "{}", reaction.equation);
        }
    }
    // The newer one still has all that the older had, with the same constants.
    for reaction in &one.reactions {
        let newer = two.reactions.iter().find(|newer| newer.equation == reaction.equation);
        let newer = newer.unwrap_or_else(|| panic!("{} is gone", reaction.equation));
        for celsius in [0.0, 25.0, 50.0] {
            let kelvin = celsius + 273.15;
            assert_eq!(newer.log_k(kelvin), reaction.log_k(kelvin), "{}", reaction.equation);
        }
    }
}

#[test]
fn every_set_stands_alone_without_a_finding() {
    for set in newest() {
        let found = definitions(set);
        assert_eq!(found.errors, 0, "{}", set.name);
        let components: Vec<&str> = set.components().collect();
        assert!(!components.is_empty(), "{} names no components", set.name);
        // Its own text as a file beside the others, and a problem that uses it.
        let text = format!("use {} 2\ncomponent {}\n", set.name, components.join(", "));
        no_findings(&text);
        let scope = scope_of(&text);
        assert!(scope.defects.is_empty(), "{}: {:?}", set.name, scope.defects);
        assert!(scope.belonging.links.is_empty(), "{}: components hang together", set.name);
        let idle: Vec<&str> = scope
            .reactions
            .iter()
            .zip(&scope.belonging.used)
            .filter(|(reaction, used)| !**used && is_own(&reaction.origin, set))
            .map(|(reaction, _)| reaction.equation.as_str())
            .collect();
        assert!(idle.is_empty(), "{}: its components do not lead to {idle:?}", set.name);
        // None of the components named is idle either.
        for name in &components {
            let species = scope.find(name).unwrap_or_else(|| panic!("{}: {name}", set.name));
            let found = &scope.species[species].name;
            let named = scope.reactions_in_use().any(|(_, reaction)| {
                reaction.participants.iter().any(|p| p.formula.name == *found)
            });
            assert!(named, "{}: no reaction has {name}", set.name);
        }
    }
}

/// Whether a set writes a reaction itself, rather than another that it uses.
fn is_own(origin: &Origin, set: &Set) -> bool {
    *origin == Origin::Set { name: set.name, edition: set.edition }
}

fn no_findings(text: &str) {
    let checked = checked(text);
    let worth: Vec<_> = checked
        .findings
        .iter()
        // The problem states no amounts, and says so.
        .filter(|finding| finding.rule != "component-unused")
        .filter(|finding| finding.severity != Severity::Note)
        .map(|finding| &finding.message)
        .collect();
    assert!(worth.is_empty(), "{text}{worth:?}");
}

#[test]
fn all_sets_stand_together() {
    let (text, with_electrons) = (all_sets(&["redox"]), all_sets(&[]));
    no_findings(&text);
    let scope = scope_of(&text);
    assert!(scope.defects.is_empty(), "{:?}", scope.defects);
    assert!(scope.belonging.used.iter().all(|used| *used));
    assert!(scope.reactions.len() > 400);
    // With electrons, forms that couples join are no longer independent; nothing else.
    let components: BTreeSet<&str> = union(&[]).into_iter().collect();
    assert!(components.contains("e-") && !scope_of(&with_electrons).belonging.links.is_empty());
}

/// Two reactions for one equilibrium, or two constants for one species, would hide one.
#[test]
fn no_equilibrium_stands_twice() {
    let mut seen: BTreeMap<String, (&str, String)> = BTreeMap::new();
    let mut made: BTreeMap<String, String> = BTreeMap::new();
    for set in newest() {
        for reaction in definitions(set).reactions.iter().filter(|r| is_own(&r.origin, set)) {
            let entry = (set.name, reaction.equation.clone());
            if let Some(other) = seen.insert(reaction.key.clone(), entry) {
                panic!("{} stands in {} and in {}", reaction.equation, set.name, other.0);
            }
            // The species that it is there for: the acid, the complex, the solid, the gas.
            let mut sides = reaction.participants.iter().filter(|p| match reaction.sort() {
                Sort::Complex => p.coefficient > 0.into() && !p.formula.is_proton(),
                _ => p.coefficient < 0.into() && !p.formula.is_water(),
            });
            let (Sort::Acid | Sort::Complex | Sort::Solid | Sort::Gas) = reaction.sort() else {
                continue;
            };
            let name = sides.next().unwrap().formula.name.clone();
            if let Some(other) = made.insert(name.clone(), reaction.equation.clone()) {
                panic!("{name} is made by {other} and by {}", reaction.equation);
            }
        }
    }
    // One name for each substance; isomers are two, told apart by their names.
    let scope = scope_of(&all_sets(&[]));
    let mut same = BTreeSet::new();
    for (index, one) in scope.species.iter().enumerate() {
        for two in &scope.species[index + 1..] {
            if one.same_matter(two) && !one.is_electron() {
                let mut names = [one.name.as_str(), two.name.as_str()];
                names.sort_unstable();
                same.insert(names);
            }
        }
    }
    let isomers = BTreeSet::from([
        ["(CH3)2NH", "C2H5NH2"],
        ["(CH3)2NH2+", "C2H5NH3+"],
        ["CH3COOO-", "HOCH2COO-"],
        ["CH3COOOH", "HOCH2COOH"],
    ]);
    assert_eq!(same, isomers);
}

#[test]
fn cycles_of_reactions_agree() {
    let worst = |text: &str| {
        let scope = scope_of(text);
        let log_k: Vec<f64> = scope
            .reactions
            .iter()
            .map(|reaction| reaction.log_k(STANDARD).map_or(0.0, |(log_k, _)| log_k))
            .collect();
        let gap = |cycle: &lyate::problem::sparse::Row| {
            lyate::problem::belong::combined(cycle, |r| log_k[r]).abs()
        };
        let gaps = scope.belonging.cycles.iter().map(|(_, cycle)| gap(cycle));
        (scope.belonging.cycles.len(), gaps.fold(0.0, f64::max))
    };
    for text in [all_sets(&["redox"]), all_sets(&[])] {
        let (_, gap) = worst(&text);
        assert!(gap <= 0.02, "a cycle disagrees by {gap}");
    }
    // The measure sees a cycle that does not close.
    let odd = "use carbonate\ncomponent CO3^2-\n\
        reaction CO2 + H2O <=> CO3^2- + 2 H+, log K = -17.0, source \"made up\"\n";
    let (cycles, gap) = worst(odd);
    assert!(cycles == 1 && (0.2..0.5).contains(&gap), "{cycles} {gap}");
}

/// A user's own group of a set's symbol goes before, and takes the set's reactions with it.
#[test]
fn an_own_group_of_another_meaning_hides_the_sets_reactions() {
    let same = "use organic_acids\ngroup Mal = C4H4O5\ncomponent Mal^2-\n";
    let other = "use organic_acids\ngroup Mal = C3H2O4\ncomponent Mal^2-\n";
    assert!(scope_of(same).find("H2Mal").is_some());
    assert!(scope_of(other).find("H2Mal").is_none());
    assert!(scope_of(other).find("H2Tar").is_some());
}

#[test]
fn the_sets_are_as_large_as_a_laboratory_needs() {
    let mut counts: BTreeMap<Sort, BTreeSet<String>> = BTreeMap::new();
    for set in newest() {
        for reaction in &definitions(set).reactions {
            counts.entry(reaction.sort()).or_default().insert(reaction.key.clone());
        }
    }
    let count = |sort| counts[&sort].len();
    assert!(count(Sort::Acid) >= 100, "{} acids", count(Sort::Acid));
    assert!(count(Sort::Complex) >= 100, "{} complexes", count(Sort::Complex));
    assert!(count(Sort::Solid) >= 50, "{} solids", count(Sort::Solid));
    assert!(count(Sort::Gas) >= 10, "{} gases", count(Sort::Gas));
}

#[test]
fn every_set_says_what_it_holds_and_every_constant_where_it_comes_from() {
    for set in sets::all() {
        let Set { name, text, .. } = set;
        assert!(text.starts_with("# ") && text.ends_with('\n'), "{name}");
        for reaction in &definitions(set).reactions {
            let source = reaction.source.as_deref().unwrap_or_default();
            let told = source.contains("read") || source.contains("recalled");
            assert!(told && source.len() > 20, "{name}: {}: {source}", reaction.equation);
        }
    }
    for set in newest() {
        let remarks = set.remarks().count();
        assert!(set.summary().ends_with('.') && remarks >= 2, "{} says too little", set.name);
    }
}
