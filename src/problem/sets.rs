//! The built-in sets by name and edition. A new edition stands beside the old one, so
//! that a file that names its edition means the same next year.

pub struct Set {
    pub name: &'static str,
    pub edition: u32,
    pub text: &'static str,
}

macro_rules! set {
    ($name:literal, $edition:literal) => {
        Set {
            name: $name,
            edition: $edition,
            text: include_str!(concat!("../library/", $name, ".lyate")),
        }
    };
}

/// Every set, the newest edition of a name last.
pub const SETS: &[Set] = &[
    set!("aqueous", 1),
    set!("ammonia", 1),
    set!("carbonate", 1),
    set!("phosphate", 1),
    set!("sulfate", 1),
    set!("acetate", 1),
    set!("borate", 1),
];

pub fn names() -> Vec<&'static str> {
    let mut names: Vec<_> = SETS.iter().map(|set| set.name).collect();
    names.dedup();
    names
}

/// The set of this name, in this edition or the newest.
pub fn find(name: &str, edition: Option<u32>) -> Option<&'static Set> {
    SETS.iter().rev().find(|set| set.name == name && edition.is_none_or(|e| e == set.edition))
}
