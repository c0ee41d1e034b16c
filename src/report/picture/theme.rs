//! Colours, weights and dashes of lines.
//!
//! Hues are those of Okabe and Ito, "Color universal design" (2008), which people with any
//! of the common forms of colour blindness tell apart. On white and on black a different
//! four of them keep a contrast of three to one. No line rests on its hue alone: lines that
//! come near one another have different dashes, and every line has its name beside it.

/// Light, dark, or what the reader's own setting says.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, serde::Deserialize, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Theme {
    Light,
    Dark,
    #[default]
    Auto,
}

pub struct Colours {
    pub paper: &'static str,
    /// Text and what the picture is about.
    pub ink: &'static str,
    /// Text of less weight.
    pub faint: &'static str,
    pub grid: &'static str,
    pub frame: &'static str,
    pub hues: [&'static str; HUES],
}

pub const HUES: usize = 4;

pub const LIGHT: Colours = Colours {
    paper: "#ffffff",
    ink: "#1a1d21",
    faint: "#565d66",
    grid: "#e4e7ea",
    frame: "#8a929b",
    // Blue, vermilion, bluish green, reddish purple.
    hues: ["#0072B2", "#D55E00", "#009E73", "#CC79A7"],
};

pub const DARK: Colours = Colours {
    paper: "#15181c",
    ink: "#eceff2",
    faint: "#a5adb6",
    grid: "#2a2f35",
    frame: "#6b747e",
    // Sky blue, orange, bluish green, reddish purple.
    hues: ["#56B4E9", "#E69F00", "#009E73", "#CC79A7"],
};

/// Lengths of strokes and gaps; empty for a whole line.
pub const DASHES: [&[f64]; 8] = [
    &[],
    &[1.8, 2.6],
    &[9.0, 4.0],
    &[9.0, 3.0, 1.8, 3.0],
    &[22.0, 4.0],
    &[4.5, 2.6],
    &[8.0, 2.6, 1.8, 2.6, 1.8, 2.6],
    &[22.0, 3.0, 5.0, 3.0],
];

/// The dashes of the heavy lines.
pub const HEAVY: [&[f64]; 2] = [&[], &[9.0, 5.0]];

pub const WEIGHT: f64 = 1.6;
pub const HEAVY_WEIGHT: f64 = 3.6;

/// How one line is drawn.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Look {
    /// None for ink.
    pub hue: Option<usize>,
    pub dash: &'static [f64],
    pub heavy: bool,
}

/// Looks for lines, given which of them come near each other and how long: neighbours differ
/// in dash where the dashes go round, and in hue where the hues do, the closest ones first.
pub fn looks(heavy: &[Option<usize>], near: &[Vec<(usize, u32)>]) -> Vec<Look> {
    let mut chosen: Vec<Option<(usize, usize)>> = vec![None; heavy.len()];
    for line in 0..heavy.len() {
        if heavy[line].is_some() {
            continue;
        }
        let round: Vec<((usize, usize), u32)> = near[line]
            .iter()
            .filter_map(|&(other, length)| Some((chosen[other]?, length)))
            .collect();
        let same = |dash: usize, hue: usize| -> (usize, u32) {
            let dashes = round.iter().filter(|(near, _)| near.0 == dash).count();
            let hues = round.iter().filter(|(near, _)| near.1 == hue);
            (dashes, hues.map(|(_, length)| length).sum())
        };
        let uses = |dash: usize, hue: usize| {
            let all = chosen.iter().flatten();
            let both = all.clone().filter(|other| **other == (dash, hue)).count();
            (both, all.filter(|other| other.0 == dash || other.1 == hue).count())
        };
        let pairs = (0..DASHES.len()).flat_map(|dash| (0..HUES).map(move |hue| (dash, hue)));
        chosen[line] = pairs.min_by_key(|&(dash, hue)| (same(dash, hue), uses(dash, hue), dash));
    }
    heavy
        .iter()
        .zip(chosen)
        .map(|(heavy, chosen)| match (heavy, chosen) {
            (None, Some((dash, hue))) => Look { hue: Some(hue), dash: DASHES[dash], heavy: false },
            (number, _) => {
                let dash = HEAVY[number.unwrap_or(0) % HEAVY.len()];
                Look { hue: None, dash, heavy: true }
            }
        })
        .collect()
}
