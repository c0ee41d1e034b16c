//! A curve has too few points, or more than anybody looks through.
//!
//! The points of a curve lie the same distance apart, and both ends count: 101 where the
//! statement says nothing, else as many as it says, from 2 to 10 000. Each one is a
//! problem solved by itself.
//!
//! Before:
//!
//! ```lyate
//! use ammonia
//! component NH3
//! total NH3 = 2 mmol/L
//! curve over pH from 2 to 12, 1 points
//! ```
//!
//! After:
//!
//! ```lyate
//! use ammonia
//! component NH3
//! total NH3 = 2 mmol/L
//! curve over pH from 2 to 12, 41 points
//! ```

use crate::problem::curve::POINTS;
use crate::problem::defect::DefectKind;
use crate::rules::catalogue::rule;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::Place;

rule!("curve-points", Error, "curve_points.rs", find);

fn find(context: &Context, found: &mut Vec<Finding<Place>>) {
    for defect in context.defects() {
        let DefectKind::CurvePoints { points } = defect.kind else { continue };
        let (least, most) = (POINTS.start(), POINTS.end());
        let message = format!("a curve has {least} to {most} points, not {points}");
        let nearest = points.clamp(*least, *most).to_string();
        let title = format!("write {nearest}");
        found.push(RULE.at(defect.at, message).with_fix(title, false, defect.at, nearest));
    }
}
