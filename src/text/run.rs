//! How far words, formulas and numbers run on: what a token takes in beyond the start
//! that the lexer matched. Each looks at every byte once.

use super::number;
use super::token::Token;

/// The rest of a word that starts with `start`, and whether it is the electron.
pub(super) fn word(start: &str, rest: &str) -> (Token, usize) {
    if start == "e"
        && let Some(minus) = rest.chars().next()
        && matches!(minus, '-' | '−' | '–' | '⁻')
        && !rest[minus.len_utf8()..].starts_with(|next: char| next.is_ascii_lowercase())
    {
        return (Token::Electron, minus.len_utf8());
    }
    let mut end = 0;
    while let Some(c) = rest[end..].chars().next() {
        let takes = match c {
            '_' | '⁺' | '⁻' | '°' => true,
            // `debye-huckel`
            '-' => rest[end + 1..].starts_with(|next: char| next.is_ascii_lowercase()),
            c => c.is_alphanumeric(),
        };
        if !takes {
            break;
        }
        end += c.len_utf8();
    }
    (Token::Word, end)
}

/// The rest of a formula: letters, digits, parentheses, dots, charge, phase. It takes
/// wrong forms whole (`SO4--`, `Ca+2`, `NH3+H+`), since only one who knows chemistry
/// can say what is wrong with them.
pub(super) fn name(rest: &str) -> usize {
    let mut end = 0;
    while let Some(c) = rest[end..].chars().next() {
        let next = end + c.len_utf8();
        let after = &rest[next..];
        match c {
            '(' => {
                end = next + phase(after).unwrap_or(0);
                continue;
            }
            ')' | '^' | '*' => {}
            '+' if after.starts_with("/-") => break,
            '-' if after.starts_with('>') => break,
            // `9 mmol/L+[NH3]`
            '+' | '-' if after.starts_with(['[', '{']) => break,
            '+' | '-' | '−' | '–' | '⁺' | '⁻' | '₊' | '₋' => {}
            '.' | '·' | '⋅' | '•' | '∙' => {
                if !after.starts_with(|c: char| c.is_ascii_alphanumeric() || c == '(') {
                    break;
                }
            }
            c if c.is_alphanumeric() => {}
            _ => break,
        }
        end = next;
    }
    end
}

/// The length of `s, calcite)` after an opening parenthesis: a phase with a name,
/// which alone may hold a comma and spaces.
fn phase(rest: &str) -> Option<usize> {
    let body = rest.strip_prefix('s')?.trim_start_matches([' ', '\t']).strip_prefix(',')?;
    let close = body.find(|c: char| {
        !(c.is_alphanumeric() || matches!(c, ' ' | '\t' | '-' | '_' | '\'' | '’'))
    })?;
    body[close..].starts_with(')').then(|| rest.len() - body.len() + close + 1)
}

/// Whether a number that starts with `start` is one after all, and what more of the
/// text belongs to it where it is not: `1.2.3`, `1e`, `0,01`, `1e999`.
pub(super) fn number(start: &str, rest: &str, comma_is_broken: bool) -> (Token, usize) {
    let mut chars = rest.chars();
    let (first, second) = (chars.next(), chars.next());
    let digit = |c: Option<char>| c.is_some_and(|c| c.is_ascii_digit());
    let letter = |c: Option<char>| c.is_some_and(|c| c.is_alphabetic() || c == '/');
    let broken = match first {
        // `5.` at the end of a sentence, or `1.2.3`.
        Some('.') => !letter(second),
        Some(',') => comma_is_broken && digit(second),
        Some('_' | '\'' | '’') => digit(second),
        // `2e-` holds an electron, `2eq` a unit.
        Some('e' | 'E') => !letter(second) && !matches!(second, Some('-' | '−' | '–' | '⁻')),
        _ => false,
    };
    if broken || start.starts_with('.') {
        return (Token::BrokenNumber, broken_number(rest, comma_is_broken));
    }
    let plain = start.len() < 300 && start.bytes().all(|b| b.is_ascii_digit() || b == b'.');
    if plain || number::read(start).is_some() {
        (Token::Number, 0)
    } else {
        (Token::BrokenNumber, 0)
    }
}

fn broken_number(rest: &str, commas: bool) -> usize {
    let mut end = 0;
    let mut exponent = false;
    while let Some(c) = rest[end..].chars().next() {
        let next = end + c.len_utf8();
        let takes = match c {
            '.' => true,
            ',' => commas && rest[next..].starts_with(|c: char| c.is_ascii_digit()),
            '_' | '\'' | '’' => rest[next..].starts_with(|c: char| c.is_ascii_digit()),
            '+' | '-' => exponent,
            'e' | 'E' => !rest[next..].starts_with(char::is_alphabetic),
            c => c.is_ascii_digit(),
        };
        if !takes {
            break;
        }
        exponent = matches!(c, 'e' | 'E');
        end = next;
    }
    end
}
