//! Pictures by their geometry: labels that do not meet, lines that are told apart without
//! colour and with any eyes, and marks where independent arithmetic has them.

use std::collections::HashSet;
use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;

use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::report::picture::chart::{Chart, MarkKind, Role};
use lyate::report::picture::layout::{Kind as TextKind, Layout};
use lyate::report::picture::theme::{Colours, DARK, LIGHT, Theme};
use lyate::report::picture::{Kind, Wish, character, chart, svg};
use lyate::report::source::{Stated, problems};
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::text::tree::Document;

fn checked(text: &str, path: Option<&Path>) -> Checked {
    let imports = Imports::default();
    let around = Surroundings {
        path,
        roots: &[],
        files: &Disk,
        imports: &imports,
        cancel: &AtomicBool::new(false),
    };
    check(Document::parse(text.to_owned()), &around, None).unwrap()
}

fn picture(stated: Stated, kind: Kind) -> Result<Chart, String> {
    let wish = Wish { kind: Some(kind), of: None };
    chart("file", stated, wish, &AtomicBool::new(false)).expect("nothing cancels it")
}

fn only(text: &str, kind: Kind) -> Chart {
    let checked = checked(text, None);
    picture(problems(&checked)[0], kind).unwrap()
}

fn problem_files() -> Vec<PathBuf> {
    let mut found = Vec::new();
    let mut folders = vec![Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/problems")];
    while let Some(folder) = folders.pop() {
        for entry in std::fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            match path.extension() {
                None if path.is_dir() => folders.push(path),
                Some(extension) if extension == "lyate" => found.push(path),
                _ => {}
            }
        }
    }
    found.sort();
    found
}

/// No text meets another or leaves the page, labels lie in the plot, every line is named,
/// and neighbours have different dashes.
fn look_over(chart: &Chart, width: u32, height: u32, name: &str) {
    let layout = Layout::new(chart, width, height);
    let page = layout.plot.grown(0.0);
    for (index, text) in layout.texts.iter().enumerate() {
        let words = text.words.text();
        assert!(
            text.frame.left >= 0.0
                && text.frame.top >= 0.0
                && text.frame.right <= layout.width
                && text.frame.bottom <= layout.height,
            "{name}: {words} leaves the page: {:?}",
            text.frame
        );
        if matches!(text.kind, TextKind::Label | TextKind::MarkLabel) {
            assert!(page.holds(&text.frame), "{name}: {words} leaves the plot");
        }
        for other in &layout.texts[index + 1..] {
            let overlap = text.frame.meets(&other.frame);
            assert!(!overlap, "{name}: {words} lies on {}", other.words.text());
        }
        for (at, radius, _) in &layout.marks {
            let nearest = text.frame.nearest(*at);
            assert!(nearest.far(*at) >= *radius, "{name}: {words} hides a mark");
        }
    }
    let told: HashSet<String> = layout.texts.iter().map(|text| text.words.text()).collect();
    for line in chart.lines.iter().filter(|_| chart.lines.len() > 1) {
        assert!(told.contains(&line.label.text()), "{name}: {} has no label", line.label.text());
    }
    for (index, near) in layout.near.iter().enumerate() {
        for &(other, _) in
            near.iter().filter(|(other, _)| near.len() < 8 && layout.near[*other].len() < 8)
        {
            let (one, two) = (&layout.strokes[index], &layout.strokes[other]);
            assert_ne!(one.look.dash, two.look.dash, "{name}: {} and {}", one.name, two.name);
        }
    }
    for stroke in &layout.strokes {
        for at in stroke.pieces.iter().flatten() {
            let inside = layout.plot.nearest(*at).far(*at) < 0.01;
            assert!(inside, "{name}: {} leaves the plot", stroke.name);
        }
    }
}

#[test]
fn pictures_of_problem_files_are_clear() {
    let (drawn, crossed) = look_over_files(1, &[(720, 540)]);
    assert!(drawn > 60 && crossed > 45, "{drawn} were drawn, {crossed} crossed");
}

/// Run by hand: every case, in more sizes.
#[test]
#[ignore = "takes minutes"]
fn pictures_of_every_case_are_clear_in_every_size() {
    let sizes = [(320, 240), (420, 320), (600, 450), (720, 540), (1200, 800)];
    let (drawn, crossed) = look_over_files(usize::MAX, &sizes);
    assert!(drawn > 150 && crossed > 100, "{drawn} were drawn, {crossed} crossed");
}

/// Looks over the pictures of so many problems of each file, and counts those drawn and
/// those in which the sides of the proton condition cross.
fn look_over_files(most: usize, sizes: &[(u32, u32)]) -> (usize, usize) {
    let (mut drawn, mut crossed) = (0, 0);
    for path in problem_files() {
        let text = std::fs::read_to_string(&path).unwrap();
        let checked = checked(&text, Some(&path));
        for stated in problems(&checked).into_iter().take(most) {
            let Some(solved) = stated.outcome.solved() else { continue };
            let name = format!("{} {:?}", path.display(), stated.case);
            let whole = picture(stated, Kind::LogConcentration).unwrap();
            let shares = picture(stated, Kind::Distribution).ok();
            for &(width, height) in sizes {
                look_over(&whole, width, height, &name);
                shares.iter().for_each(|shares| look_over(shares, width, height, &name));
            }
            shares.iter().for_each(|shares| shares_add_up(shares, &name));
            let text = svg(&whole, Theme::Auto, 720, 540).unwrap();
            roxmltree::Document::parse(&text).unwrap_or_else(|e| panic!("{name}: {e}"));
            let letters = character(&whole, 80);
            let widest = letters.lines().map(|line| line.chars().count()).max();
            assert!(widest <= Some(80), "{name}\n{letters}");
            if let Some(ph) = crossing(&whole) {
                assert!((ph - solved.ph()).abs() < 0.004, "{name}: {ph} for {}", solved.ph());
                crossed += 1;
            }
            drawn += 1;
        }
    }
    (drawn, crossed)
}

/// Where the two sides of the proton condition cross, found from the lines alone. They may
/// cross more than once, as where both run along one line; then the place nearest to the mark.
fn crossing(chart: &Chart) -> Option<f64> {
    let side = |n: usize| chart.lines.iter().find(|line| line.role == Role::Main(n));
    let (left, right) = (side(0)?, side(1)?);
    let answer = chart.marks.iter().find(|mark| mark.kind == MarkKind::Answer)?.at.0;
    let places = left.pieces.iter().flatten().filter(|place| (place.0 - answer).abs() < 1.0);
    let apart: Vec<(f64, f64)> = places.filter_map(|&(x, y)| Some((x, y - right.at(x)?))).collect();
    let crossed = apart.windows(2).filter(|pair| pair[0].1 * pair[1].1 <= 0.0);
    crossed
        .map(|pair| {
            let [(x0, one), (x1, two)] = [pair[0], pair[1]];
            if one == two { x0 } else { x0 + (x1 - x0) * one / (one - two) }
        })
        .min_by(|a, b| (a - answer).abs().total_cmp(&(b - answer).abs()))
}

/// What is drawn of a component is nearly all of it, at any pH.
fn shares_add_up(chart: &Chart, name: &str) {
    for n in 1..28 {
        let x = 0.5 * f64::from(n);
        let sum: f64 = chart
            .lines
            .iter()
            .map(|line| {
                // Lines that lie on one another are told once.
                let together = line.label.text().matches(", ").count() + 1;
                together as f64 * line.at(x).unwrap_or(0.0)
            })
            .sum();
        assert!((0.96..1.01).contains(&sum), "{name}: {sum} at pH {x}");
    }
}

/// A softener: calcium as 2.9 mmol/L and carbonate as 3.4 mmol/L, of which at high pH nearly
/// all of the calcium is in calcite. Invented figures; the products are recalled.
const SOFTENER: &str = "\
use aqueous
component Ca^2+, CO3^2-, Mg^2+, Na+, Cl-
reaction CaCO3(s) <=> Ca^2+ + CO3^2-, pKsp = 8.48, source \"recalled\"
reaction Mg(OH)2(s) <=> Mg^2+ + 2 OH-, pKsp = 11.15, source \"recalled\"
add CaCl2   1.7 mmol/L
add Ca(OH)2 1.2 mmol/L
add MgCl2   0.8 mmol/L
add NaHCO3  3.0 mmol/L
add CO2     0.4 mmol/L
precipitate CaCO3(s)
precipitate Mg(OH)2(s)
";

#[test]
fn the_solids_are_among_the_shares() {
    let checked = checked(SOFTENER, None);
    let stated = problems(&checked)[0];
    let shares = |of| {
        let wish = Wish { kind: Some(Kind::Distribution), of: Some(of) };
        chart("file", stated, wish, &AtomicBool::new(false)).unwrap().unwrap()
    };
    let at = |chart: &Chart, name: &str, x: f64| {
        chart.lines.iter().find(|line| line.label.text() == name).and_then(|line| line.at(x))
    };
    for of in ["Ca^2+", "CO3^2-", "Mg^2+"] {
        shares_add_up(&shares(of), of);
    }
    // Carbonate that goes with all of the calcium is 2.9 of 3.4.
    let carbonate = shares("CO3^2-");
    assert!((at(&carbonate, "CaCO₃(s)", 12.0).unwrap() - 2.9 / 3.4).abs() < 0.005);
    assert_eq!(at(&carbonate, "CaCO₃(s)", 5.0), Some(0.0));
    let calcium = shares("Ca^2+");
    assert!(at(&calcium, "CaCO₃(s)", 12.0).unwrap() > 0.99);
    assert!(at(&calcium, "Ca²⁺", 5.0).unwrap() > 0.99);
    // Magnesium has its own solid, and none of the other.
    let magnesium = shares("Mg^2+");
    assert!(at(&magnesium, "Mg(OH)₂(s)", 12.0).unwrap() > 0.99);
    assert_eq!(at(&magnesium, "CaCO₃(s)", 12.0), None);
    // The mark of each form is on its line.
    for chart in [&carbonate, &calcium, &magnesium] {
        for mark in &chart.marks {
            let near = |line: &&lyate::report::picture::chart::Line| {
                line.at(mark.at.0).is_some_and(|y| (y - mark.at.1).abs() < 0.01)
            };
            assert!(chart.lines.iter().any(|line| near(&line)), "{:?}", mark.at);
        }
    }
}

/// A ring stands at the total; where a part of it is in a solid, the lines do not meet there.
#[test]
fn no_system_point_is_claimed_of_what_precipitates() {
    let rings = |text: &str| -> Vec<f64> {
        let chart = only(text, Kind::LogConcentration);
        let points = chart.marks.iter().filter(|mark| mark.kind == MarkKind::Point);
        points.map(|mark| mark.at.0).collect()
    };
    let dissolved = SOFTENER.replace("precipitate CaCO3(s)\nprecipitate Mg(OH)2(s)\n", "");
    let (all, some) = (rings(&dissolved), rings(SOFTENER));
    assert!(all.len() == 2 && (all[0] - 6.3).abs() < 0.1 && (all[1] - 10.2).abs() < 0.1, "{all:?}");
    assert!(some.len() == 1 && (some[0] - 6.3).abs() < 0.1, "{some:?}");
}

/// The sides of the proton condition cross at the answer where one of two solids forms.
#[test]
fn sides_cross_where_one_of_two_solids_forms() {
    let checked = checked(SOFTENER, None);
    let stated = problems(&checked)[0];
    let solved = stated.outcome.solved().unwrap();
    assert_eq!(solved.formed.iter().flatten().count(), 1);
    let chart = picture(stated, Kind::LogConcentration).unwrap();
    assert!((crossing(&chart).unwrap() - solved.ph()).abs() < 0.004);
    let mark = chart.marks.iter().find(|mark| mark.kind == MarkKind::Answer).unwrap();
    for line in chart.lines.iter().filter(|line| line.role != Role::Plain) {
        assert!((line.at(mark.at.0).unwrap() - mark.at.1).abs() < 0.01);
    }
    // The other one forms at a higher pH, and the line holds it there.
    assert!(chart.notes[0].text().contains("2 precipitated Mg(OH)₂(s)"));
}

#[test]
fn cautions_are_told_below() {
    let notes = |text: &str, kind| -> Vec<String> {
        only(text, kind).notes.iter().map(|note| note.text()).collect()
    };
    let dosed = "use aqueous\ncomponent Na+, Cl-\nadd HCl 20 mmol/L\nhold pH = 7 by NaOH\n\
                 curve over HCl from 0 to 40 mmol/L\n";
    let wanted = "Caution: verify doses by a bench test; safety data sheets, local codes and \
                  licensed practice go first.";
    for kind in [Kind::LogConcentration, Kind::Titration] {
        assert_eq!(notes(dosed, kind).last().map(String::as_str), Some(wanted));
    }
    let calm = "use aqueous\ncomponent NH3, Cl-\nadd NH4Cl 1 mmol/L\n";
    assert!(!notes(calm, Kind::LogConcentration).iter().any(|note| note.contains("Caution")));
}

/// What a crowded picture has no clear place for is told below it.
#[test]
fn labels_without_a_place_are_told_below() {
    let chart = only(CROWDED, Kind::LogConcentration);
    look_over(&chart, 600, 450, "crowded");
    let layout = Layout::new(&chart, 600, 450);
    let told: Vec<String> = layout.texts.iter().map(|text| text.words.text()).collect();
    let told = told.join(" ");
    for label in chart.marks.iter().filter_map(|mark| mark.label.as_ref()) {
        assert!(told.contains(&label.text()), "{} is not told", label.text());
    }
    assert!(!layout.samples.is_empty());
    // However much is told below, most of the height is the plot's.
    assert!(layout.plot.height() >= 0.59 * 450.0, "{:?}", layout.plot);
}

/// A cleaning bath. Invented figures.
const CROWDED: &str = "\
use aqueous
use chelates
use hydrolysis
component EDTA^4-, Ca^2+, Mg^2+, Cu^2+, Na+, Cl-, CO3^2-
add Na2H2EDTA 5 mmol/L
add CaCl2 2 mmol/L
add MgCl2 1 mmol/L
add CuCl2 1 mmol/L
add NaHCO3 3 mmol/L
";

/// With ideal activities a system point lies at the pKa that is stated.
#[test]
fn system_points_lie_at_the_stated_constants() {
    let chart = only(
        "activity ideal\ngroup L = C4H4O4\ncomponent L^2-, Na+, B\n\
         reaction H2L <=> HL- + H+, pKa = 4.213, source \"invented\"\n\
         reaction HL- <=> L^2- + H+, pKa = 5.641, source \"invented\"\n\
         reaction HB+ <=> B + H+, pKa = 9.3, source \"invented\"\n\
         group B\ntotal L^2- = 12.5 mmol/L\ntotal B = 0.3 mmol/L\ntotal Na+ = 20 mmol/L\n",
        Kind::LogConcentration,
    );
    let points: Vec<_> =
        chart.marks.iter().filter(|mark| mark.kind == MarkKind::Point).map(|m| m.at).collect();
    let wanted = [(4.213, 12.5e-3_f64), (5.641, 12.5e-3), (9.3, 0.3e-3)];
    assert_eq!(points.len(), wanted.len());
    for ((x, y), (pka, total)) in points.into_iter().zip(wanted) {
        assert!((x - pka).abs() < 1e-6 && (y - total.log10()).abs() < 1e-6, "{x} {y}");
    }
}

/// Away from its system point a line falls by whole units, and at it it lies log 2 lower:
/// common practice of these diagrams.
#[test]
fn lines_are_those_of_the_textbook_rules() {
    let chart = only(
        "activity ideal\ncomponent A-, Na+\ngroup A\n\
         reaction HA <=> A- + H+, pKa = 6, source \"invented\"\n\
         add NaA 10 mmol/L\n",
        Kind::LogConcentration,
    );
    let line = |name: &str| chart.lines.iter().find(|line| line.label.text() == name).unwrap();
    let at = |name: &str, x: f64| line(name).at(x).unwrap();
    assert!((at("HA", 6.0) - (-2.0 - 2f64.log10())).abs() < 0.002);
    assert!((at("A⁻", 6.0) - (-2.0 - 2f64.log10())).abs() < 0.002);
    assert!((at("HA", 10.0) + 6.0).abs() < 0.002 && (at("A⁻", 2.0) + 6.0).abs() < 0.002);
    assert!((at("H⁺", 4.0) + 4.0).abs() < 1e-9);
}

/// A gap where there is no state, and a line that goes to nothing, are no trouble.
#[test]
fn odd_problems_are_drawn() {
    for text in [
        "component Na+\nadd NaOH 0 mmol/L\n",
        "component Cl-\nadd HCl 3 mol/L\n",
        "use aqueous\ncomponent NH3, CO3^2-, Na+\ntotal NH3 = 0 mmol/L\nadd NaHCO3 2 mmol/L\n",
        "use aqueous\ncomponent NH3, Cl-\nadd NH4Cl 1e-9 mmol/L\n",
        "use aqueous\ncomponent CO3^2-\nhold CO2(g) = 1 atm\nhold pH = 3\nproblem \"<&>\u{1}\"\n",
        "use aqueous\ncomponent PO4^3-, Na+\nadd Na3PO4 3 mol/L\n",
    ] {
        let whole = only(text, Kind::LogConcentration);
        for (width, height) in [(320, 240), (720, 540), (2000, 400)] {
            look_over(&whole, width, height, text);
        }
        let text = svg(&whole, Theme::Light, 720, 540).unwrap();
        assert!(roxmltree::Document::parse(&text).is_ok(), "{text}");
        for columns in [0, 40, 60, 160, 1000] {
            assert!(character(&whole, columns).lines().count() > 15);
        }
    }
}

// The colours.

fn channels(colour: &str) -> [f64; 3] {
    let part = |at: usize| f64::from(u8::from_str_radix(&colour[at..at + 2], 16).unwrap()) / 255.0;
    [part(1), part(3), part(5)]
        .map(|c| if c <= 0.04045 { c / 12.92 } else { ((c + 0.055) / 1.055).powf(2.4) })
}

/// Contrast as in the Web Content Accessibility Guidelines 2.1 (W3C, 2018).
fn contrast(one: &str, other: &str) -> f64 {
    let light = |colour: &str| {
        let [r, g, b] = channels(colour);
        0.2126 * r + 0.7152 * g + 0.0722 * b + 0.05
    };
    let (one, other) = (light(one), light(other));
    one.max(other) / one.min(other)
}

#[test]
fn text_and_lines_stand_out_from_the_paper() {
    for Colours { paper, ink, faint, hues, .. } in [&LIGHT, &DARK] {
        for text in [ink, faint] {
            assert!(contrast(text, paper) >= 4.5, "{text} on {paper}");
        }
        for hue in hues {
            assert!(contrast(hue, paper) >= 3.0, "{hue} on {paper}");
        }
    }
    assert!((contrast("#ffffff", "#000000") - 21.0).abs() < 1e-9);
}

/// What people without one kind of cone see: the matrices of Machado, Oliveira and Fernandes
/// (IEEE Trans. Vis. Comput. Graph. 15, 1291, 2009) for severity 1.0, recalled.
const CONES: [[[f64; 3]; 3]; 4] = [
    [[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]],
    [
        [0.152286, 1.052583, -0.204868],
        [0.114503, 0.786281, 0.099216],
        [-0.003882, -0.048116, 1.051998],
    ],
    [
        [0.367322, 0.860646, -0.227968],
        [0.280085, 0.672501, 0.047413],
        [-0.011820, 0.042940, 0.968881],
    ],
    [
        [1.255528, -0.076749, -0.178779],
        [-0.078411, 0.930809, 0.147602],
        [0.004733, 0.691367, 0.303900],
    ],
];

/// CIE L*a*b* (CIE 15) of linear sRGB, white point D65.
fn lab([r, g, b]: [f64; 3]) -> [f64; 3] {
    let x = (0.4124564 * r + 0.3575761 * g + 0.1804375 * b) / 0.95047;
    let y = 0.2126729 * r + 0.7151522 * g + 0.0721750 * b;
    let z = (0.0193339 * r + 0.1191920 * g + 0.9503041 * b) / 1.08883;
    let f =
        |t: f64| if t > 216.0 / 24389.0 { t.cbrt() } else { (24389.0 / 27.0 * t + 16.0) / 116.0 };
    [116.0 * f(y) - 16.0, 500.0 * (f(x) - f(y)), 200.0 * (f(y) - f(z))]
}

#[test]
fn hues_are_told_apart_by_any_eyes() {
    for Colours { hues, ink, .. } in [&LIGHT, &DARK] {
        let all: Vec<&str> = hues.iter().copied().chain([*ink]).collect();
        for cones in CONES {
            let seen = |colour: &str| {
                let linear = channels(colour);
                let see = |row: [f64; 3]| {
                    row.iter().zip(linear).map(|(a, b)| a * b).sum::<f64>().clamp(0.0, 1.0)
                };
                lab(cones.map(see))
            };
            for (index, one) in all.iter().enumerate() {
                for other in &all[index + 1..] {
                    let apart: f64 =
                        seen(one).iter().zip(seen(other)).map(|(a, b)| (a - b).powi(2)).sum();
                    // Two to three are just told apart side by side.
                    assert!(apart.sqrt() > 15.0, "{one} and {other}: {}", apart.sqrt());
                }
            }
        }
    }
}
