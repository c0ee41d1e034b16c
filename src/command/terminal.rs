//! What kind of place output goes to.

use std::io::IsTerminal;

use crate::report::terminal::Style;

/// Colours on a terminal, unless `NO_COLOR` is set; never into a pipe.
pub fn style() -> Style {
    let wanted = std::env::var_os("NO_COLOR").is_none_or(|value| value.is_empty());
    if wanted && std::io::stdout().is_terminal() { Style::Coloured } else { Style::Plain }
}
