//! Colours on a terminal, or none.

/// Whether text carries a terminal's colours.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Style {
    Plain,
    Coloured,
}

/// What a piece of text is, as far as its colour goes.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Paint {
    #[default]
    Plain,
    Heading,
    /// Of less weight than the text round it.
    Faint,
    Good,
    Bad,
    Doubtful,
    /// A note.
    Quiet,
}

impl Style {
    /// The text in its colour, and back to the terminal's own after it.
    pub fn paint(self, paint: Paint, text: &str) -> String {
        let code = match paint {
            Paint::Plain => return text.to_owned(),
            Paint::Heading => "1",
            Paint::Faint => "2",
            Paint::Good => "32",
            Paint::Bad => "1;31",
            Paint::Doubtful => "33",
            Paint::Quiet => "36",
        };
        match self {
            Style::Plain => text.to_owned(),
            Style::Coloured => format!("\u{1b}[{code}m{text}\u{1b}[0m"),
        }
    }
}
