//! Pictures of a problem: what they show as a [`chart::Chart`], and how that is drawn, as SVG
//! or in the letters of a terminal.

mod character;
pub mod chart;
mod distribution;
mod foot;
mod geometry;
mod labels;
pub mod layout;
mod log_concentration;
mod quantity;
mod run;
mod saturation;
mod subject;
mod svg;
pub mod theme;
mod ticks;
mod titration;
mod words;

use std::sync::atomic::AtomicBool;

use super::source::Stated;
use crate::problem::curve::Sweep;
use crate::rules::finding::Severity;
pub use character::character;
use chart::Chart;
use layout::Layout;
use subject::Subject;
use theme::Theme;
use words::Words;

/// The rule that speaks of a dose of strong acid or base.
const STRONG_DOSED: &str = "strong-acid-or-base-dosed";

/// What a picture shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Deserialize, serde::Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Kind {
    LogConcentration,
    Distribution,
    Titration,
    BufferCapacity,
    Saturation,
    Quantity,
}

/// What is asked for.
#[derive(Clone, Copy, Debug, Default)]
pub struct Wish<'a> {
    pub kind: Option<Kind>,
    /// The component, reagent or solid that it is about.
    pub of: Option<&'a str>,
}

/// The picture of a problem, in the units of its axes. None where the work was cancelled.
///
/// # Errors
/// In words: where the problem has no answer, or what is asked for is not part of it.
pub fn chart(
    file: &str,
    stated: Stated,
    wish: Wish,
    cancel: &AtomicBool,
) -> Option<Result<Chart, String>> {
    let Some(subject) = Subject::new(file, stated) else {
        let what = match stated.case {
            Some(case) => format!("case \"{case}\" is"),
            None => "the problem is".into(),
        };
        return Some(Err(format!("{what} not solved, so there is nothing to draw")));
    };
    let chart = match wish.kind.unwrap_or_else(|| usual(&subject)) {
        Kind::LogConcentration => log_concentration::chart(&subject, cancel).map(Ok),
        Kind::Distribution => distribution::chart(&subject, wish.of, cancel),
        Kind::Titration => titration::chart(&subject, wish.of, cancel),
        Kind::BufferCapacity => titration::buffer_capacity(&subject, cancel),
        Kind::Saturation => saturation::chart(&subject, wish.of, cancel),
        Kind::Quantity => quantity::chart(&subject, wish.of, cancel),
    };
    chart.map(|chart| {
        chart.map(|mut chart| {
            chart.notes.extend(caution(&subject));
            chart
        })
    })
}

/// What a picture says of the cautions of its outcome. What each is about, `lyate check`
/// tells; a picture goes where that is not seen.
fn caution(subject: &Subject) -> Option<Words> {
    let findings = &subject.stated.outcome.findings;
    let mut cautions = findings.iter().filter(|finding| finding.severity == Severity::Caution);
    let some = cautions.clone().next().is_some();
    let dosed = cautions.any(|finding| finding.rule == STRONG_DOSED);
    let check = if dosed { "verify doses by a bench test" } else { "verify by measured samples" };
    let first = "safety data sheets, local codes and licensed practice go first";
    some.then(|| Words::plain(&format!("Caution: {check}; {first}.")))
}

/// What is drawn where nothing is asked for: the pH along a curve of the file that is over
/// something else, or else log concentration.
fn usual(subject: &Subject) -> Kind {
    let curves = &subject.problem().curves;
    if curves.iter().any(|curve| curve.over != Sweep::Ph) {
        Kind::Titration
    } else {
        Kind::LogConcentration
    }
}

/// The chart as a complete SVG document of about this size in pixels.
///
/// # Errors
/// Those of the XML writer.
pub fn svg(chart: &Chart, theme: Theme, width: u32, height: u32) -> std::io::Result<String> {
    svg::svg(chart, &Layout::new(chart, width, height), theme)
}
