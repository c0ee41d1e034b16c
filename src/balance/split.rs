//! The dissolved species that a reagent splits into: the forms it is put in as.
//!
//! The fewest particles first, water not counted: NH4HCO3 into NH4+ and HCO3-, H2SO4
//! into H+ and HSO4-. Of equally few, the most charged: NH4+ and HCO3- before NH3 and
//! H2CO3. Only species with one component besides the proton and the electron are
//! taken, so that ion pairs and complexes are no form that a salt is put in as.

use num_rational::Rational64;
use num_traits::{Signed, Zero};

use super::recipe::Row;
use crate::problem::exact::Exact;
use crate::problem::stoichiometry::Stoichiometry;

/// One mole of a reagent as dissolved species.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Split {
    /// (species, moles), by rising index; neither H+ nor OH-.
    pub forms: Vec<(usize, Rational64)>,
    /// Protons left over: moles of strong acid; negative for strong base.
    pub protons: Rational64,
}

/// Combinations of forms looked at: far above what reagents with a few ions have.
const COMBINATIONS: usize = 4096;

/// Splits what one mole of a reagent brings (over the components, the proton first)
/// into species. None where no species with one component each add up to it.
pub fn split_into_species(brings: &Row, stoichiometry: &Stoichiometry) -> Option<Split> {
    let electron = stoichiometry.components.iter().position(|name| name == "e-");
    let forms = Forms::of(stoichiometry, electron);
    let amount = |component: Option<usize>| {
        let at = brings.iter().find(|(index, _)| Some(*index) == component);
        at.map_or(Rational64::zero(), |(_, amount)| *amount)
    };
    let mut choices: Vec<Vec<Choice>> = Vec::new();
    for (component, wanted) in brings {
        if *component == 0 || Some(*component) == electron {
            continue;
        }
        let options: Vec<Choice> =
            forms.of_component(*component).filter_map(|form| form.times(*wanted)).collect();
        if options.is_empty() {
            return None;
        }
        choices.push(options);
    }
    let protons = amount(Some(0));
    let electrons = amount(electron);
    let mut best: Option<(Score, Split)> = None;
    let mut picked = vec![0; choices.len()];
    for _ in 0..COMBINATIONS {
        let chosen: Vec<&Choice> = choices.iter().zip(&picked).map(|(c, p)| &c[*p]).collect();
        consider(&chosen, &choices, protons, electrons, &forms, &mut best);
        // The next combination, the last component's form moving first.
        let Some(turn) = (0..picked.len()).rev().find(|i| picked[*i] + 1 < choices[*i].len())
        else {
            break;
        };
        picked[turn] += 1;
        picked[turn + 1..].fill(0);
    }
    best.map(|(_, split)| split)
}

/// A species that may be a form.
struct Form {
    species: usize,
    component: Option<usize>,
    per: Rational64,
    protons: Rational64,
    electrons: Rational64,
    charged: bool,
}

impl Form {
    /// As many of this form as bring `wanted` of its component, where that is a number
    /// of whole particles (or `wanted` is broken itself).
    fn times(&self, wanted: Rational64) -> Option<Choice> {
        let count = wanted.over(&self.per)?;
        let whole = count.is_integer() || !wanted.is_integer();
        if !count.is_positive() || !whole {
            return None;
        }
        Some(Choice {
            species: self.species,
            count,
            protons: self.protons,
            electrons: self.electrons,
            per: self.per,
            charged: self.charged,
        })
    }
}

/// All of one component in one form.
struct Choice {
    species: usize,
    count: Rational64,
    /// Per particle.
    protons: Rational64,
    electrons: Rational64,
    per: Rational64,
    charged: bool,
}

struct Forms(Vec<Form>);

impl Forms {
    fn of(stoichiometry: &Stoichiometry, electron: Option<usize>) -> Forms {
        let mut forms = Vec::new();
        for (species, described) in stoichiometry.species.iter().enumerate() {
            let mut form = Form {
                species,
                component: None,
                per: Rational64::zero(),
                protons: Rational64::zero(),
                electrons: Rational64::zero(),
                charged: described.charge != 0,
            };
            let mut others = 0;
            for (component, coefficient) in &described.row {
                if *component == 0 {
                    form.protons = *coefficient;
                } else if Some(*component) == electron {
                    form.electrons = *coefficient;
                } else {
                    form.component = Some(*component);
                    form.per = *coefficient;
                    others += 1;
                }
            }
            if others == 1 || others == 0 && !form.electrons.is_zero() {
                forms.push(form);
            }
        }
        Forms(forms)
    }

    fn of_component(&self, component: usize) -> impl Iterator<Item = &Form> {
        self.0.iter().filter(move |form| form.component == Some(component))
    }

    /// The species without a component of its own that takes up electrons: O2, H2.
    fn of_electrons(&self, electrons: Rational64) -> Option<(&Form, Rational64)> {
        self.0.iter().filter(|form| form.component.is_none()).find_map(|form| {
            let count = electrons.over(&form.electrons)?;
            (count.is_positive() && count.is_integer()).then_some((form, count))
        })
    }
}

/// Smaller is better: particles, neutral particles, protons left over.
type Score = (Rational64, Rational64, Rational64);

/// Looks at one combination, and at what becomes of it when one component is put in
/// as two forms so that no proton is left over.
fn consider(
    chosen: &[&Choice],
    choices: &[Vec<Choice>],
    protons: Rational64,
    electrons: Rational64,
    forms: &Forms,
    best: &mut Option<(Score, Split)>,
) -> Option<()> {
    let mut left_protons = protons;
    let mut left_electrons = electrons;
    let mut counts: Vec<(usize, Rational64, bool)> = Vec::new();
    for choice in chosen {
        left_protons = left_protons.minus(&choice.count.times(&choice.protons)?)?;
        left_electrons = left_electrons.minus(&choice.count.times(&choice.electrons)?)?;
        counts.push((choice.species, choice.count, choice.charged));
    }
    if !left_electrons.is_zero() {
        let (form, count) = forms.of_electrons(left_electrons)?;
        left_protons = left_protons.minus(&count.times(&form.protons)?)?;
        counts.push((form.species, count, form.charged));
    }
    offer(&counts, left_protons, best)?;
    if left_protons.is_zero() {
        return Some(());
    }
    for (place, choice) in chosen.iter().enumerate() {
        for other in &choices[place] {
            if other.per != choice.per || other.electrons != choice.electrons {
                continue;
            }
            let Some(moved) = left_protons.over(&other.protons.minus(&choice.protons)?) else {
                continue;
            };
            if moved.is_integer() && moved.is_positive() && moved < choice.count {
                let mut mixed = counts.clone();
                mixed[place].1 = choice.count.minus(&moved)?;
                mixed.push((other.species, moved, other.charged));
                offer(&mixed, Rational64::zero(), best)?;
            }
        }
    }
    Some(())
}

fn offer(
    counts: &[(usize, Rational64, bool)],
    protons: Rational64,
    best: &mut Option<(Score, Split)>,
) -> Option<()> {
    let mut particles = protons.abs();
    let mut neutral = Rational64::zero();
    for (_, count, charged) in counts {
        particles = particles.plus(count)?;
        if !charged {
            neutral = neutral.plus(count)?;
        }
    }
    let score = (particles, neutral, protons.abs());
    if best.as_ref().is_none_or(|(found, _)| score < *found) {
        let mut forms: Vec<_> = counts.iter().map(|(species, n, _)| (*species, *n)).collect();
        forms.sort_unstable();
        *best = Some((score, Split { forms, protons }));
    }
    Some(())
}
