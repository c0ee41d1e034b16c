//! Places on the page, in pixels, y downwards.

#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Point {
    pub x: f64,
    pub y: f64,
}

#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Frame {
    pub left: f64,
    pub top: f64,
    pub right: f64,
    pub bottom: f64,
}

impl Frame {
    pub fn round(middle: Point, width: f64, height: f64) -> Frame {
        Frame {
            left: middle.x - 0.5 * width,
            top: middle.y - 0.5 * height,
            right: middle.x + 0.5 * width,
            bottom: middle.y + 0.5 * height,
        }
    }

    pub fn width(&self) -> f64 {
        self.right - self.left
    }

    pub fn height(&self) -> f64 {
        self.bottom - self.top
    }

    pub fn middle(&self) -> Point {
        Point { x: 0.5 * (self.left + self.right), y: 0.5 * (self.top + self.bottom) }
    }

    /// Larger by so much on every side.
    pub fn grown(&self, by: f64) -> Frame {
        Frame {
            left: self.left - by,
            top: self.top - by,
            right: self.right + by,
            bottom: self.bottom + by,
        }
    }

    pub fn holds(&self, other: &Frame) -> bool {
        self.left <= other.left
            && self.top <= other.top
            && self.right >= other.right
            && self.bottom >= other.bottom
    }

    pub fn meets(&self, other: &Frame) -> bool {
        self.left < other.right
            && other.left < self.right
            && self.top < other.bottom
            && other.top < self.bottom
    }

    /// The part of a straight line that lies inside (Liang and Barsky's clipping).
    pub fn clip(&self, from: Point, to: Point) -> Option<(Point, Point)> {
        let (dx, dy) = (to.x - from.x, to.y - from.y);
        let (mut enter, mut leave) = (0.0_f64, 1.0_f64);
        for (step, room) in [
            (-dx, from.x - self.left),
            (dx, self.right - from.x),
            (-dy, from.y - self.top),
            (dy, self.bottom - from.y),
        ] {
            if step == 0.0 {
                if room < 0.0 {
                    return None;
                }
            } else if step < 0.0 {
                enter = enter.max(room / step);
            } else {
                leave = leave.min(room / step);
            }
        }
        let at = |t: f64| Point { x: from.x + t * dx, y: from.y + t * dy };
        (enter <= leave).then(|| (at(enter), at(leave)))
    }

    /// The point of the frame's edge or inside that is nearest to another.
    pub fn nearest(&self, to: Point) -> Point {
        Point { x: to.x.clamp(self.left, self.right), y: to.y.clamp(self.top, self.bottom) }
    }

    /// The parts of a line through points that lie inside.
    pub fn clip_all(&self, points: &[Point]) -> Vec<Vec<Point>> {
        let mut pieces: Vec<Vec<Point>> = Vec::new();
        for pair in points.windows(2) {
            let Some((from, to)) = self.clip(pair[0], pair[1]) else { continue };
            match pieces.last_mut() {
                Some(piece) if piece.last().is_some_and(|last| last.far(from) < 1e-6) => {
                    piece.push(to);
                }
                _ => pieces.push(vec![from, to]),
            }
        }
        pieces
    }
}

impl Point {
    pub fn far(self, other: Point) -> f64 {
        (self.x - other.x).hypot(self.y - other.y)
    }

    /// A share of the way to another.
    pub fn towards(self, other: Point, share: f64) -> Point {
        Point { x: self.x + share * (other.x - self.x), y: self.y + share * (other.y - self.y) }
    }
}

/// Points along a line, so far apart.
pub fn along(points: &[Point], step: f64) -> Vec<Point> {
    let mut found = Vec::new();
    let mut ahead = 0.0;
    for pair in points.windows(2) {
        let length = pair[0].far(pair[1]);
        while ahead <= length && length > 0.0 {
            found.push(pair[0].towards(pair[1], ahead / length));
            ahead += step;
        }
        ahead -= length;
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_are_cut_at_the_frame() {
        let frame = Frame { left: 0.0, top: 0.0, right: 10.0, bottom: 10.0 };
        let at = |x: f64, y: f64| Point { x, y };
        assert_eq!(frame.clip(at(-5.0, 5.0), at(15.0, 5.0)), Some((at(0.0, 5.0), at(10.0, 5.0))));
        assert_eq!(frame.clip(at(-5.0, -1.0), at(15.0, -1.0)), None);
        let zigzag = [at(2.0, 5.0), at(4.0, -5.0), at(6.0, 5.0), at(7.0, 6.0)];
        let pieces = frame.clip_all(&zigzag);
        assert_eq!(pieces.len(), 2);
        assert_eq!(pieces[1], vec![at(5.0, 0.0), at(6.0, 5.0), at(7.0, 6.0)]);
        assert_eq!(along(&[at(0.0, 0.0), at(3.0, 0.0), at(3.0, 3.0)], 2.0).len(), 4);
    }
}
