//! Rules on what closes a problem: as many unknowns as equations, and a charge that closes.

use super::catalogue::family;

mod likely_slip;
mod remaining;

family! {
    "Closure":
    charge_cannot_close,
    charge_imbalance,
    nothing_left_free,
    held_twice,
    cannot_be_held,
    more_than_one_answer,
    not_solved,
    too_many_phases,
    forms_without_end,
    solid_stated_twice,
    solid_not_stated,
    solid_cannot_form,
}
