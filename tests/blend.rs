//! Waters of other files, blended: what is conserved, and when a blend is looked at anew.

use std::path::Path;
use std::sync::atomic::AtomicBool;

use lyate::equilibrium::curve::along;
use lyate::problem::files::Disk;
use lyate::problem::import::Imports;
use lyate::problem::model::Sought;
use lyate::report::editor::hover;
use lyate::rules::check::{Checked, Surroundings, check};
use lyate::rules::finding::Severity;
use lyate::text::tree::Document;

const RIVER: &str = r#"
use aqueous
component NH3, CO3^2-, Ca^2+, Na+, Cl-
temperature 6 °C
add NaHCO3 1.4 mmol/L
add CaCl2 0.5 mmol/L
add NH4Cl 20 µmol/L
hold CO2(g) = 600 µatm
case "summer"
    temperature 22 °C
"#;

/// With other components than the river, and a pH that leaves its charge open.
const WELL: &str = r#"
use aqueous
component HCO3-, Ca^2+, Na+, Cl-, NH4+, SO4^2-
temperature 12 °C
total HCO3- = 320 mg/L
total Ca^2+ = 98 mg/L
total Na+ = 20 mg/L
total Cl- = 30 mg/L
total NH4+ = 0.2 mg/L as N
total SO4^2- = 0 mg/L
hold pH = 7.1
"#;

const RAIN: &str = r#"
component Na+, Cl-
temperature 15 °C
add NaCl 0.1 mmol/L
add HCl 20 µmol/L
"#;

const HEAD: &str = "use aqueous\ncomponent NH3, CO3^2-, Ca^2+, Na+, Cl-\n";

struct Folder {
    folder: tempfile::TempDir,
    imports: Imports,
}

impl Folder {
    fn new() -> Self {
        let folder = tempfile::tempdir().expect("a folder");
        let this = Folder { folder, imports: Imports::default() };
        this.write("river.lyate", RIVER);
        this.write("well.lyate", WELL);
        this.write("rain.lyate", RAIN);
        this
    }

    fn write(&self, name: &str, text: &str) {
        std::fs::write(self.folder.path().join(name), text).expect("a file");
    }

    fn check(&self, name: &str, text: &str, previous: Option<&Checked>) -> Checked {
        self.check_at(&self.folder.path().join(name), text, previous)
    }

    fn check_at(&self, path: &Path, text: &str, previous: Option<&Checked>) -> Checked {
        let around = Surroundings {
            path: Some(path),
            roots: &[],
            files: &Disk,
            imports: &self.imports,
            cancel: &AtomicBool::new(false),
        };
        check(Document::parse(text), &around, previous).expect("nobody cancels")
    }

    /// A blend of these parts over the river's components.
    fn blend(&self, parts: &str) -> Checked {
        let checked = self.check("mix.lyate", &format!("{HEAD}blend {parts}\n"), None);
        let errors: Vec<&str> = checked
            .findings
            .iter()
            .filter(|finding| finding.severity == Severity::Error)
            .map(|finding| finding.message.as_str())
            .collect();
        assert!(errors.is_empty(), "{errors:?}");
        checked
    }
}

/// Totals by component, alkalinity, charge and temperature.
fn figures(checked: &Checked, section: usize) -> Vec<(String, f64)> {
    let outcome = &checked.outcomes[section];
    let (problem, solved) = (&outcome.problem, outcome.solved().expect("it is solved"));
    let (cations, anions) = solved.charges();
    let totals = (1..problem.scope.components.len()).map(|j| {
        let name = &problem.scope.components[j].formula.name;
        (name.clone(), solved.total(j))
    });
    totals
        .chain([
            ("alkalinity".to_owned(), solved.alkalinity(problem)),
            ("charge".to_owned(), cations - anions),
            ("kelvin".to_owned(), problem.kelvin),
            ("pH".to_owned(), solved.ph()),
        ])
        .collect()
}

fn figure(figures: &[(String, f64)], name: &str) -> f64 {
    figures.iter().find(|(n, _)| n == name).map_or(0.0, |(_, value)| *value)
}

fn near(one: f64, two: f64, what: &str) {
    assert!((one - two).abs() <= 1e-12 * one.abs().max(1e-3), "{what}: {one} and {two}");
}

#[test]
fn totals_alkalinity_charge_and_temperature_are_those_of_the_parts() {
    let folder = Folder::new();
    let river = figures(&folder.check("river.lyate", RIVER, None), 1);
    let well = figures(&folder.check("well.lyate", WELL, None), 0);
    let rain = figures(&folder.check("rain.lyate", RAIN, None), 0);
    let parts =
        r#"50 % of "river.lyate" case "summer", 30 % of "well.lyate", 20 % of "rain.lyate""#;
    let mixed = figures(&folder.blend(parts), 0);
    let mean = |of_river: &str, of_well: &str| {
        0.5 * figure(&river, of_river)
            + 0.3 * figure(&well, of_well)
            + 0.2 * figure(&rain, of_river)
    };
    assert!(figure(&well, "charge").abs() > 1e-4, "an open charge is a part of the test");
    for (of_river, of_well) in [
        ("NH3", "NH4+"),
        ("CO3^2-", "HCO3-"),
        ("Ca^2+", "Ca^2+"),
        ("Na+", "Na+"),
        ("Cl-", "Cl-"),
        ("alkalinity", "alkalinity"),
        ("charge", "charge"),
        ("kelvin", "kelvin"),
    ] {
        near(figure(&mixed, of_river), mean(of_river, of_well), of_river);
    }
}

#[test]
fn a_water_blended_with_itself_stays_as_it_is() {
    let folder = Folder::new();
    let river = figures(&folder.check("river.lyate", RIVER, None), 0);
    let mixed = figures(&folder.blend(r#"1 of "river.lyate", 2 of "river.lyate""#), 0);
    for (name, value) in &river {
        let tolerance = if name == "pH" { 1e-9 } else { 1e-12 };
        let other = figure(&mixed, name);
        assert!((value - other).abs() <= tolerance * value.abs().max(1.0), "{name}: {other}");
    }
}

#[test]
fn the_order_of_the_parts_does_not_matter_and_parts_are_proportions() {
    let folder = Folder::new();
    let one = figures(&folder.blend(r#"25 % of "river.lyate", 75 % of "well.lyate""#), 0);
    for parts in [
        r#"75 % of "well.lyate", 25 % of "river.lyate""#,
        r#"1 of "river.lyate", 3 of "well.lyate""#,
        r#"12.5 of "well.lyate", 12.5 of "river.lyate", 25 of "well.lyate""#,
    ] {
        let other = figures(&folder.blend(parts), 0);
        for (name, value) in &one {
            near(*value, figure(&other, name), name);
        }
    }
}

#[test]
fn reagents_go_on_top_and_the_temperature_stated_wins() {
    let folder = Folder::new();
    let plain = figures(&folder.blend(r#"40 % of "river.lyate", 60 % of "well.lyate""#), 0);
    let text = format!(
        "{HEAD}blend 40 % of \"river.lyate\", 60 % of \"well.lyate\"\nadd NaOH 0.3 mmol/L\n\
         temperature 20 °C\n"
    );
    let dosed = figures(&folder.check("mix.lyate", &text, None), 0);
    near(figure(&dosed, "Na+"), figure(&plain, "Na+") + 3e-4, "Na+");
    near(figure(&dosed, "alkalinity"), figure(&plain, "alkalinity") + 3e-4, "alkalinity");
    near(figure(&dosed, "kelvin"), 293.15, "temperature");
}

#[test]
fn a_blend_is_that_of_the_mixed_totals_entered_by_hand() {
    let folder = Folder::new();
    let mixed = figures(&folder.blend(r#"40 % of "river.lyate", 60 % of "rain.lyate""#), 0);
    let mut text = format!("{HEAD}temperature {} °C\n", figure(&mixed, "kelvin") - 273.15);
    for name in ["NH3", "CO3^2-", "Ca^2+", "Na+", "Cl-"] {
        text += &format!("total {name} = {} mol/L\n", figure(&mixed, name));
    }
    let by_hand = figures(&folder.check("hand.lyate", &text, None), 0);
    assert!((figure(&mixed, "pH") - figure(&by_hand, "pH")).abs() < 1e-8);
}

#[test]
fn a_water_per_kilogram_comes_onto_the_litre_by_the_density_of_water() {
    let folder = Folder::new();
    folder.write("brine.lyate", "component Na+, Cl-\ntemperature 25 °C\nadd NaCl 2 mmol/kg\n");
    let text = "component Na+, Cl-\nadd NaCl 1 mmol/L\nblend 100 % of \"brine.lyate\"\n";
    let checked = folder.check("mix.lyate", text, None);
    assert!(checked.findings.iter().any(|finding| finding.rule == "mixed-scales"));
    // Density of water at 25 °C and 0.1 MPa: 997.047 kg/m³ (IAPWS SR7-09, recalled).
    let total = figure(&figures(&checked, 0), "Na+");
    assert!((total - (1e-3 + 2e-3 * 0.997047)).abs() < 1e-9, "{total}");
}

#[test]
fn a_water_with_electrons_is_taken_species_by_species() {
    let folder = Folder::new();
    let iron = "component Fe^2+, e-, Cl-\nreaction Fe^3+ + e- <=> Fe^2+, log K = 13.0, source \
                \"table\"\nadd FeCl2 1 mmol/L\nadd FeCl3 3 mmol/L\nadd HCl 10 mmol/L\n";
    folder.write("iron.lyate", iron);
    let same = "component e-, Fe^3+, Cl-\nreaction Fe^3+ + e- <=> Fe^2+, log K = 13.0, source \
         \"table\"\nblend 100 % of \"iron.lyate\"\n";
    let apart = "component Fe^2+, Fe^3+, Cl-\nblend 100 % of \"iron.lyate\"\n";
    let first = folder.check("first.lyate", iron, None);
    let pe = |checked: &Checked| {
        let outcome = &checked.outcomes[0];
        let solved = outcome.solved().expect("it is solved");
        solved.value(&outcome.problem, Sought::Pe).expect("a pe")
    };
    let second = folder.check("second.lyate", same, None);
    assert!((pe(&first) - pe(&second)).abs() < 1e-9);
    let third = figures(&folder.check("third.lyate", apart, None), 0);
    near(figure(&third, "Fe^2+"), 1e-3, "Fe^2+");
    near(figure(&third, "Fe^3+"), 3e-3, "Fe^3+");
}

#[test]
fn a_blend_follows_the_files_that_it_rests_on() {
    let folder = Folder::new();
    folder.write("main.lyate", &format!("{HEAD}blend 1 of \"river.lyate\", 1 of \"rain.lyate\"\n"));
    let text = format!("{HEAD}blend 50 % of \"main.lyate\", 50 % of \"rain.lyate\"\n");
    let first = folder.check("mix.lyate", &text, None);
    let again = folder.check("mix.lyate", &text, Some(&first));
    assert!(std::sync::Arc::ptr_eq(&first.outcomes[0], &again.outcomes[0]), "nothing changed");
    for name in ["main.lyate", "river.lyate", "rain.lyate"] {
        let ends = |path: &&std::path::PathBuf| path.ends_with(name);
        assert_eq!(first.files.iter().filter(ends).count(), 1, "{name} is watched once");
    }
    folder.write("rain.lyate", &RAIN.replace("0.1 mmol/L", "0.5 mmol/L"));
    let changed = folder.check("mix.lyate", &text, Some(&again));
    let sodium = |checked: &Checked| figure(&figures(checked, 0), "Na+");
    near(sodium(&changed), sodium(&first) + 0.75 * 4e-4, "Na+");
    // A change that is none to the water leaves it as it is.
    folder.write("rain.lyate", &format!("{}\n# told\n", RAIN.replace("0.1 mmol/L", "0.5 mmol/L")));
    let told = folder.check("mix.lyate", &text, Some(&changed));
    near(sodium(&told), sodium(&changed), "Na+");
    folder.write("rain.lyate", "add NaCl 1");
    let broken = folder.check("mix.lyate", &text, Some(&told));
    assert!(broken.outcomes[0].solved().is_none());
    assert!(broken.findings.iter().any(|finding| finding.rule == "blended-water-not-solved"));
    folder.write("rain.lyate", RAIN);
    let mended = folder.check("mix.lyate", &text, Some(&broken));
    near(sodium(&mended), sodium(&first), "Na+");
}

#[test]
fn files_that_blend_one_another_many_times_over_are_looked_at_once() {
    let folder = Folder::new();
    folder.write("w0.lyate", RAIN);
    for n in 1..14 {
        let before = format!("\"w{}.lyate\"", n - 1);
        folder.write(
            &format!("w{n}.lyate"),
            &format!("component Na+, Cl-\nblend 50 % of {before}, 50 % of {before}\n"),
        );
    }
    // Without memory, 2¹³ files.
    let text = "component Na+, Cl-\nblend 100 % of \"w13.lyate\"\n";
    let checked = folder.check("mix.lyate", text, None);
    near(figure(&figures(&checked, 0), "Na+"), 1e-4, "Na+");
    for n in 14..20 {
        let before = format!("\"w{}.lyate\"", n - 1);
        let text = format!("component Na+, Cl-\nblend 100 % of {before}\n");
        folder.write(&format!("w{n}.lyate"), &text);
    }
    let deep = folder.check("mix.lyate", "component Na+, Cl-\nblend 1 of \"w19.lyate\"\n", None);
    assert!(deep.outcomes[0].solved().is_none(), "past what may nest");
}

#[test]
fn a_curve_over_a_share_goes_through_the_blends_of_those_shares() {
    let folder = Folder::new();
    let text = format!(
        "{HEAD}blend 20 % of \"river.lyate\", 60 % of \"well.lyate\", 20 % of \"rain.lyate\"\n\
         add NaOH 0.1 mmol/L\ncurve over blend \"river.lyate\" from 0 to 60 %, 4 points\n"
    );
    let checked = folder.check("mix.lyate", &text, None);
    let problem = &checked.outcomes[0].problem;
    let curve = problem.curves.first().expect("a curve");
    let points = along(problem, curve, &AtomicBool::new(false)).expect("nobody cancels");
    let shares = [(0, 75, 25), (20, 60, 20), (40, 45, 15), (60, 30, 10)];
    assert_eq!(points.len(), shares.len());
    for (point, (river, well, rain)) in points.iter().zip(shares) {
        let stated = format!(
            "{HEAD}blend {river} % of \"river.lyate\", {well} % of \"well.lyate\", {rain} % of \
             \"rain.lyate\"\nadd NaOH 0.1 mmol/L\n"
        );
        let stated = folder.check("stated.lyate", &stated, None);
        let wanted = stated.outcomes[0].solved().expect("it is solved").ph();
        let found = point.state.as_ref().expect("it is solved").ph();
        assert!((found - wanted).abs() < 1e-8, "{river} %: {found} for {wanted}");
    }
}

#[test]
fn pointing_at_a_part_tells_its_water() {
    let folder = Folder::new();
    let text = format!("{HEAD}blend 25 % of \"river.lyate\", 75 % of \"well.lyate\"\n");
    let checked = folder.check("mix.lyate", &text, None);
    let offset = text.find("well.lyate").expect("it is there");
    let shown = hover(&checked, offset).expect("a hover");
    assert_eq!(&text[shown.range], "75 % of \"well.lyate\"");
    assert!(shown.markdown.contains("75 %"), "{}", shown.markdown);
    assert!(shown.markdown.contains("12 °C, pH 7.100"), "{}", shown.markdown);
    let alkalinity = figure(&figures(&folder.check("well.lyate", WELL, None), 0), "alkalinity");
    let words = format!("alkalinity {:.2} meq/L", 1000.0 * alkalinity);
    assert!(shown.markdown.contains(&words), "{}", shown.markdown);
}
