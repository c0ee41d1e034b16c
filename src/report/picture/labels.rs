//! Where labels go: each beside its line or mark, clear of the others.
//!
//! Every label has many places to choose from, along its line and, with a leader, further
//! off. A place costs what it hides and how easily it is taken for another line's. Labels
//! choose in turn, the ones with the least choice first, and then again a few times, each
//! given what the others have. A label for which no place is left, or none that is clear
//! enough to be read at once, gets none.

use super::geometry::{Frame, Point, along};

/// What a label belongs to.
#[derive(Clone, Copy, Debug)]
pub enum Tie {
    /// A line of the ground, by its number.
    Line(usize),
    /// A mark of this radius.
    Mark(Point, f64),
}

#[derive(Clone, Copy, Debug)]
pub struct Want {
    pub width: f64,
    pub height: f64,
    pub tie: Tie,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Spot {
    pub frame: Frame,
    /// From the label to what it belongs to, where that is not beside it.
    pub leader: Option<(Point, Point)>,
}

/// What is there already.
pub struct Ground<'a> {
    pub plot: Frame,
    pub lines: &'a [Vec<Vec<Point>>],
    /// Frames that no label may meet.
    pub taken: &'a [Frame],
}

const CELL: f64 = 3.0;
/// Between a label and its line.
const GAP: f64 = 2.5;
/// Between labels on one line.
const APART: f64 = 5.0;
/// Around a label no other line should come so near.
const CLEAR: f64 = 6.0;
const HIDES: f64 = 100.0;
/// A leader that passes a line, a mark or a label.
const PASSES: f64 = 24.0;
const UNCLEAR: f64 = 14.0;
const LEADER: f64 = 26.0;
const MERGED: f64 = 10.0;
const MEETS: f64 = 1e5;
/// A label that would cost more is told elsewhere: a line's where it hides another line, a
/// mark's, which lies among lines anyway, where it hides two.
const TOO_MUCH: f64 = 120.0;
const TOO_MUCH_OF_MARK: f64 = 190.0;
/// Places without a leader that leave enough choice.
const ENOUGH: usize = 12;
const KEPT: usize = 160;
const TURNS: u32 = 16;
const ROUNDS: usize = 8;

/// A place for each label; none where it would meet another or hide too much.
pub fn place(ground: &Ground, wants: &[Want]) -> Vec<Option<Spot>> {
    let raster = Raster::new(ground);
    let choices: Vec<Vec<(f64, Spot)>> =
        wants.iter().map(|want| choices(ground, &raster, want)).collect();
    let mut order: Vec<usize> = (0..wants.len()).collect();
    let easy = |label: &usize| choices[*label].iter().filter(|(cost, _)| *cost < 12.0).count();
    order.sort_by_key(easy);
    let mut chosen: Vec<Option<Spot>> = vec![None; wants.len()];
    let best = |label: usize, chosen: &[Option<Spot>]| {
        let all = choices[label].iter();
        all.map(|(cost, spot)| (cost + among(spot, label, chosen), *spot))
            .min_by(|a, b| a.0.total_cmp(&b.0))
    };
    for _ in 0..ROUNDS {
        let before = chosen.clone();
        for &label in &order {
            chosen[label] = best(label, &chosen).map(|(_, spot)| spot);
        }
        if chosen == before {
            break;
        }
    }
    // The ones that chose last give way, and leave their room to the others.
    for &label in order.iter().rev() {
        chosen[label] = None;
        let most = match wants[label].tie {
            Tie::Line(_) => TOO_MUCH,
            Tie::Mark(..) => TOO_MUCH_OF_MARK,
        };
        let found = best(label, &chosen).filter(|(cost, _)| *cost < most);
        chosen[label] = found.map(|(_, spot)| spot);
    }
    chosen
}

/// What a place costs for where the other labels are.
fn among(spot: &Spot, label: usize, chosen: &[Option<Spot>]) -> f64 {
    let mut cost = 0.0;
    let frame = spot.frame.grown(1.5);
    for (_, other) in chosen.iter().enumerate().filter(|(index, _)| *index != label) {
        let Some(other) = other else { continue };
        let wide = Frame { left: frame.left - APART, right: frame.right + APART, ..frame };
        if wide.meets(&other.frame) {
            cost += MEETS;
        }
        for (leader, frame) in [(other.leader, spot.frame), (spot.leader, other.frame)] {
            if leader.is_some_and(|(from, to)| frame.grown(1.0).clip(from, to).is_some()) {
                cost += HIDES;
            }
        }
        if let (Some(one), Some(two)) = (spot.leader, other.leader)
            && cross(one, two)
        {
            cost += HIDES;
        }
    }
    cost
}

fn cross(one: (Point, Point), two: (Point, Point)) -> bool {
    let side = |line: (Point, Point), p: Point| {
        (line.1.x - line.0.x) * (p.y - line.0.y) - (line.1.y - line.0.y) * (p.x - line.0.x)
    };
    side(one, two.0) * side(one, two.1) < 0.0 && side(two, one.0) * side(two, one.1) < 0.0
}

/// The best places of a label, with what each costs by itself.
fn choices(ground: &Ground, raster: &Raster, want: &Want) -> Vec<(f64, Spot)> {
    let mut near = Vec::new();
    let own = match want.tie {
        Tie::Line(line) => {
            for piece in ground.lines.get(line).into_iter().flatten() {
                beside(piece, want, raster, Raster::bit(line), &mut near);
            }
            Raster::bit(line)
        }
        Tie::Mark(at, radius) => {
            round(at, radius + GAP, want, 0.0, false, &mut near);
            0
        }
    };
    let mut spots = weighed(near, own, ground, raster);
    // Leaders are only for where it is crowded.
    if spots.iter().filter(|(cost, _)| *cost < UNCLEAR).count() < ENOUGH {
        let mut far = Vec::new();
        match want.tie {
            Tie::Line(line) => {
                for piece in ground.lines.get(line).into_iter().flatten() {
                    for at in along(piece, 28.0) {
                        let cost = merged(at, raster, own);
                        for away in [12.0, 22.0, 38.0, 60.0] {
                            round(at, away, want, cost, true, &mut far);
                        }
                    }
                }
            }
            Tie::Mark(at, radius) => {
                for away in [8.0, 14.0, 20.0, 28.0, 38.0, 50.0, 66.0, 90.0] {
                    round(at, radius + away, want, 0.0, true, &mut far);
                }
            }
        }
        spots.extend(weighed(far, own, ground, raster));
    }
    spots.sort_by(|a, b| a.0.total_cmp(&b.0));
    spots.truncate(KEPT);
    spots
}

/// The spots inside the plot that meet nothing that is taken, with what they hide added to
/// their cost.
fn weighed(
    mut spots: Vec<(f64, Spot)>,
    own: u64,
    ground: &Ground,
    raster: &Raster,
) -> Vec<(f64, Spot)> {
    let inside = ground.plot.grown(-3.0);
    spots.retain(|(_, spot)| {
        inside.holds(&spot.frame)
            && !ground.taken.iter().any(|taken| taken.grown(1.5).meets(&spot.frame))
    });
    for (cost, spot) in &mut spots {
        let hidden = raster.under(&spot.frame);
        let near = raster.under(&spot.frame.grown(CLEAR)) & !hidden & !own;
        // A mark lies on lines anyway.
        let unclear = if own == 0 { 0.2 * UNCLEAR } else { UNCLEAR };
        *cost += HIDES * f64::from(hidden.count_ones()) + unclear * f64::from(near.count_ones());
        if let Some((from, to)) = spot.leader {
            *cost += LEADER + 0.5 * from.far(to);
            let end = from.towards(to, 0.9);
            let passed = raster.along(from, end) & !own;
            let blocked = ground.taken.iter().filter(|taken| taken.clip(from, end).is_some());
            *cost += PASSES * (f64::from(passed.count_ones()) + blocked.count() as f64);
        }
    }
    spots
}

/// Where lines run together, nobody can tell which one is meant.
fn merged(at: Point, raster: &Raster, own: u64) -> f64 {
    let others = raster.under(&Frame::round(at, CELL, CELL)) & !own;
    MERGED * f64::from(others.count_ones())
}

/// Places along a line, touching it on either side.
fn beside(piece: &[Point], want: &Want, raster: &Raster, own: u64, spots: &mut Vec<(f64, Spot)>) {
    let points = along(piece, 7.0);
    let count = points.len();
    for (index, &at) in points.iter().enumerate() {
        let (before, after) = (points[index.saturating_sub(1)], points[(index + 1).min(count - 1)]);
        let length = before.far(after);
        if length == 0.0 {
            continue;
        }
        let normal = ((before.y - after.y) / length, (after.x - before.x) / length);
        // In the middle of its line a label is found soonest; above it sooner than below.
        let middle = (index as f64 / count as f64 - 0.5).abs() * 4.0;
        let together = merged(at, raster, own);
        for sign in [1.0, -1.0] {
            let (nx, ny) = (sign * normal.0, sign * normal.1);
            let off = GAP + 0.5 * (nx.abs() * want.width + ny.abs() * want.height);
            let centre = Point { x: at.x + nx * off, y: at.y + ny * off };
            let frame = Frame::round(centre, want.width, want.height);
            let below = if ny > 0.2 { 2.0 } else { 0.0 };
            let between = raster.along(at, frame.nearest(at)) & !own;
            let other_side = HIDES * f64::from(between.count_ones());
            let cost = middle + below + together + other_side;
            spots.push((cost, Spot { frame, leader: None }));
        }
    }
}

/// Places round a point, the label's nearest edge so far away.
fn round(at: Point, away: f64, want: &Want, cost: f64, leads: bool, spots: &mut Vec<(f64, Spot)>) {
    for turn in 0..TURNS {
        let angle = std::f64::consts::TAU * f64::from(turn) / f64::from(TURNS);
        let (dx, dy) = (angle.cos(), angle.sin());
        let centre = Point {
            x: at.x + dx * (away + 0.5 * want.width),
            y: at.y + dy * (away + 0.5 * want.height),
        };
        let frame = Frame::round(centre, want.width, want.height);
        let start = frame.nearest(at);
        let leader = (leads && start.far(at) > 5.0).then_some((start, at));
        spots.push((cost, Spot { frame, leader }));
    }
}

/// Which lines pass through each cell of the plot.
struct Raster {
    plot: Frame,
    columns: usize,
    rows: usize,
    cells: Vec<u64>,
}

impl Raster {
    fn new(ground: &Ground) -> Raster {
        let plot = ground.plot;
        let columns = (plot.width() / CELL).ceil().max(1.0) as usize;
        let rows = (plot.height() / CELL).ceil().max(1.0) as usize;
        let mut raster = Raster { plot, columns, rows, cells: vec![0; columns * rows] };
        for (line, pieces) in ground.lines.iter().enumerate() {
            for at in pieces.iter().flat_map(|piece| along(piece, 0.5 * CELL)) {
                if let Some(cell) = raster.cell(at) {
                    raster.cells[cell] |= Raster::bit(line);
                }
            }
        }
        raster
    }

    /// More lines than bits share them: then a place seems a little better than it is.
    fn bit(line: usize) -> u64 {
        1 << (line % 64)
    }

    fn cell(&self, at: Point) -> Option<usize> {
        let column = ((at.x - self.plot.left) / CELL).floor();
        let row = ((at.y - self.plot.top) / CELL).floor();
        let fits = column >= 0.0 && row >= 0.0;
        let (column, row) = (column as usize, row as usize);
        (fits && column < self.columns && row < self.rows).then(|| row * self.columns + column)
    }

    /// The lines under a frame.
    fn under(&self, frame: &Frame) -> u64 {
        let index = |at: f64, start: f64, most: usize| {
            ((at - start) / CELL).floor().clamp(0.0, most as f64 - 1.0) as usize
        };
        let columns = index(frame.left, self.plot.left, self.columns)
            ..=index(frame.right, self.plot.left, self.columns);
        let rows = index(frame.top, self.plot.top, self.rows)
            ..=index(frame.bottom, self.plot.top, self.rows);
        let mut lines = 0;
        for row in rows {
            for column in columns.clone() {
                lines |= self.cells[row * self.columns + column];
            }
        }
        lines
    }

    /// The lines that a straight stroke passes.
    fn along(&self, from: Point, to: Point) -> u64 {
        let points = along(&[from, to], 0.5 * CELL);
        points.into_iter().filter_map(|at| self.cell(at)).fold(0, |all, at| all | self.cells[at])
    }
}
