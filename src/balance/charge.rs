//! The charge balance: the solution as a whole is neutral.

use num_rational::Rational64;

use super::{Balance, BalanceKind};
use crate::problem::stoichiometry::Stoichiometry;

/// `Σ z_i [i] = 0` over the dissolved species.
pub fn charge_balance(stoichiometry: &Stoichiometry) -> Balance {
    let terms = stoichiometry.species.iter().enumerate();
    let charged = terms.filter(|(_, species)| species.charge != 0);
    Balance {
        kind: BalanceKind::Charge,
        terms: charged.map(|(index, s)| (index, Rational64::from(i64::from(s.charge)))).collect(),
        parts: Vec::new(),
    }
}
