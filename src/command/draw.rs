//! `lyate draw`: pictures of a problem.

use std::io::ErrorKind;
use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;

use super::chosen::Asked;
use super::reply::{Complaint, Reply};
use crate::problem::files::system_words;
use crate::report::picture::layout::{LEAST, MOST, SIZE};
use crate::report::picture::theme::Theme;
use crate::report::picture::{self, Kind, Wish};

/// Columns of a picture that goes into a pipe.
const COLUMNS: usize = 80;

/// Draw a problem: log concentration against pH, a titration, and other curves
///
/// Draws the base, or the case that is asked for: into a file as SVG, or without `-o` in
/// the letters of the terminal. A log-concentration picture shows each species, the system
/// points, both sides of the proton condition, and the answer where they cross. It and a
/// distribution keep the ionic strength of the answer at every pH; along a curve, each
/// point is solved in full.
#[derive(clap::Args)]
#[command(
    verbatim_doc_comment,
    after_help = "\
Exit code:
  0  drawn
  1  not drawn: the problem has no answer, or what is asked for is not part of it
  2  not run: wrong usage, a file that cannot be read, or one that cannot be written"
)]
pub struct Arguments {
    #[command(flatten)]
    asked: Asked,
    /// The SVG file to write; `-` for standard output
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
    /// What to show; by itself log concentration, or the pH along a curve of the file that is
    /// over something else than pH
    #[arg(long, value_name = "PICTURE", value_enum)]
    picture: Option<Picture>,
    /// The component, reagent, solid or quantity that the picture is about
    #[arg(long, value_name = "NAME")]
    of: Option<String>,
    /// The colours of an SVG
    #[arg(long, value_name = "THEME", value_enum, default_value_t = Colours::Auto)]
    theme: Colours,
    /// Width of an SVG in pixels, or of a picture in letters in columns
    #[arg(long, value_name = "NUMBER")]
    width: Option<u32>,
    /// Height of an SVG in pixels
    #[arg(long, value_name = "PIXELS")]
    height: Option<u32>,
}

#[derive(Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
enum Picture {
    /// Every species and both sides of the proton condition, against pH
    LogConcentration,
    /// The shares of a component's forms, against pH
    Distribution,
    /// The pH along a reagent's dose, or what else a curve of the file is over
    Titration,
    /// The buffer capacity along the file's first curve; without one, against pH
    BufferCapacity,
    /// Saturation indices along the file's first curve; without one, against pH
    Saturation,
    /// A quantity that the file expects something of, along the same, with its limits
    Quantity,
}

#[derive(Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
enum Colours {
    Light,
    Dark,
    /// Light or dark by the reader's own setting; light in print
    Auto,
}

pub fn run(arguments: &Arguments) -> Result<Reply, Complaint> {
    let file = arguments.asked.check()?;
    let problems = arguments.asked.problems(&file)?;
    let name = &file.source.name;
    let Some(stated) = problems.first() else {
        return Ok(refused(format!("{name} states no amounts: there is nothing to draw")));
    };
    let kind = arguments.picture.map(|picture| match picture {
        Picture::LogConcentration => Kind::LogConcentration,
        Picture::Distribution => Kind::Distribution,
        Picture::Titration => Kind::Titration,
        Picture::BufferCapacity => Kind::BufferCapacity,
        Picture::Saturation => Kind::Saturation,
        Picture::Quantity => Kind::Quantity,
    });
    let wish = Wish { kind, of: arguments.of.as_deref() };
    let title = Path::new(name).file_stem().map_or(name.clone(), |s| s.display().to_string());
    let chart = match picture::chart(&title, *stated, wish, &AtomicBool::new(false)) {
        Some(Ok(chart)) => chart,
        Some(Err(words)) if stated.outcome.solved().is_none() => {
            return Ok(refused(format!("{words}: see `lyate check {name}`")));
        }
        Some(Err(words)) => return Ok(refused(words)),
        None => return Ok(refused("the drawing was cancelled".into())),
    };
    let Some(output) = &arguments.output else {
        let columns = arguments.width.map_or_else(columns, |width| width as usize);
        return Ok(Reply::new(picture::character(&chart, columns), 0));
    };
    let size = |asked: Option<u32>, usual: u32, least: u32, what: &str| match asked {
        Some(asked) if asked < least || asked > MOST => Err(Complaint(format!(
            "a {what} of {asked} pixels is not drawn: give {least} to {MOST}"
        ))),
        asked => Ok(asked.unwrap_or(usual)),
    };
    let width = size(arguments.width, SIZE.0, LEAST.0, "width")?;
    let height = size(arguments.height, SIZE.1, LEAST.1, "height")?;
    let theme = match arguments.theme {
        Colours::Light => Theme::Light,
        Colours::Dark => Theme::Dark,
        Colours::Auto => Theme::Auto,
    };
    let svg = picture::svg(&chart, theme, width, height)
        .map_err(|error| Complaint(format!("the picture could not be made: {error}")))?;
    if output.as_os_str() == "-" {
        return Ok(Reply::new(svg, 0));
    }
    std::fs::write(output, svg)
        .map_err(|error| Complaint(format!("{}: {}", output.display(), reason(&error))))?;
    Ok(Reply::new(String::new(), 0))
}

fn refused(words: String) -> Reply {
    Reply { text: String::new(), remark: format!("lyate: {words}\n"), code: 1 }
}

fn reason(error: &std::io::Error) -> String {
    match error.kind() {
        ErrorKind::NotFound => "its folder does not exist".into(),
        ErrorKind::PermissionDenied => "it may not be written".into(),
        _ => system_words(error),
    }
}

/// The terminal's width; for a pipe, 80.
fn columns() -> usize {
    terminal_size::terminal_size().map_or(COLUMNS, |(width, _)| usize::from(width.0))
}
