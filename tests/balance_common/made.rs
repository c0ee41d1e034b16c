//! Random systems with a proton condition that is known by counting.

use super::{System, r};
use proptest::prelude::*;

/// A random system of acids with complexes, each moiety put in as a known form with its
/// counter-ion, strong acid and base beside them.
#[derive(Debug, Clone)]
pub struct Made {
    pub system: System,
    /// Protons that each species holds above the forms put in, counted here.
    pub counted: Vec<i64>,
    pub acid: f64,
    pub base: f64,
}

pub fn made() -> impl Strategy<Value = Made> {
    // Charge of the component, forms by protons on it, which of them is put in.
    let moiety =
        (-3_i32..3, prop::collection::btree_set(-2_i64..4, 1..4), any::<prop::sample::Index>());
    // A complex of two moieties (or of two of one): counts and protons.
    let complex = (any::<prop::sample::Index>(), any::<prop::sample::Index>(), 1_i64..3, -2_i64..3);
    (
        prop::collection::vec(moiety, 1..5),
        prop::collection::vec(complex, 0..5),
        0.0..1e-2_f64,
        0.0..1e-2_f64,
    )
        .prop_map(|(moieties, complexes, acid, base)| {
            let names: Vec<String> = (0..moieties.len()).map(|k| format!("X{k}")).collect();
            let mut components: Vec<(&str, i32)> =
                names.iter().zip(&moieties).map(|(n, m)| (n.as_str(), m.0)).collect();
            components.extend([("Na+", 1), ("Cl-", -1)]);
            let mut system = System::new(&components);
            let mut counted: Vec<i64> = vec![1];
            let put_in: Vec<i64> = moieties
                .iter()
                .map(|(_, forms, at)| {
                    let all: Vec<i64> = forms.iter().copied().chain([0]).collect();
                    *at.get(&all)
                })
                .collect();
            counted.extend(put_in.iter().map(|reference| -reference));
            counted.extend([0, 0, -1]);
            for (k, (_, forms, _)) in moieties.iter().enumerate() {
                for protons in forms.iter().filter(|protons| **protons != 0) {
                    let name = format!("{}H{protons}", names[k]);
                    system = system.species(&name, &[(&names[k], 1), ("H+", *protons)]);
                    counted.push(protons - put_in[k]);
                }
            }
            for (one, two, n, protons) in &complexes {
                let (one, two) = (one.index(names.len()), two.index(names.len()));
                let mut counts = vec![(names[one].as_str(), *n)];
                if one == two {
                    counts[0].1 += 1;
                } else {
                    counts.push((names[two].as_str(), 1));
                }
                if *protons != 0 {
                    counts.push(("H+", *protons));
                }
                let name = format!("complex{}", counted.len());
                system = system.species(&name, &counts);
                counted.push(protons - n * put_in[one] - put_in[two]);
            }
            for (k, (charge, ..)) in moieties.iter().enumerate() {
                // The salt of the form that is put in, with as many counter-ions.
                let z = i64::from(*charge) + put_in[k];
                let mut counts = vec![(names[k].as_str(), 1)];
                match z {
                    0 => {}
                    z if z > 0 => counts.push(("Cl-", z)),
                    z => counts.push(("Na+", -z)),
                }
                if put_in[k] != 0 {
                    counts.push(("H+", put_in[k]));
                }
                let amount = 1e-3 * (k + 1) as f64;
                system = system.add(&format!("salt{k}"), &counts, amount);
                let form = if put_in[k] == 0 {
                    names[k].clone()
                } else {
                    format!("{}H{}", names[k], put_in[k])
                };
                // The rule may put it in otherwise; here the form is a given.
                let forms = vec![(system.species_index(&form), r(1))];
                system.recipe.reagents.last_mut().unwrap().forms = forms;
            }
            system = system.add("HCl", &[("H+", 1), ("Cl-", 1)], acid);
            system = system.add("NaOH", &[("Na+", 1), ("H+", -1)], base);
            Made { system, counted, acid, base }
        })
}
