//! A chart on a page: every stroke, mark and text with its place in pixels.

use super::chart::{Axis, Chart, MarkKind, Place, Role};
use super::foot::{Foot, Keyed};
use super::geometry::{Frame, Point};
use super::labels::{Ground, Tie, Want, place};
use super::theme::{Look, looks};
use super::ticks::ticks;
use super::words::Words;

/// Width and height in pixels where nothing else is asked for, and the least that makes sense.
pub const SIZE: (u32, u32) = (720, 540);
pub const LEAST: (u32, u32) = (320, 240);
pub const MOST: u32 = 10_000;

const PAD: f64 = 16.0;
/// From the frame to the numbers of an axis.
const TICK: f64 = 6.0;
/// Lines within so many pixels of one another are neighbours.
pub(super) const NEAR: f64 = 90.0;
const RADIUS: f64 = 3.6;
const LEAST_PLOT: f64 = 120.0;
/// Of the height that is asked for, at least so much is the plot's, whatever is told below.
const PLOT_SHARE: f64 = 0.6;
/// Numbers along an axis, at most, however long it is.
const NUMBERS: (usize, usize) = (15, 11);
/// Of a text's line, over its size.
const LEADING: f64 = 1.3;

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    Title,
    Subtitle,
    AxisTitle,
    Tick,
    /// Of a line.
    Label,
    /// Of a mark.
    MarkLabel,
    Note,
}

#[derive(Clone, Debug)]
pub struct Text {
    pub words: Words,
    pub kind: Kind,
    /// What it covers on the page, turned or not.
    pub frame: Frame,
    /// Reads upwards.
    pub turned: bool,
}

#[derive(Clone, Debug)]
pub struct Stroke {
    pub pieces: Vec<Vec<Point>>,
    pub look: Look,
    pub name: String,
}

#[derive(Clone, Debug)]
pub struct Layout {
    pub width: f64,
    pub height: f64,
    pub plot: Frame,
    pub grid: Vec<(Point, Point)>,
    /// In the order of the chart's lines.
    pub strokes: Vec<Stroke>,
    /// Short samples of lines in the key below.
    pub samples: Vec<(Point, Point, Look)>,
    pub rules: Vec<(Point, Point)>,
    pub leaders: Vec<(Point, Point)>,
    pub marks: Vec<(Point, f64, MarkKind)>,
    pub texts: Vec<Text>,
    /// Of each plain stroke, those that come near it, and at how many places.
    pub near: Vec<Vec<(usize, u32)>>,
}

impl Kind {
    pub fn size(self) -> f64 {
        match self {
            Kind::Title => 17.0,
            Kind::Subtitle => 13.0,
            Kind::AxisTitle => 14.0,
            Kind::Tick => 12.5,
            Kind::Label => 13.5,
            Kind::MarkLabel | Kind::Note => 12.5,
        }
    }

    pub fn height(self) -> f64 {
        // Numbers have nothing below the line.
        if self == Kind::Tick { 1.1 * self.size() } else { LEADING * self.size() }
    }

    /// Bold letters are wider.
    pub fn width(self, words: &Words) -> f64 {
        words.width(self.size()) * if self == Kind::Title { 1.08 } else { 1.0 }
    }
}

impl Layout {
    /// Sizes are brought into what makes sense; a picture with much to tell below is higher
    /// than asked.
    pub fn new(chart: &Chart, width: u32, height: u32) -> Layout {
        let width = f64::from(width.clamp(LEAST.0, MOST));
        let height = f64::from(height.clamp(LEAST.1, MOST));
        let mut keyed = Keyed::default();
        loop {
            let (layout, unplaced) = set(chart, width, height, &keyed);
            if unplaced.lines.is_empty() && unplaced.marks.is_empty() {
                return layout;
            }
            // What finds no place for its label is told in a key below. That takes room from
            // the plot, which may cost another its label.
            keyed.lines.extend(unplaced.lines);
            keyed.lines.sort_unstable();
            keyed.marks.extend(unplaced.marks);
        }
    }
}

/// The layout where these labels are told below, and the others that find no place.
fn set(chart: &Chart, width: f64, height: f64, keyed: &Keyed) -> (Layout, Keyed) {
    let mut layout = Layout {
        width,
        height,
        plot: Frame { left: 0.0, top: 0.0, right: width, bottom: height },
        grid: Vec::new(),
        strokes: Vec::new(),
        samples: Vec::new(),
        rules: Vec::new(),
        leaders: Vec::new(),
        marks: Vec::new(),
        texts: Vec::new(),
        near: Vec::new(),
    };
    let top = layout.head(chart);
    let foot = Foot::new(chart, keyed, width - 2.0 * PAD);
    let below = TICK + Kind::Tick.height() + 4.0 + Kind::AxisTitle.height();
    let least = top + LEAST_PLOT.max(PLOT_SHARE * height);
    let bottom = (height - PAD - foot.height - below).max(least);
    layout.height = bottom + below + foot.height + PAD;
    let numbers = ticks(&chart.y, (((bottom - top) / 32.0) as usize).min(NUMBERS.1));
    let widest = numbers.iter().map(|(_, words)| Kind::Tick.width(&Words::plain(words)));
    let left = PAD + Kind::AxisTitle.height() + 6.0 + widest.fold(0.0, f64::max) + TICK;
    layout.plot = Frame { left, top, right: width - PAD - 8.0, bottom };
    layout.axes(chart, numbers);
    layout.lines(chart);
    let unplaced = layout.labels(chart, keyed);
    foot.write(&mut layout, PAD, bottom + below);
    (layout, unplaced)
}

impl Layout {
    pub(super) fn write(&mut self, words: Words, kind: Kind, left: f64, top: f64) {
        let right = left + kind.width(&words);
        let frame = Frame { left, top, right, bottom: top + kind.height() };
        self.texts.push(Text { words, kind, frame, turned: false });
    }

    /// Title and subtitle, and room for what stands above the rules; where the plot begins.
    fn head(&mut self, chart: &Chart) -> f64 {
        let mut top = PAD - 4.0;
        let room = self.width - 2.0 * PAD;
        for (words, kind) in [(&chart.title, Kind::Title), (&chart.subtitle, Kind::Subtitle)] {
            // Bold letters are wider than the ones that lines are broken by.
            for line in Words::told(words).wrapped(kind.size(), room / 1.08) {
                self.write(line, kind, PAD, top);
                top += kind.height();
            }
            top += 2.0;
        }
        top + if chart.rules.is_empty() { 8.0 } else { 8.0 + Kind::Tick.height() }
    }

    fn at(&self, chart: &Chart, (x, y): Place) -> Point {
        let along = |axis: &Axis, value: f64| axis.share(value);
        Point {
            x: self.plot.left + along(&chart.x, x) * self.plot.width(),
            y: self.plot.bottom - along(&chart.y, y) * self.plot.height(),
        }
    }

    fn axes(&mut self, chart: &Chart, numbers: Vec<(f64, String)>) {
        let plot = self.plot;
        for (value, words) in numbers {
            let y = self.at(chart, (chart.x.from, value)).y;
            self.grid.push((Point { x: plot.left, y }, Point { x: plot.right, y }));
            let words = Words::plain(&words);
            let left = plot.left - TICK - Kind::Tick.width(&words);
            self.write(words, Kind::Tick, left, y - 0.5 * Kind::Tick.height());
        }
        for (value, words) in ticks(&chart.x, ((plot.width() / 40.0) as usize).min(NUMBERS.0)) {
            let x = self.at(chart, (value, chart.y.from)).x;
            self.grid.push((Point { x, y: plot.top }, Point { x, y: plot.bottom }));
            let words = Words::plain(&words);
            let left = x - 0.5 * Kind::Tick.width(&words);
            self.write(words, Kind::Tick, left, plot.bottom + TICK + 1.0);
        }
        let wide = Kind::AxisTitle.width(&chart.x.title);
        let top = plot.bottom + TICK + Kind::Tick.height() + 3.0;
        self.write(chart.x.title.clone(), Kind::AxisTitle, plot.middle().x - 0.5 * wide, top);
        let (high, wide) = (Kind::AxisTitle.height(), Kind::AxisTitle.width(&chart.y.title));
        let middle = Point { x: PAD - 2.0 + 0.5 * high, y: plot.middle().y };
        self.texts.push(Text {
            words: chart.y.title.clone(),
            kind: Kind::AxisTitle,
            frame: Frame::round(middle, high, wide),
            turned: true,
        });
        for &level in chart.levels.iter().filter(|level| chart.y.holds(**level)) {
            let y = self.at(chart, (chart.x.from, level)).y;
            self.rules.push((Point { x: plot.left, y }, Point { x: plot.right, y }));
        }
        let mut last = f64::NEG_INFINITY;
        for rule in &chart.rules {
            let x = self.at(chart, (rule.x, chart.y.from)).x;
            if !chart.x.holds(rule.x) {
                continue;
            }
            self.rules.push((Point { x, y: plot.top }, Point { x, y: plot.bottom }));
            let wide = Kind::Tick.width(&rule.label);
            // Clear of the numbers beside the plot.
            let left = (x - 0.5 * wide).max(plot.left);
            let left = left.min(self.width - PAD - wide).max(last + 8.0);
            last = left + wide;
            if last <= self.width - 2.0 {
                // Clear of a mark on the edge.
                let top = plot.top - Kind::Tick.height() - RADIUS - 0.5;
                self.write(rule.label.clone(), Kind::Tick, left, top);
            }
        }
    }

    fn lines(&mut self, chart: &Chart) {
        let pieces: Vec<Vec<Vec<Point>>> = chart
            .lines
            .iter()
            .map(|line| {
                let clip = |piece: &Vec<Place>| {
                    let points: Vec<Point> =
                        piece.iter().map(|&place| self.at(chart, place)).collect();
                    self.plot.clip_all(&points)
                };
                line.pieces.iter().flat_map(clip).collect()
            })
            .collect();
        let heavy: Vec<Option<usize>> = chart
            .lines
            .iter()
            .map(|line| match line.role {
                Role::Main(number) => Some(number),
                Role::Plain => None,
            })
            .collect();
        // The heavy lines have looks of their own.
        let plain: Vec<&[Vec<Point>]> = pieces
            .iter()
            .zip(&heavy)
            .map(|(pieces, heavy)| if heavy.is_some() { &[] } else { pieces.as_slice() })
            .collect();
        self.near = neighbours(&self.plot, &plain);
        let looks = looks(&heavy, &self.near);
        for ((line, pieces), look) in chart.lines.iter().zip(pieces).zip(looks) {
            self.strokes.push(Stroke { pieces, look, name: line.label.text() });
        }
        for mark in &chart.marks {
            if chart.x.holds(mark.at.0) && chart.y.holds(mark.at.1) {
                self.marks.push((self.at(chart, mark.at), RADIUS, mark.kind));
            }
        }
    }

    /// Places the labels, but for those told below; the ones that find no place.
    fn labels(&mut self, chart: &Chart, keyed: &Keyed) -> Keyed {
        let mut lines: Vec<Vec<Vec<Point>>> =
            self.strokes.iter().map(|stroke| stroke.pieces.clone()).collect();
        // A label does not lie on a rule either.
        lines.extend(self.rules.iter().map(|&(from, to)| vec![vec![from, to]]));
        let taken: Vec<Frame> = self
            .marks
            .iter()
            .map(|(at, radius, _)| Frame::round(*at, 2.0 * radius, 2.0 * radius))
            .collect();
        let mut wanted: Vec<(&Words, Tie, Kind, usize)> = Vec::new();
        for (index, line) in chart.lines.iter().enumerate() {
            // The axis says what a line that is alone shows.
            if !keyed.lines.contains(&index) && chart.lines.len() > 1 {
                wanted.push((&line.label, Tie::Line(index), Kind::Label, index));
            }
        }
        for (index, mark) in chart.marks.iter().enumerate() {
            let inside = chart.x.holds(mark.at.0) && chart.y.holds(mark.at.1);
            if let Some(label) = mark.label.as_ref().filter(|_| inside)
                && !keyed.marks.contains(&index)
            {
                let tie = Tie::Mark(self.at(chart, mark.at), RADIUS);
                wanted.push((label, tie, Kind::MarkLabel, index));
            }
        }
        let wants: Vec<Want> = wanted
            .iter()
            .map(|(label, tie, kind, _)| Want {
                width: kind.width(label) + 2.0,
                height: 1.15 * kind.size(),
                tie: *tie,
            })
            .collect();
        let spots = place(&Ground { plot: self.plot, lines: &lines, taken: &taken }, &wants);
        let mut unplaced = Keyed::default();
        for ((label, tie, kind, index), spot) in wanted.into_iter().zip(spots) {
            match (spot, tie) {
                (Some(spot), _) => {
                    self.leaders.extend(spot.leader);
                    let (words, frame) = (label.clone(), spot.frame);
                    self.texts.push(Text { words, kind, frame, turned: false });
                }
                (None, Tie::Line(_)) => unplaced.lines.push(index),
                (None, Tie::Mark(..)) => unplaced.marks.push(index),
            }
        }
        unplaced
    }
}

/// For each line, the others that come next above or below it within [`NEAR`] somewhere, and
/// how often.
fn neighbours(plot: &Frame, lines: &[&[Vec<Point>]]) -> Vec<Vec<(usize, u32)>> {
    let mut near: Vec<Vec<(usize, u32)>> = vec![Vec::new(); lines.len()];
    let mut x = plot.left + 1.0;
    while x < plot.right {
        let mut heights: Vec<(f64, usize)> = lines
            .iter()
            .enumerate()
            .flat_map(|(index, pieces)| heights(pieces, x).map(move |y| (y, index)))
            .collect();
        heights.sort_by(|a, b| a.0.total_cmp(&b.0));
        for pair in heights.windows(2) {
            let [(above, one), (below, other)] = [pair[0], pair[1]];
            if below - above <= NEAR && one != other {
                for (one, other) in [(one, other), (other, one)] {
                    match near[one].iter_mut().find(|(index, _)| *index == other) {
                        Some((_, length)) => *length += 1,
                        None => near[one].push((other, 1)),
                    }
                }
            }
        }
        x += 6.0;
    }
    near
}

fn heights(pieces: &[Vec<Point>], x: f64) -> impl Iterator<Item = f64> + '_ {
    pieces.iter().flat_map(|piece| piece.windows(2)).filter_map(move |pair| {
        let [from, to] = [pair[0], pair[1]];
        let inside = from.x.min(to.x) <= x && x < from.x.max(to.x);
        inside.then(|| from.y + (to.y - from.y) * (x - from.x) / (to.x - from.x))
    })
}
