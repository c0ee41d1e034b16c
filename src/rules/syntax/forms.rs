//! What each statement looks like, for the help of findings about its writing.

const FORMS: &[(&str, &str)] = &[
    ("problem", "problem \"Rinse water, tank 3\""),
    ("use", "use aqueous"),
    ("temperature", "temperature 18 °C"),
    ("activity", "activity davies"),
    ("ionic", "ionic strength 0.1 mol/L"),
    ("group", "group Cit = C6H5O7"),
    ("component", "component NH3 \"ammonia nitrogen\", SO4^2-"),
    ("reaction", "reaction NH4+ <=> NH3 + H+, pKa = 9.25, source \"…\""),
    ("total", "total NH3 = 10 mmol/L"),
    ("add", "add NaOH 9 mmol/L"),
    ("hold", "hold pH = 7.2"),
    ("precipitate", "precipitate CaCO3(s)"),
    ("saturate", "saturate with CaCO3(s)"),
    ("balance", "balance NH3 [NH4+] + [NH3] = total NH3"),
    ("expect", "expect pH = 9.3 ± 0.1"),
    ("curve", "curve over pH from 2 to 12"),
    ("case", "case \"winter\""),
    ("without", "without hold pH"),
];

/// An example of the statement that starts with this word.
pub fn example(word: &str) -> Option<&'static str> {
    FORMS.iter().find(|(first, _)| *first == word).map(|(_, form)| *form)
}

/// Words that start a clause of a reaction.
pub const CLAUSES: [&str; 11] =
    ["pKa", "pKsp", "pK", "log", "K", "enthalpy", "heat", "at", "valid", "source", "giving"];
