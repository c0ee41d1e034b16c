//! What a picture shows, in the units of its axes: no pixels, no letters of a terminal.

use super::words::Words;

/// A plane with lines in it.
#[derive(Clone, Debug)]
pub struct Chart {
    pub title: String,
    /// What the title is about: the case and its conditions.
    pub subtitle: String,
    pub x: Axis,
    pub y: Axis,
    pub lines: Vec<Line>,
    pub marks: Vec<Mark>,
    /// Upright lines across the plane, such as at the pH of the answer.
    pub rules: Vec<Rule>,
    /// Level lines across the plane, such as at a limit.
    pub levels: Vec<f64>,
    /// Sentences that stand below.
    pub notes: Vec<Words>,
}

#[derive(Clone, Debug)]
pub struct Axis {
    /// The quantity with its unit.
    pub title: Words,
    pub from: f64,
    pub to: f64,
    /// In percent.
    pub percent: bool,
}

#[derive(Clone, Debug)]
pub struct Line {
    pub label: Words,
    pub role: Role,
    /// Where the line is broken, it goes on with the next piece.
    pub pieces: Vec<Vec<Place>>,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Role {
    /// One of many.
    Plain,
    /// What the picture is about, by its number: drawn heavily.
    Main(usize),
}

/// x and y.
pub type Place = (f64, f64);

#[derive(Clone, Debug)]
pub struct Mark {
    pub at: Place,
    pub label: Option<Words>,
    pub kind: MarkKind,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum MarkKind {
    Answer,
    /// A place of note.
    Point,
}

#[derive(Clone, Debug)]
pub struct Rule {
    pub x: f64,
    pub label: Words,
}

impl Axis {
    pub fn new(title: Words, from: f64, to: f64) -> Axis {
        Axis { title, from, to, percent: false }
    }

    /// Where a value stands between the ends, which are 0 and 1.
    pub fn share(&self, value: f64) -> f64 {
        (value - self.from) / (self.to - self.from)
    }

    pub fn holds(&self, value: f64) -> bool {
        (self.from..=self.to).contains(&value)
    }
}

impl Line {
    /// A line through places, broken where there is none or where it is not finite.
    pub fn through(label: Words, role: Role, places: impl Iterator<Item = Option<Place>>) -> Line {
        let mut pieces = vec![Vec::new()];
        for place in places {
            match (place.filter(|(x, y)| x.is_finite() && y.is_finite()), pieces.last_mut()) {
                (Some(place), Some(piece)) => piece.push(place),
                (None, Some(piece)) if !piece.is_empty() => pieces.push(Vec::new()),
                _ => {}
            }
        }
        pieces.retain(|piece| piece.len() > 1);
        Line { label, role, pieces }
    }

    /// The y at an x, by the straight line between its neighbours.
    pub fn at(&self, x: f64) -> Option<f64> {
        self.pieces.iter().flat_map(|piece| piece.windows(2)).find_map(|pair| {
            let [(x0, y0), (x1, y1)] = [pair[0], pair[1]];
            let inside = x0.min(x1) <= x && x <= x0.max(x1) && x0 != x1;
            inside.then(|| y0 + (y1 - y0) * (x - x0) / (x1 - x0))
        })
    }

    /// Whether it lies on another within some height of y, wherever either is drawn.
    fn covers(&self, other: &Line, within: f64) -> bool {
        let near = |one: &Line, other: &Line| {
            one.pieces
                .iter()
                .flatten()
                .all(|&(x, y)| other.at(x).is_some_and(|value| (value - y).abs() <= within))
        };
        near(self, other) && near(other, self)
    }
}

impl Chart {
    /// Leaves out lines of which nothing is to be seen, and gives lines that lie on one
    /// another a label together.
    pub fn tidy(&mut self) {
        let (x, y) = (&self.x, &self.y);
        let seen = |line: &Line| {
            line.pieces.iter().flat_map(|piece| piece.windows(2)).any(|pair| {
                let [one, other] = [pair[0], pair[1]];
                one.0.max(other.0) >= x.from
                    && one.0.min(other.0) <= x.to
                    && one.1.max(other.1) >= y.from
                    && one.1.min(other.1) <= y.to
            })
        };
        self.lines.retain(seen);
        let within = 0.004 * (y.to - y.from);
        let mut kept: Vec<Line> = Vec::new();
        for line in self.lines.drain(..) {
            let twin = kept.iter_mut().find(|other| {
                other.role == Role::Plain && line.role == Role::Plain && other.covers(&line, within)
            });
            match twin {
                Some(other) => other.label = other.label.clone().then(", ", line.label),
                None => kept.push(line),
            }
        }
        self.lines = kept;
    }
}
