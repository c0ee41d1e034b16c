//! Pictures for an editor: which are offered at a place, and one as it was asked for.

use std::ops::Range;
use std::sync::atomic::AtomicBool;

use crate::problem::curve::Sweep;
use crate::report::inline::{Offer, Picture, PictureWish};
use crate::report::picture::layout::SIZE;
use crate::report::picture::{Kind, Wish, chart, svg};
use crate::report::source::{Stated, problems};
use crate::rules::check::Checked;
use crate::text::tree::{Placed, Statement};

/// The pictures of the problem whose title, case line or curve lies in a range.
pub fn offers(checked: &Checked, range: &Range<usize>) -> Vec<Offer> {
    let mut offers = Vec::new();
    for stated in problems(checked).iter().filter(|stated| stated.outcome.solved().is_some()) {
        let statements = &checked.document.sections[stated.section].statements;
        if !statements.iter().any(|placed| names_it(placed) && touches(placed, range)) {
            continue;
        }
        let case = stated.case.map_or(String::new(), |case| format!(", case \"{case}\""));
        let mut offer = |title: String, picture: Kind| {
            let case = stated.case.map(str::to_owned);
            let wish = PictureWish { picture: Some(picture), case, ..PictureWish::default() };
            offers.push(Offer { title, wish });
        };
        let curves = &stated.outcome.problem.curves;
        if let Some(curve) = curves.iter().find(|curve| curve.over != Sweep::Ph) {
            offer(format!("Draw pH along {}{case}", curve.words), Kind::Titration);
        }
        offer(format!("Draw log concentration against pH{case}"), Kind::LogConcentration);
    }
    offers
}

fn names_it(placed: &Placed) -> bool {
    matches!(
        placed.parsed.statement,
        Statement::Problem { .. } | Statement::Case { .. } | Statement::Curve { .. }
    )
}

fn touches(placed: &Placed, range: &Range<usize>) -> bool {
    let end = placed.start + placed.parsed.text.trim_end().len();
    placed.start <= range.end && range.start <= end
}

/// The picture that is asked for; `file` names what has no title.
///
/// # Errors
/// In words: where there is no such case, no answer, or no such thing in it.
pub fn picture(checked: &Checked, file: &str, wish: &PictureWish) -> Result<Picture, String> {
    let stated = problems(checked);
    let wanted = |stated: &&Stated| wish.case.is_none() || stated.case == wish.case.as_deref();
    let stated = stated.iter().find(wanted).ok_or_else(|| match &wish.case {
        Some(case) => format!("there is no case \"{case}\""),
        None => "the file states no amounts: there is nothing to draw".into(),
    })?;
    let asked = Wish { kind: wish.picture, of: wish.of.as_deref() };
    let chart = chart(file, *stated, asked, &AtomicBool::new(false))
        .unwrap_or_else(|| Err("the drawing was cancelled".into()))?;
    let (width, height) = (wish.width.unwrap_or(SIZE.0), wish.height.unwrap_or(SIZE.1));
    let svg = svg(&chart, wish.theme.unwrap_or_default(), width, height)
        .map_err(|error| format!("the picture could not be made: {error}"))?;
    let case = stated.case.map_or(String::new(), |case| format!(", case \"{case}\""));
    Ok(Picture { title: format!("{}{case}", chart.title), svg })
}
