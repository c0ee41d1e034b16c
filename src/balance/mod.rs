//! What must hold: mass, charge and proton balances in exact arithmetic, and how each was derived.
