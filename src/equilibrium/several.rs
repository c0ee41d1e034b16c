//! Whether other states meet the same equations as an answer.
//!
//! Ideal ones have one answer only. Two kinds can have more: activity models with ions of
//! charge three and above, whose coefficients fall and then rise steeply with the ionic
//! strength; and a charged species held at a value, which a recipe can pass on its way
//! up and again on its way down.

use std::sync::atomic::AtomicBool;

use super::frame::Frame;
use super::solve::{needs_activity, solve};
use super::system::{Answer, Failure, IonicStrength, System};
use super::{root, skew};

/// Ionic strengths looked at, mol per litre or kilogram, so many to a decade.
const LOOK: (f64, f64, f64) = (1e-8, 1e2, 8.0);
/// States closer than this in ln I, or in pH, are the same.
const SAME: f64 = 1e-6;

/// The states beside `answer`, which is one of them; none for most systems, at no cost
/// then. A search over a fixed grid: two states that lie closer to one another than its
/// meshes (an eighth of a decade of ionic strength, half a unit of pH) can be missed.
///
/// # Errors
/// [`Failure::Cancelled`]. States that cannot be solved are passed over.
pub fn other_states(
    system: &System,
    answer: &Answer,
    cancel: &AtomicBool,
) -> Result<Vec<Answer>, Failure> {
    let passed = |failure: Failure| match failure {
        Failure::Cancelled => Err(Failure::Cancelled),
        _ => Ok(Vec::new()),
    };
    match Frame::new(system) {
        Ok(frame) if frame.askew => match skew::states(system, None, cancel) {
            Ok((states, _)) => {
                let other = |a: &Answer| {
                    let ln_h = |a: &Answer| a.ln_components.first().copied().unwrap_or(0.0);
                    (ln_h(a) - ln_h(answer)).abs() > SAME
                };
                Ok(states.into_iter().filter(other).collect())
            }
            Err(failure) => passed(failure),
        },
        Ok(_) => {
            let steep = system.species.iter().any(|s| s.charge.abs() >= 3);
            let computed = system.ionic_strength == IonicStrength::Computed;
            if !(steep && computed && needs_activity(system)) {
                return Ok(Vec::new());
            }
            by_ionic_strength(system, answer, cancel).or_else(passed)
        }
        Err(failure) => passed(failure),
    }
}

fn by_ionic_strength(
    system: &System,
    answer: &Answer,
    cancel: &AtomicBool,
) -> Result<Vec<Answer>, Failure> {
    let mut given = system.clone();
    let mut last = answer.clone();
    // ln of the ionic strength that comes out over the one that was put in.
    let mut excess = |ln: f64| -> Result<f64, Failure> {
        given.ionic_strength = IonicStrength::Given(ln.exp());
        last = solve(&given, Some(&last), cancel)?;
        let terms = system.species.iter().zip(&last.concentrations);
        let out: f64 = terms.map(|(s, c)| 0.5 * f64::from(s.charge).powi(2) * c).sum();
        Ok(out.ln() - ln)
    };
    let steps = ((LOOK.1 / LOOK.0).log10() * LOOK.2) as u32;
    let mut marks: Vec<root::Mark> = Vec::new();
    for step in 0..=steps {
        let ln = LOOK.0.ln() + f64::from(step) * std::f64::consts::LN_10 / LOOK.2;
        match excess(ln) {
            Ok(value) => marks.push((ln, value)),
            Err(Failure::Cancelled) => return Err(Failure::Cancelled),
            Err(_) => {}
        }
    }
    let mut found = Vec::new();
    for pair in marks.windows(2) {
        if pair[0].1 * pair[1].1 < 0.0 {
            let ln = root::narrow(&mut excess, pair[0], pair[1], 1e-9)?;
            if (ln - answer.ionic_strength.ln()).abs() > SAME {
                found.push(ln);
            }
        }
    }
    let mut states = Vec::new();
    for ln in found {
        given.ionic_strength = IonicStrength::Given(ln.exp());
        let near = solve(&given, Some(answer), cancel)?;
        // From there the joint iteration stays with the state that it is nearest to.
        let state = solve(system, Some(&near), cancel)?;
        if (state.ionic_strength.ln() - answer.ionic_strength.ln()).abs() > SAME {
            states.push(state);
        }
    }
    Ok(states)
}
