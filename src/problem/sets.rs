//! The built-in sets by name and edition. A new edition stands beside the old one, so
//! that a file that names its edition means the same next year.

pub struct Set {
    pub name: &'static str,
    pub edition: u32,
    pub text: &'static str,
}

macro_rules! edition {
    ($edition:literal: $($name:literal)*) => {
        [$(Set {
            name: $name,
            edition: $edition,
            text: include_str!(concat!("../library/", $edition, "/", $name, ".lyate")),
        }),*]
    };
}

static FIRST: [Set; 7] =
    edition!(1: "aqueous" "ammonia" "carbonate" "phosphate" "sulfate" "acetate" "borate");

/// In the order of a list for people: what a water holds, then what is asked for by name.
static SECOND: [Set; 30] = edition!(2:
    "aqueous" "ammonia" "carbonate" "phosphate" "sulfate" "sulfide" "sulfite" "borate"
    "silicate" "fluoride" "cyanide" "chlorine" "nitrite" "acetate" "organic_acids" "gases"
    "oxidants" "arsenate" "chromate" "selenite" "phenols" "amines" "buffers"
    "ammonia_complexes" "complexes" "chelates" "hydrolysis" "ion_pairs" "minerals" "redox"
);

/// The editions, the newest first.
const EDITIONS: [&[Set]; 2] = [&SECOND, &FIRST];

/// Every set, the newest edition first.
pub fn all() -> impl Iterator<Item = &'static Set> {
    EDITIONS.into_iter().flatten()
}

/// Every name once, in the order of the newest edition.
pub fn names() -> Vec<&'static str> {
    let mut names = Vec::new();
    for set in all() {
        if !names.contains(&set.name) {
            names.push(set.name);
        }
    }
    names
}

/// The set of this name, in this edition or the newest that has it.
pub fn find(name: &str, edition: Option<u32>) -> Option<&'static Set> {
    all().find(|set| set.name == name && edition.is_none_or(|wanted| wanted == set.edition))
}

impl Set {
    /// The first line of its opening comment: what it holds.
    pub fn summary(&self) -> &'static str {
        self.text.lines().next().unwrap_or_default().trim_start_matches(['#', ' '])
    }

    /// The opening comment below its first line, without the signs of a comment: what was
    /// left out and why, and how far to trust it.
    pub fn remarks(&self) -> impl Iterator<Item = &'static str> {
        let comment = self.text.lines().take_while(|line| line.starts_with('#')).skip(1);
        comment.map(|line| line.trim_start_matches('#').trim_start_matches(' '))
    }

    /// The species that a problem lists as its components to bring all of the set in: the
    /// paragraph `Components:` of its opening comment.
    pub fn components(&self) -> impl Iterator<Item = &'static str> {
        let start = self.remarks().skip_while(|line| !line.starts_with("Components:"));
        let lines = start.take_while(|line| !line.is_empty());
        let names = lines.flat_map(|line| line.trim_start_matches("Components:").split(','));
        names.map(str::trim).filter(|name| !name.is_empty())
    }
}
