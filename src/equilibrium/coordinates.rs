//! The balances over one basis, as sparse rows of `f64`.
//!
//! Unknowns are `u_j`, the ln activity of the line in each free slot, that of water taken
//! as one. A present species has `ln c_i = constant_i + Σ_j α_ij u_j + shift_i`, the shift
//! holding activity coefficients and the activity of water only; and every free slot has the row `Σ_i α_ij c_i = total_j`.

use super::frame::{Frame, Slot};

#[derive(Clone, Debug, Default)]
pub(super) struct Coordinates {
    /// The present species, by their index in the system.
    pub species: Vec<usize>,
    /// The free slots.
    pub slots: Vec<usize>,
    /// Where each present species' entries start; one more at the end.
    starts: Vec<u32>,
    entries: Vec<(u32, f64)>,
    pub constants: Vec<f64>,
    pub totals: Vec<f64>,
    /// Whether any present species has a positive, and a negative, coefficient.
    pub signs: Vec<(bool, bool)>,
    /// Coefficients of held phases that move with activity coefficients or with the
    /// activity of water: (present species, phase, α).
    pub held: Vec<(usize, usize, f64)>,
    /// For each free slot, the present species that stands in it.
    pub basis_species: Vec<Option<usize>>,
}

impl Coordinates {
    pub fn new(frame: &Frame) -> Self {
        let system = frame.system;
        let slots: Vec<usize> =
            (0..frame.slots.len()).filter(|&s| frame.slots[s] == Slot::Free).collect();
        // Of each slot, which free one it is.
        let mut place = vec![0; frame.slots.len()];
        slots.iter().enumerate().for_each(|(j, &slot)| place[slot] = j);
        let offsets: Vec<f64> = slots.iter().map(|&s| frame.offset(s)).collect();
        let species: Vec<usize> = (0..system.species.len()).filter(|&i| frame.present[i]).collect();
        let mut out = Self {
            starts: Vec::with_capacity(species.len() + 1),
            entries: Vec::with_capacity(4 * species.len()),
            constants: Vec::with_capacity(species.len()),
            totals: slots.iter().map(|&s| frame.total(s).value()).collect(),
            signs: vec![(false, false); slots.len()],
            held: Vec::new(),
            basis_species: vec![None; slots.len()],
            species,
            slots,
        };
        for (i, &line) in out.species.iter().enumerate() {
            out.starts.push(out.entries.len() as u32);
            let mut constant = system.species[line].ln_k;
            frame.basis.each(line, |slot, value| match frame.slots[slot] {
                Slot::Free => {
                    let j = place[slot];
                    constant -= value * offsets[j];
                    out.entries.push((j as u32, value));
                    if value > 0.0 {
                        out.signs[j].0 = true;
                    } else {
                        out.signs[j].1 = true;
                    }
                    if frame.basis.line(slot) == line {
                        out.basis_species[j] = Some(i);
                    }
                }
                Slot::Held(k) => {
                    constant += value * system.fixed[k].ln_value;
                    let fixed = &system.fixed[k];
                    if fixed.concentration_of.is_some() || fixed.water != 0.0 {
                        out.held.push((i, k, value));
                    }
                }
                Slot::Empty => {}
            });
            out.constants.push(constant);
        }
        out.starts.push(out.entries.len() as u32);
        out
    }

    /// The entries of a present species: (free slot, α).
    pub fn row(&self, i: usize) -> &[(u32, f64)] {
        &self.entries[self.starts[i] as usize..self.starts[i + 1] as usize]
    }
}
