//! Problems that use the built-in sets, resolved.

#![allow(dead_code)]

use std::sync::Arc;
use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::problem::scope::Scope;
use lyate::problem::sets::{self, Set};
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

pub fn checked(text: &str) -> Checked {
    let around = Surroundings {
        path: None,
        roots: &[],
        files: &Disk,
        imports: &Imports::default(),
        cancel: &AtomicBool::new(false),
    };
    check(Document::parse(text.to_owned()), &around, None).expect("nothing cancels it")
}

pub fn scope_of(text: &str) -> Arc<Scope> {
    checked(text).outcomes[0].problem.scope.clone()
}

/// The sets of the newest edition.
pub fn newest() -> impl Iterator<Item = &'static Set> {
    let newest = sets::all().map(|set| set.edition).max();
    sets::all().filter(move |set| Some(set.edition) == newest)
}

/// The components of all sets but these, each once.
pub fn union(but: &[&str]) -> Vec<&'static str> {
    let mut names = Vec::new();
    for set in newest().filter(|set| !but.contains(&set.name)) {
        for name in set.components() {
            if !names.contains(&name) {
                names.push(name);
            }
        }
    }
    names
}

/// A problem that uses all sets but these, with all of their components.
pub fn all_sets(but: &[&str]) -> String {
    let sets = newest().filter(|set| !but.contains(&set.name));
    let mut text: String = sets.map(|set| format!("use {}\n", set.name)).collect();
    text += &format!("component {}\n", union(but).join(", "));
    text
}
