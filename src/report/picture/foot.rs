//! What stands below a plot: a key of the lines that have no label beside them, the same of
//! marks, and notes.

use super::chart::Chart;
use super::geometry::Point;
use super::layout::{Kind, Layout};
use super::words::Words;

const SAMPLE: f64 = 30.0;
const GAP: f64 = 6.0;
const BETWEEN: f64 = 18.0;
const ABOVE: f64 = 8.0;

/// What is told below for want of a clear place beside it, by its number in the chart.
#[derive(Clone, Debug, Default)]
pub struct Keyed {
    pub lines: Vec<usize>,
    pub marks: Vec<usize>,
}

pub struct Foot {
    pub height: f64,
    /// Line, label, and where it begins.
    key: Vec<(usize, Words, Point)>,
    notes: Vec<(Words, f64)>,
}

impl Foot {
    pub fn new(chart: &Chart, keyed: &Keyed, width: f64) -> Foot {
        let mut foot = Foot { height: 0.0, key: Vec::new(), notes: Vec::new() };
        let high = Kind::Note.height();
        let mut at = Point { x: 0.0, y: ABOVE };
        for &line in &keyed.lines {
            let label = chart.lines[line].label.clone();
            let wide = SAMPLE + GAP + Kind::Note.width(&label);
            if at.x > 0.0 && at.x + wide > width {
                at = Point { x: 0.0, y: at.y + high };
            }
            foot.key.push((line, label, at));
            at.x += wide + BETWEEN;
        }
        let mut y = if keyed.lines.is_empty() { ABOVE } else { at.y + high + 2.0 };
        for note in marks(chart, &keyed.marks).iter().chain(&chart.notes) {
            for line in note.wrapped(Kind::Note.size(), width) {
                foot.notes.push((line, y));
                y += high;
            }
        }
        let empty = foot.key.is_empty() && foot.notes.is_empty();
        foot.height = if empty { 0.0 } else { y };
        foot
    }

    pub fn write(self, layout: &mut Layout, left: f64, top: f64) {
        for (line, label, at) in self.key {
            let y = top + at.y + 0.5 * Kind::Note.height();
            let from = Point { x: left + at.x, y };
            let to = Point { x: from.x + SAMPLE, y };
            layout.samples.push((from, to, layout.strokes[line].look));
            layout.write(label, Kind::Note, to.x + GAP, top + at.y);
        }
        for (words, y) in self.notes {
            layout.write(words, Kind::Note, left, top + y);
        }
    }
}

/// The labels of the marks that have none beside them, by rising x.
fn marks(chart: &Chart, keyed: &[usize]) -> Option<Words> {
    let mut marks: Vec<_> = keyed.iter().filter_map(|&mark| chart.marks.get(mark)).collect();
    marks.sort_by(|a, b| a.at.0.total_cmp(&b.at.0));
    let mut labels = marks.iter().filter_map(|mark| mark.label.clone());
    let first = Words::plain("Rings without a label, from the left: ").then("", labels.next()?);
    Some(labels.fold(first, |words, label| words.then(", ", label)).then(".", Words::default()))
}
