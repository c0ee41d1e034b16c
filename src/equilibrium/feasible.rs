//! Whether any amounts at all, none negative, add up to the totals, and which species
//! must then be nothing. Asked only where the iteration finds no answer, so that "there
//! is none" is proven.
//!
//! The totals over a basis are the amounts of its species if there are no others. Where
//! one comes out negative, a species that enters with a negative coefficient there can
//! mend it; if there is none, the row itself is the proof. Taking the lowest number
//! first in both choices ends after finitely many exchanges (the criss-cross rule).

use std::sync::atomic::{AtomicBool, Ordering};

use super::basis::Basis;
use super::frame::{Frame, ROUNDINGS, Slot};
use super::system::Failure;

/// Species that must be absent in every state that meets the totals, by their index in
/// the system.
///
/// # Errors
/// [`Failure::Infeasible`] where no state does.
pub(super) fn forced_absent(frame: &Frame, cancel: &AtomicBool) -> Result<Vec<usize>, Failure> {
    let mut frame = frame.clone();
    let slots: Vec<usize> =
        (0..frame.slots.len()).filter(|&s| frame.slots[s] == Slot::Free).collect();
    let total = |frame: &Frame, slot: usize| {
        let sum = frame.total(slot);
        let value = sum.value();
        if value.abs() <= ROUNDINGS * sum.size { 0.0 } else { value }
    };
    if let Some(slot) = mend(&mut frame, &slots, total, cancel)? {
        let value = frame.total(slot).value();
        return Err(Failure::Infeasible { component: frame.at_fault(slot, value) });
    }
    // Rows that come to nothing: can a species with a share in them be there at all?
    let empty: Vec<usize> = slots.into_iter().filter(|&s| total(&frame, s) == 0.0).collect();
    let mut absent = Vec::new();
    for i in 0..frame.present.len() {
        let shares = |basis: &Basis| empty.iter().any(|&s| !basis.is_zero(i, s));
        if !frame.present[i] || !shares(&frame.basis) {
            continue;
        }
        let needed = |frame: &Frame, slot: usize| -frame.basis.value(i, slot);
        if mend(&mut frame, &empty, needed, cancel)?.is_some() {
            absent.push(i);
        }
    }
    Ok(absent)
}

/// Exchanges until no total is negative; a slot whose row can then not be met.
fn mend(
    frame: &mut Frame,
    slots: &[usize],
    total: impl Fn(&Frame, usize) -> f64,
    cancel: &AtomicBool,
) -> Result<Option<usize>, Failure> {
    loop {
        if cancel.load(Ordering::Relaxed) {
            return Err(Failure::Cancelled);
        }
        let negative = slots.iter().copied().filter(|&s| total(frame, s) < 0.0);
        let Some(slot) = negative.min_by_key(|&s| frame.basis.line(s)) else {
            return Ok(None);
        };
        let mut enters = (0..frame.present.len())
            .filter(|&i| frame.present[i] && frame.basis.value(i, slot) < 0.0);
        match enters.next() {
            Some(i) => frame.basis.exchange(i, slot),
            None => return Ok(Some(slot)),
        }
    }
}
