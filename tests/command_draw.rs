//! `lyate draw`: SVG and letters, what may be asked for, and what cannot be drawn.

mod command_support;

use command_support::{FAULTY, RINSE, code, folder, run, session, stderr, stdout};

/// A file with a curve and a limit along it.
const DOSED: &str = "\
# Acetic rinse, neutralised with caustic. Invented figures.
problem \"Rinse tank 3\"
use aqueous
component CH3COO-, Na+
add CH3COOH 10 mmol/L
add NaOH 6 mmol/L
expect [CH3COOH] < 5 mmol/L
curve over NaOH from 0 to 20 mmol/L
";

#[test]
fn a_picture_in_letters() {
    insta::assert_snapshot!(session(&[("rinse.lyate", RINSE)], &["draw", "rinse.lyate"]));
}

#[test]
fn a_picture_as_svg() {
    let arguments = ["draw", "rinse.lyate", "--case", "warm", "-o", "-"];
    insta::assert_snapshot!(session(&[("rinse.lyate", RINSE)], &arguments));
}

#[test]
fn a_curve_of_the_file_is_drawn_by_itself() {
    insta::assert_snapshot!(session(&[("tank.lyate", DOSED)], &["draw", "tank.lyate"]));
}

#[test]
fn every_picture_is_well_formed_in_every_theme() {
    let folder = folder(&[("tank.lyate", DOSED)]);
    for picture in ["log-concentration", "distribution", "titration", "buffer-capacity", "quantity"]
    {
        for theme in ["light", "dark", "auto"] {
            let arguments =
                ["draw", "tank.lyate", "--picture", picture, "--theme", theme, "-o", "tank.svg"];
            let output = run(folder.path(), &arguments);
            assert_eq!((code(&output), stdout(&output)), (0, String::new()), "{picture}");
            let svg = std::fs::read_to_string(folder.path().join("tank.svg")).unwrap();
            let document = roxmltree::Document::parse(&svg).unwrap();
            let style = document.descendants().find(|node| node.has_tag_name("style")).unwrap();
            let style = style.text().unwrap();
            assert_eq!(style.contains("prefers-color-scheme:dark"), theme == "auto");
            assert_eq!(style.contains("#ffffff"), theme != "dark");
        }
    }
}

/// A height and a width are kept, but for what stands below.
#[test]
fn sizes_are_those_asked_for() {
    let folder = folder(&[("tank.lyate", DOSED)]);
    let output =
        run(folder.path(), &["draw", "tank.lyate", "-o", "-", "--width", "900", "--height", "500"]);
    assert!(stdout(&output).contains("width=\"900\" height=\"500\""));
    let output = run(folder.path(), &["draw", "tank.lyate", "-o", "-", "--width", "20"]);
    let words = "lyate: a width of 20 pixels is not drawn: give 320 to 10000\n";
    assert_eq!((code(&output), stderr(&output).as_str()), (2, words));
    let output = run(folder.path(), &["draw", "tank.lyate", "--width", "60"]);
    assert!(stdout(&output).lines().all(|line| line.chars().count() <= 60));
}

#[test]
fn what_cannot_be_drawn_says_why() {
    let files =
        [("condensate.lyate", FAULTY), ("tank.lyate", DOSED), ("none.lyate", "use aqueous\n")];
    let folder = folder(&files);
    for (arguments, wanted, words) in [
        (
            vec!["condensate.lyate"],
            1,
            "the problem is not solved, so there is nothing to draw: see `lyate check \
             condensate.lyate`",
        ),
        (vec!["none.lyate"], 1, "none.lyate states no amounts: there is nothing to draw"),
        (
            vec!["tank.lyate", "--picture", "distribution", "--of", "Zn^2+"],
            1,
            "Zn^2+ is no component here; there are CH3COO-, Na+",
        ),
        (
            vec!["tank.lyate", "--picture", "titration", "--of", "HCl"],
            1,
            "the file has no curve over HCl and adds none: write `curve over HCl from 0 to 20 \
             mmol/L`",
        ),
        (
            vec!["tank.lyate", "--picture", "quantity", "--of", "pH"],
            1,
            "the file expects nothing of pH; it does of [CH3COOH]",
        ),
        (vec!["tank.lyate", "--picture", "saturation"], 1, "no solid belongs to this problem"),
        (
            vec!["tank.lyate", "-o", "no/such/folder.svg"],
            2,
            "no/such/folder.svg: its folder does not exist",
        ),
    ] {
        let arguments: Vec<&str> = ["draw"].into_iter().chain(arguments).collect();
        let output = run(folder.path(), &arguments);
        assert_eq!(stderr(&output), format!("lyate: {words}\n"), "{arguments:?}");
        assert_eq!(code(&output), wanted, "{arguments:?}");
    }
}

/// The pictures of the README are what the program draws today; DEVELOPERS.md says how they
/// are made.
#[test]
fn pictures_of_the_readme_are_of_today() {
    let root = std::path::Path::new(env!("CARGO_MANIFEST_DIR"));
    for (name, file, more) in [
        ("buffer.svg", "wash_buffer.lyate", &[][..]),
        ("rinse.svg", "pickling_rinse.lyate", &["--picture", "titration", "--of", "NaOH"][..]),
    ] {
        let file = format!("tests/problems/plant/{file}");
        let size = ["--width", "640", "--height", "480", "-o", "-"];
        let arguments: Vec<&str> =
            ["draw", &file].iter().chain(more).chain(&size).copied().collect();
        let output = run(root, &arguments);
        assert_eq!(code(&output), 0, "{}", stderr(&output));
        let kept = std::fs::read_to_string(root.join("tests/pictures").join(name)).unwrap();
        let today = stdout(&output);
        assert!(kept == today, "{name}: make it anew, as DEVELOPERS.md says");
    }
}
