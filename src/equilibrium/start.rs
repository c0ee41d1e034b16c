//! Where a search starts: every component free at its total and pH 7, bettered by a few
//! sweeps that scale each unknown by how far its own balance is from closing.

use super::search::Search;
use super::system::{Answer, System};

const SWEEPS: u32 = 5;
/// Of the way that each unknown alone would go.
const SHARE: f64 = 0.7;
const LN_NEUTRAL: f64 = -7.0 * std::f64::consts::LN_10;

/// ln activity of a component before anything is known of it.
pub(super) fn first_guess(system: &System, component: usize) -> f64 {
    let total = system.totals[component];
    if component == 0 || total <= 0.0 { LN_NEUTRAL } else { total.ln() }
}

/// The same from a near answer, as far as that knows the component.
pub(super) fn warm_guess(system: &System, start: &Answer, component: usize) -> f64 {
    match start.ln_components.get(component) {
        Some(ln) if ln.is_finite() => *ln,
        _ => first_guess(system, component),
    }
}

/// Scales every unknown at once towards closing its own row.
pub(super) fn sweep(search: &mut Search) {
    let mut weights = vec![0.0; search.at.slots.len()];
    for _ in 0..SWEEPS {
        weights.fill(0.0);
        for i in 0..search.at.species.len() {
            let c = search.point.concentrations[i];
            for &(j, value) in search.at.row(i) {
                let j = j as usize;
                let side =
                    if value > 0.0 { search.point.positive[j] } else { search.point.negative[j] };
                weights[j] += c * value * value / side;
            }
        }
        for (j, weight) in weights.iter().enumerate() {
            let open = (search.point.negative[j] / search.point.positive[j]).ln();
            let step = SHARE * open / weight.max(1.0);
            if step.is_finite() {
                search.point.u[j] += step;
            }
        }
        search.evaluate();
    }
}
