//! The answer to a system: which steps, in which order.

use std::sync::atomic::AtomicBool;

use super::frame::Frame;
use super::ionic;
use super::newton::CLOSED;
use super::search::Search;
use super::skew::solve_skew;
use super::start::{first_guess, sweep, warm_guess};
use super::system::{Answer, Failure, IonicStrength, System};
use crate::chemistry::activity::ActivityKind;

/// An answer whose rows close no better than this is not given.
pub(super) const TRUSTED: f64 = 1e-9;

/// Finds the state in which every row of the system closes.
///
/// `start` is an answer to a system of the same components that is thought to be near;
/// with it the search begins there. `cancel` is looked at in every iteration. Amounts
/// are in mol per litre or kilogram, whichever the system's totals are in.
///
/// # Errors
/// [`Failure::Infeasible`] and [`Failure::Dependent`] are proven. With ideal activities
/// every other system has one answer, and it is found; [`Failure::NotConverged`] is for
/// activity models far out of their range, and for numbers that are not finite.
pub fn solve(
    system: &System,
    start: Option<&Answer>,
    cancel: &AtomicBool,
) -> Result<Answer, Failure> {
    solve_and_keep(system, start, cancel).map(|(answer, _)| answer)
}

/// The same, with the search that found it, to be gone on with where the system moves. None
/// where a charged species is held: that is found otherwise.
pub(super) fn solve_and_keep<'a>(
    system: &'a System,
    start: Option<&Answer>,
    cancel: &AtomicBool,
) -> Result<(Answer, Option<Search<'a>>), Failure> {
    let frame = Frame::new(system)?;
    if frame.askew {
        return solve_skew(system, start, cancel).map(|answer| (answer, None));
    }
    let mut search = match start {
        Some(answer) => {
            let mut search = Search::new(frame, |j| warm_guess(system, answer, j))?;
            if needs_activity(system) {
                search.set_ionic_strength(answer.ionic_strength);
                search.evaluate();
            }
            search
        }
        None => {
            let mut search = Search::new(frame, |j| first_guess(system, j))?;
            sweep(&mut search);
            search
        }
    };
    search.rebase()?;
    match system.ionic_strength {
        _ if !needs_activity(system) => search.converge(CLOSED, cancel)?,
        IonicStrength::Given(ionic_strength) => {
            search.set_ionic_strength(ionic_strength);
            search.evaluate();
            search.converge(CLOSED, cancel)?;
        }
        IonicStrength::Computed => ionic::converge(&mut search, start.is_some(), cancel)?,
    }
    let answer = trusted(&mut search)?;
    Ok((answer, Some(search)))
}

/// The answer of a search that has converged.
pub(super) fn trusted(search: &mut Search) -> Result<Answer, Failure> {
    search.polish();
    let answer = search.answer();
    // The rows as given must close too; where amounts past all measure were divided by
    // their size they do not.
    if answer.residual <= TRUSTED && search.point.ln_scale == 0.0 {
        return Ok(answer);
    }
    Err(Failure::NotConverged { residual: answer.residual, iterations: answer.iterations })
}

/// Whether any activity coefficient can differ from one.
pub(super) fn needs_activity(system: &System) -> bool {
    system.activity.kind != ActivityKind::Ideal
}
