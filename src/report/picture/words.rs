//! Words with formulas in them, set with subscripts and superscripts, and how wide they are.

/// Where a piece stands with respect to the line.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Level {
    Line,
    Sub,
    Super,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Piece {
    pub text: String,
    pub level: Level,
}

/// One line of text.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Words(pub Vec<Piece>);

/// The size of what is raised or lowered, against the line's.
pub const SMALL: f64 = 0.72;

impl Words {
    pub fn plain(text: &str) -> Words {
        let mut words = Words::default();
        words.push(text, Level::Line);
        words
    }

    /// Text in which whatever looks like a formula is set as one: `2 [SO4^2-]`.
    pub fn told(text: &str) -> Words {
        let mut words = Words::default();
        for (index, token) in text.split(' ').enumerate() {
            if index > 0 {
                words.push(" ", Level::Line);
            }
            if token.starts_with(|c: char| c.is_uppercase() || "([{".contains(c)) || token == "e-" {
                words.extend(Words::formula(token));
            } else {
                words.push(token, Level::Line);
            }
        }
        words
    }

    /// A formula in its canonical spelling: `SO4^2-`, `(NH4)2SO4`, `[Ca^2+]`.
    pub fn formula(name: &str) -> Words {
        let mut words = Words::default();
        let characters: Vec<char> = name.chars().collect();
        let mut raised = false;
        let mut last = Level::Line;
        for (at, &c) in characters.iter().enumerate() {
            let before = at.checked_sub(1).and_then(|at| characters.get(at)).copied();
            let after = characters.get(at + 1).copied();
            let level = match c {
                '^' => {
                    raised = true;
                    continue;
                }
                '0'..='9' | '+' | '-' if raised => Level::Super,
                '0'..='9' => match before {
                    Some(b) if b.is_alphabetic() || b == ')' || b == ']' => Level::Sub,
                    Some('0'..='9') => last,
                    _ => Level::Line,
                },
                '+' | '-' if is_charge(before, after) => Level::Super,
                _ => Level::Line,
            };
            raised = raised && level == Level::Super;
            last = level;
            let c = if c == '-' && level == Level::Super { '−' } else { c };
            words.push(c.encode_utf8(&mut [0; 4]), level);
        }
        words
    }

    pub fn push(&mut self, text: &str, level: Level) {
        match self.0.last_mut() {
            _ if text.is_empty() => {}
            Some(last) if last.level == level => last.text += text,
            _ => self.0.push(Piece { text: text.to_owned(), level }),
        }
    }

    pub fn extend(&mut self, other: Words) {
        for piece in other.0 {
            self.push(&piece.text, piece.level);
        }
    }

    /// The words, then others after plain text.
    pub fn then(mut self, between: &str, other: Words) -> Words {
        self.push(between, Level::Line);
        self.extend(other);
        self
    }

    /// How wide they are at a size, in the same unit.
    pub fn width(&self, size: f64) -> f64 {
        self.0.iter().map(|piece| piece.size(size) * units(&piece.text) / 1000.0).sum()
    }

    /// For where there is no typography: with the subscripts and superscripts of Unicode.
    pub fn text(&self) -> String {
        let mut text = String::new();
        for piece in &self.0 {
            text.extend(piece.text.chars().map(|c| piece.level.of(c)));
        }
        text
    }

    /// Broken at spaces into lines no wider than `width`, where that can be.
    pub fn wrapped(&self, size: f64, width: f64) -> Vec<Words> {
        let mut lines = vec![Words::default()];
        let mut word = Words::default();
        let close = |word: &mut Words, lines: &mut Vec<Words>| {
            let word = std::mem::take(word);
            let Some(line) = lines.last_mut() else { return };
            let longer = line.clone().then(if line.0.is_empty() { "" } else { " " }, word.clone());
            if line.0.is_empty() || longer.width(size) <= width {
                *line = longer;
            } else {
                lines.push(word);
            }
        };
        for piece in &self.0 {
            for (index, part) in piece.text.split(' ').enumerate() {
                if index > 0 {
                    close(&mut word, &mut lines);
                }
                word.push(part, piece.level);
            }
        }
        close(&mut word, &mut lines);
        lines
    }
}

impl Piece {
    /// The size of its letters where the line has this one.
    pub fn size(&self, line: f64) -> f64 {
        if self.level == Level::Line { line } else { SMALL * line }
    }
}

/// A sign that touches a formula and ends it is its charge.
fn is_charge(before: Option<char>, after: Option<char>) -> bool {
    before.is_some_and(|c| c.is_alphanumeric() || "+-)]*".contains(c))
        && after.is_none_or(|c| "+-)]}(,;:".contains(c))
}

impl Level {
    fn of(self, c: char) -> char {
        let moved = |zero: u32| char::from_u32(zero + (c as u32 - '0' as u32)).unwrap_or(c);
        match (self, c) {
            (Level::Sub, '0'..='9') => moved('₀' as u32),
            (Level::Sub, 'a') => 'ₐ',
            (Level::Super, '1') => '¹',
            (Level::Super, '2') => '²',
            (Level::Super, '3') => '³',
            (Level::Super, '0' | '4'..='9') => moved('⁰' as u32),
            (Level::Super, '+') => '⁺',
            (Level::Super, '−' | '-') => '⁻',
            _ => c,
        }
    }
}

/// How wide text is, in thousandths of its size, by the widths of the common sans-serif
/// faces that are made to one measure (Helvetica, Arial, Liberation Sans, Nimbus Sans).
fn units(text: &str) -> f64 {
    let of = |c: char| match c {
        'i' | 'j' | 'l' | '\'' | '|' => 222,
        ' ' | '.' | ',' | ':' | ';' | '/' | '\\' | '!' | 'I' | 'f' | 't' | '·' | '[' | ']' => 278,
        '(' | ')' | 'r' | '-' | '`' | '"' | '{' | '}' => 333,
        '*' | '°' => 400,
        'c' | 'k' | 's' | 'v' | 'x' | 'y' | 'z' | 'J' => 500,
        'w' | 'C' | 'D' | 'H' | 'N' | 'R' | 'U' => 722,
        'm' | 'M' => 833,
        'a'..='z' | '0'..='9' | 'L' | '_' | '?' | '$' | '#' | '–' | 'µ' => 556,
        '+' | '−' | '=' | '<' | '>' | '~' | '×' | '±' | '≤' | '≥' => 584,
        'F' | 'T' | 'Z' => 611,
        'A' | 'B' | 'E' | 'K' | 'P' | 'S' | 'V' | 'X' | 'Y' | '&' => 667,
        'G' | 'O' | 'Q' => 778,
        '%' => 889,
        'W' => 944,
        _ => 800,
    };
    text.chars().map(|c| f64::from(of(c))).sum()
}

#[cfg(test)]
mod tests {
    use super::Words;

    #[test]
    fn formulas_are_set_as_chemists_write_them() {
        for (name, wanted) in [
            ("SO4^2-", "SO₄²⁻"),
            ("NH4+", "NH₄⁺"),
            ("(NH4)2SO4", "(NH₄)₂SO₄"),
            ("Fe(CN)6^3-", "Fe(CN)₆³⁻"),
            ("CaSO4·2H2O", "CaSO₄·2H₂O"),
            ("C12H22O11", "C₁₂H₂₂O₁₁"),
            ("CO2(g)", "CO₂(g)"),
            ("H2CO3*", "H₂CO₃*"),
            ("e-", "e⁻"),
            ("Al13O4(OH)24^7+", "Al₁₃O₄(OH)₂₄⁷⁺"),
        ] {
            assert_eq!(Words::formula(name).text(), wanted);
        }
        let told = Words::told("[H+] + 2 [SO4^2-] = added NaOH, pKa 9.25");
        assert_eq!(told.text(), "[H⁺] + 2 [SO₄²⁻] = added NaOH, pKa 9.25");
    }

    #[test]
    fn words_break_at_spaces_and_keep_every_character() {
        let words = Words::told("proton condition: [H+] + [HSO4-] + added NaOH = [OH-] + [NH3]");
        let lines = words.wrapped(10.0, 120.0);
        assert!(lines.len() > 2);
        assert!(lines.iter().all(|line| line.width(10.0) <= 120.0));
        let again: Vec<String> = lines.iter().map(Words::text).collect();
        assert_eq!(again.join(" "), words.text());
    }
}
