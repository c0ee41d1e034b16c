//! The species of a problem over its components, exactly.

use num_rational::Rational64;

/// Species over components. The proton is always component 0; water is a component
/// too but stands in no row, its activity being one and its amount without limit.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Stoichiometry {
    /// Names of the components, `H+` first, water left out.
    pub components: Vec<String>,
    pub component_charges: Vec<i32>,
    /// Dissolved species, the free components among them.
    pub species: Vec<SpeciesRow>,
}

#[derive(Clone, Debug, PartialEq)]
pub struct SpeciesRow {
    pub name: String,
    pub charge: i32,
    /// Coefficient of each component, by rising index, no zeros.
    pub row: Vec<(usize, Rational64)>,
}
