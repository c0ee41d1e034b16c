//! Every state over a grid of ionic strengths: where what comes out is what was put in.

use std::sync::atomic::AtomicBool;

use super::root::{Mark, narrow};
use super::solve::solve;
use super::system::{Answer, Failure, IonicStrength, System};

/// Ionic strengths looked at, mol per litre or kilogram, so many to a decade.
const LOOK: (f64, f64, f64) = (1e-8, 1e2, 8.0);

/// The states of a system whose ionic strength is computed, by rising ionic strength.
/// Given it, each state is the only one, so that no branch of an activity model is out of
/// reach, as the middle one of three is for any search that follows one branch.
pub(super) fn by_ionic_strength(
    system: &System,
    start: Option<&Answer>,
    cancel: &AtomicBool,
) -> Result<Vec<Answer>, Failure> {
    let mut given = system.clone();
    let mut last = start.cloned();
    // ln of the ionic strength that comes out over the one that was put in.
    let mut excess = |ln: f64| -> Result<(f64, Answer), Failure> {
        given.ionic_strength = IonicStrength::Given(ln.exp());
        let state = solve(&given, last.as_ref(), cancel)?;
        let terms = system.species.iter().zip(&state.concentrations);
        let out: f64 = terms.map(|(s, c)| 0.5 * f64::from(s.charge).powi(2) * c).sum();
        last = Some(state.clone());
        Ok((out.ln() - ln, state))
    };
    let steps = ((LOOK.1 / LOOK.0).log10() * LOOK.2) as u32;
    let mut marks: Vec<Mark> = Vec::new();
    for step in 0..=steps {
        let ln = LOOK.0.ln() + f64::from(step) * std::f64::consts::LN_10 / LOOK.2;
        match excess(ln) {
            Ok((value, _)) => marks.push((ln, value)),
            Err(Failure::Cancelled) => return Err(Failure::Cancelled),
            Err(_) => {}
        }
    }
    let mut states = Vec::new();
    for pair in marks.windows(2) {
        if pair[0].1 * pair[1].1 < 0.0 {
            let mut closest = None;
            let found = narrow(
                |ln| {
                    let (value, state) = excess(ln)?;
                    closest = Some((value, state));
                    Ok(value)
                },
                pair[0],
                pair[1],
                1e-14,
            );
            match found {
                Err(Failure::Cancelled) => return Err(Failure::Cancelled),
                // A jump of the given problem's own is no state.
                Ok(_) => states.extend(closest.filter(|c| c.0.abs() < 1e-9).map(|c| c.1)),
                Err(_) => {}
            }
        }
    }
    Ok(states)
}
