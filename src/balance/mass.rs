//! Mass balances: what every component's species add up to.

use num_rational::Rational64;

use super::recipe::Recipe;
use super::{Balance, BalanceKind, Part};
use crate::problem::stoichiometry::Stoichiometry;

/// `Σ a_ij [i] + Σ a_kj precipitated k = total j`: every dissolved species, and every solid
/// that may form, by how often it holds the component.
/// For the proton it counts protons over the components, and coefficients have both
/// signs.
pub fn mass_balance(stoichiometry: &Stoichiometry, recipe: &Recipe, component: usize) -> Balance {
    let mut parts = vec![(Part::Total(component), Rational64::from(1))];
    parts.extend(recipe.precipitated_in(component).map(|(part, n)| (part, -n)));
    let terms = stoichiometry.species.iter().enumerate().filter_map(|(index, species)| {
        let at = species.row.iter().find(|(column, _)| *column == component);
        at.map(|(_, coefficient)| (index, *coefficient))
    });
    Balance { kind: BalanceKind::Component(component), terms: terms.collect(), parts }
}
