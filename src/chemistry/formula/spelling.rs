//! The canonical spelling of a formula as text, for telling whether two names are the same
//! before anything is known of groups.

/// The spelling that [`super::Formula::name`] has, for any text that is a formula; other
/// text comes back much as it is.
pub fn canonical(text: &str) -> String {
    let text = text.trim();
    let plain = text.is_ascii() && !text.contains("(aq)") && !text.contains(['.', '^', ' ', ',']);
    if plain {
        return text.to_owned();
    }
    let mut name = String::with_capacity(text.len());
    let mut raised = false;
    for c in text.replace("(aq)", "").chars() {
        let upper = superscript(c);
        // A raised number is a charge above one; a raised sign alone needs no caret.
        if upper.is_some_and(|u| u.is_ascii_digit()) && !raised && !name.ends_with('^') {
            name.push('^');
        }
        raised = upper.is_some();
        match c {
            ' ' => {}
            '.' | '\u{22c5}' | '\u{2219}' => name.push('·'),
            '\u{2212}' => name.push('-'),
            c => name.push(upper.or_else(|| subscript(c)).unwrap_or(c)),
        }
    }
    let name = name.replace("^1+", "+").replace("^1-", "-").replace("^+", "+").replace("^-", "-");
    // The form of a solid is written with a space after the comma.
    name.replace("(s,", "(s, ")
}

fn subscript(c: char) -> Option<char> {
    ('₀'..='₉').contains(&c).then(|| char::from(b'0' + (c as u32 - '₀' as u32) as u8))
}

fn superscript(c: char) -> Option<char> {
    Some(match c {
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁰' => '0',
        '⁴'..='⁹' => char::from(b'4' + (c as u32 - '⁴' as u32) as u8),
        '⁺' => '+',
        '⁻' => '-',
        _ => return None,
    })
}

#[cfg(test)]
mod tests {
    use super::super::{Formula, Groups};
    use super::canonical;

    #[test]
    fn the_spelling_is_the_one_of_the_formula() {
        for text in [
            "NH4+",
            "SO₄²⁻",
            "CaSO4.2H2O",
            "Ca^2+",
            "HCO₃⁻",
            "NH3(aq)",
            "CaCO3(s, calcite)",
            "CaCO3(s,calcite)",
            "Na^1+",
            "H2CO3*",
            "CO2(g)",
            "Fe(CN)6^3-",
            "Al³⁺",
        ] {
            let formula = Formula::parse(text, &Groups::default()).unwrap();
            assert_eq!(canonical(text), formula.name, "{text}");
        }
    }
}
