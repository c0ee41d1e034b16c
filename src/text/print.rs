//! The canonical one-line form of a statement.

use std::fmt::{self, Display, Formatter};

use super::tree::Fraction;

impl Display for Fraction {
    fn fmt(&self, f: &mut Formatter<'_>) -> fmt::Result {
        write!(f, "{}", self.numerator)?;
        if self.denominator != 1 {
            write!(f, "/{}", self.denominator)?;
        }
        Ok(())
    }
}
