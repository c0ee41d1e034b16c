//! What would have to be listed for a species to belong.

use num_traits::Zero;

use super::reaction::Participant;
use super::scope::{PROTON, Scope, WATER};
use crate::chemistry::formula::Phase;

impl Scope {
    /// Components that would bring a species in: the bases that it, or what it is made of,
    /// is an acid of.
    pub fn missing_for(&self, species: usize) -> Vec<String> {
        let base = self.base_of(species);
        let name = &self.species[base].name;
        let aqueous = |p: &&Participant| p.formula.phase == Phase::Aqueous;
        if self.species[base].phase != Phase::Aqueous {
            // What it falls into.
            let reaction = self
                .reactions
                .iter()
                .find(|reaction| reaction.participants.iter().any(|p| p.formula.name == *name));
            let others = reaction.map(|reaction| reaction.participants.iter().filter(aqueous));
            let missing = others
                .into_iter()
                .flatten()
                .filter_map(|p| self.find(&p.formula.name))
                .filter(|&s| s != WATER && !self.belongs(s));
            let names: Vec<String> =
                missing.map(|s| self.species[self.base_of(s)].name.clone()).collect();
            if !names.is_empty() {
                return names;
            }
        }
        let made_of = self.reactions.iter().find_map(|reaction| {
            let mut right = reaction.participants.iter().filter(|p| p.coefficient > Zero::zero());
            if right.next()?.formula.name != *name || right.next().is_some() {
                return None;
            }
            let left: Vec<usize> = reaction
                .participants
                .iter()
                .filter(|p| p.coefficient < Zero::zero() && aqueous(p))
                .filter_map(|p| self.find(&p.formula.name))
                .filter(|&s| s != WATER && s != PROTON)
                .collect();
            (left.len() > 1).then_some(left)
        });
        let missing = |s: usize| (!self.belongs(s)).then(|| self.base_of(s));
        let mut wanted: Vec<usize> = match made_of {
            Some(left) => left.into_iter().filter_map(missing).collect(),
            None => vec![base],
        };
        if wanted.is_empty() {
            wanted.push(base);
        }
        wanted.dedup();
        wanted.into_iter().map(|s| self.species[s].name.clone()).collect()
    }

    /// The species with all its protons given off, by the acid reactions in scope; of a gas
    /// or solid, what it dissolves into.
    fn base_of(&self, species: usize) -> usize {
        let mut base = species;
        // No acid has more protons to give than this.
        for _ in 0..12 {
            let name = &self.species[base].name;
            let next = self.reactions.iter().find_map(|reaction| {
                let of = |left: bool| {
                    reaction.participants.iter().filter(move |p| {
                        (p.coefficient < Zero::zero()) == left
                            && !p.formula.is_water()
                            && !p.formula.is_proton()
                    })
                };
                let (mut left, mut right) = (of(true), of(false));
                let (from, to) = (left.next()?, right.next()?);
                let one_each = left.next().is_none() && right.next().is_none();
                (one_each && from.formula.name == *name).then(|| self.find(&to.formula.name))?
            });
            match next {
                Some(next) if next != base => base = next,
                _ => break,
            }
        }
        base
    }
}
