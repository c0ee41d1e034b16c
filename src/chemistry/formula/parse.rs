//! Reading a formula: one pass from left to right with a stack of its own, so that
//! nothing depends on how deep parentheses nest.

use std::collections::BTreeMap;
use std::ops::Range;

use num_rational::Rational64;
use num_traits::{CheckedAdd, CheckedMul};

use super::charge::sign;
use super::group::nearest_symbol;
use super::{Atom, Formula, FormulaProblem, FormulaProblemKind as Kind, Groups};
use crate::chemistry::element::Element;

/// The largest number that may be written in a formula.
const LARGEST_NUMBER: u64 = 1_000_000;
/// The largest count of one atom in a formula.
const LARGEST_COUNT: u64 = 1_000_000_000;

pub(super) fn parse(text: &str, groups: &Groups) -> Result<Formula, FormulaProblem> {
    let mut reader = Reader::new(text, groups);
    if reader.is_electron() {
        return Ok(Formula::electron());
    }
    reader.body()?;
    reader.tail()
}

/// Atoms inside one parenthesis, or of one side of a hydrate's dot.
struct Level {
    atoms: BTreeMap<Atom, u64>,
    /// Index of the opening parenthesis.
    open: usize,
}

pub(super) struct Reader<'a> {
    /// Characters with their byte offsets. Subscripts are plain digits here, and a run
    /// of superscripts is a caret with plain characters behind it.
    pub(super) chars: Vec<(char, usize)>,
    pub(super) at: usize,
    /// Byte offset of the end of the last character.
    end: usize,
    pub(super) groups: &'a Groups,
    levels: Vec<Level>,
    multiplier: Rational64,
    pub(super) total: BTreeMap<Atom, Rational64>,
    pub(super) name: String,
    /// The last atom read, while nothing but its count has followed.
    pub(super) last: Option<Atom>,
}

impl<'a> Reader<'a> {
    fn new(text: &str, groups: &'a Groups) -> Self {
        let lead = text.len() - text.trim_start().len();
        let trimmed = text.trim();
        let mut chars = Vec::with_capacity(trimmed.len());
        let mut raised = false;
        for (offset, c) in trimmed.char_indices() {
            let offset = offset + lead;
            match superscript(c) {
                Some(plain) => {
                    if !raised {
                        chars.push(('^', offset));
                    }
                    raised = true;
                    chars.push((plain, offset));
                }
                None => {
                    raised = false;
                    chars.push((subscript(c).unwrap_or(c), offset));
                }
            }
        }
        Reader {
            chars,
            at: 0,
            end: lead + trimmed.len(),
            groups,
            levels: vec![Level { atoms: BTreeMap::new(), open: 0 }],
            multiplier: Rational64::from(1),
            total: BTreeMap::new(),
            name: String::new(),
            last: None,
        }
    }

    pub(super) fn peek(&self) -> Option<char> {
        self.chars.get(self.at).map(|(c, _)| *c)
    }

    /// The bytes of the characters from one index up to another.
    pub(super) fn range(&self, from: usize, to: usize) -> Range<usize> {
        let offset = |index: usize| self.chars.get(index).map_or(self.end, |(_, offset)| *offset);
        offset(from)..offset(to)
    }

    pub(super) fn problem<T>(
        &self,
        from: usize,
        to: usize,
        kind: Kind,
    ) -> Result<T, FormulaProblem> {
        Err(FormulaProblem { range: self.range(from, to), kind })
    }

    fn is_electron(&self) -> bool {
        match self.chars.as_slice() {
            [('e', _), (c, _)] | [('e', _), ('^', _), (c, _)] => sign(*c) == Some(-1),
            _ => false,
        }
    }

    /// Atoms, counts, parentheses and dots, up to the charge, the mark of a composite
    /// species, the phase or the end.
    fn body(&mut self) -> Result<(), FormulaProblem> {
        if self.chars.is_empty() {
            return self.problem(0, 0, Kind::Empty);
        }
        while let Some(c) = self.peek() {
            match c {
                '(' if self.phase_starts_here() => break,
                '(' => self.open()?,
                ')' => self.close()?,
                '.' | '·' | '\u{22c5}' | '\u{2219}' | '\u{2022}' => self.dot()?,
                '^' | '*' => break,
                _ if sign(c).is_some() => break,
                _ if c.is_ascii_alphabetic() => self.atom()?,
                found => {
                    let kind = Kind::UnexpectedCharacter { found };
                    return self.problem(self.at, self.at + 1, kind);
                }
            }
        }
        if let [_, .., inner] = self.levels.as_slice() {
            return self.problem(inner.open, inner.open + 1, Kind::UnbalancedParenthesis);
        }
        if self.levels[0].atoms.is_empty() {
            // `CuSO4·` and `·5H2O` never get here with atoms behind the dot.
            return self.problem(0, self.at, Kind::Empty);
        }
        self.end_segment()
    }

    fn phase_starts_here(&self) -> bool {
        self.levels.len() == 1
            && self.chars[self.at + 1..]
                .iter()
                .find(|(c, _)| !c.is_whitespace())
                .is_some_and(|(c, _)| c.is_ascii_lowercase())
    }

    fn open(&mut self) -> Result<(), FormulaProblem> {
        if self.levels.len() > Formula::NESTING_LIMIT {
            let kind = Kind::NestingTooDeep { limit: Formula::NESTING_LIMIT };
            return self.problem(self.at, self.at + 1, kind);
        }
        self.levels.push(Level { atoms: BTreeMap::new(), open: self.at });
        self.name.push('(');
        self.last = None;
        self.at += 1;
        Ok(())
    }

    fn close(&mut self) -> Result<(), FormulaProblem> {
        if self.levels.len() == 1 {
            return self.problem(self.at, self.at + 1, Kind::UnbalancedParenthesis);
        }
        let Some(level) = self.levels.pop() else { return Ok(()) };
        self.at += 1;
        if level.atoms.is_empty() {
            return self.problem(level.open, self.at, Kind::EmptyParentheses);
        }
        self.name.push(')');
        self.last = None;
        let from = self.at;
        let count = self.count()?;
        for (atom, inside) in level.atoms {
            self.add(atom, inside.saturating_mul(count), from)?;
        }
        Ok(())
    }

    fn atom(&mut self) -> Result<(), FormulaProblem> {
        let from = self.at;
        let atom = if let Some(symbol) = self.groups.at_start(&self.chars[from..]) {
            self.at += symbol.len();
            Atom::Group(symbol.clone())
        } else {
            self.at += 1;
            while self.peek().is_some_and(|c| c.is_ascii_lowercase()) {
                self.at += 1;
            }
            let symbol: String = self.chars[from..self.at].iter().map(|(c, _)| *c).collect();
            match Element::from_symbol(&symbol) {
                Some(element) => Atom::Element(element),
                None => return self.unknown(from, symbol),
            }
        };
        match &atom {
            Atom::Element(element) => self.name.push_str(element.symbol()),
            Atom::Group(symbol) => self.name.push_str(symbol),
        }
        let count = self.count()?;
        self.last = Some(atom.clone());
        self.add(atom, count, from)
    }

    /// Names the symbol that cannot be read, and what was most likely meant: for the L
    /// of `NaCL` that is Cl, the C included.
    fn unknown(&self, from: usize, symbol: String) -> Result<(), FormulaProblem> {
        if let (1, Some(before)) = (symbol.len(), from.checked_sub(1)) {
            let whole: String = self.chars[before..self.at].iter().map(|(c, _)| *c).collect();
            let element = Element::all().find(|e| {
                e.symbol().eq_ignore_ascii_case(&whole) && whole.starts_with(&e.symbol()[..1])
            });
            if let Some(element) = element {
                let nearest = Some(element.symbol().to_owned());
                let kind = Kind::UnknownElement { symbol: whole, nearest };
                return self.problem(before, self.at, kind);
            }
        }
        let nearest = nearest_symbol(&symbol, self.groups);
        self.problem(from, self.at, Kind::UnknownElement { symbol, nearest })
    }

    fn add(&mut self, atom: Atom, count: u64, from: usize) -> Result<(), FormulaProblem> {
        let Some(level) = self.levels.last_mut() else { return Ok(()) };
        let sum = level.atoms.entry(atom).or_default();
        *sum = sum.saturating_add(count);
        if *sum > LARGEST_COUNT {
            return self.problem(from, self.at, Kind::NumberTooLarge);
        }
        Ok(())
    }

    /// An optional count, one where none is written; its canonical form joins the name.
    fn count(&mut self) -> Result<u64, FormulaProblem> {
        let from = self.at;
        let Some(count) = self.number()? else { return Ok(1) };
        if count == 0 {
            return self.problem(from, self.at, Kind::ZeroCount);
        }
        if count != 1 {
            self.name.push_str(&count.to_string());
        }
        Ok(count)
    }

    pub(super) fn number(&mut self) -> Result<Option<u64>, FormulaProblem> {
        let from = self.at;
        let mut value = 0_u64;
        while let Some(digit) = self.peek().and_then(|c| c.to_digit(10)) {
            value = value.saturating_mul(10).saturating_add(u64::from(digit));
            self.at += 1;
        }
        if value > LARGEST_NUMBER {
            return self.problem(from, self.at, Kind::NumberTooLarge);
        }
        Ok((self.at > from).then_some(value))
    }

    /// The dot of a hydrate, with the number behind it.
    fn dot(&mut self) -> Result<(), FormulaProblem> {
        let dot = self.at;
        let stray = Kind::UnexpectedCharacter { found: self.chars[dot].0 };
        if self.levels.len() > 1 || self.levels[0].atoms.is_empty() {
            return self.problem(dot, dot + 1, stray);
        }
        self.end_segment()?;
        self.at += 1;
        self.name.push('·');
        self.last = None;
        let from = self.at;
        self.multiplier = self.multiplier()?;
        if *self.multiplier.numer() == 0 {
            return self.problem(from, self.at, Kind::ZeroCount);
        }
        if self.multiplier != Rational64::from(1) {
            let written: String = self.chars[from..self.at].iter().map(|(c, _)| *c).collect();
            self.name.push_str(&written);
        }
        if !self.peek().is_some_and(|c| c.is_ascii_alphabetic() || c == '(') {
            return self.problem(dot, dot + 1, stray);
        }
        Ok(())
    }

    /// `5`, `0.5`, `1/2`, or nothing for one.
    fn multiplier(&mut self) -> Result<Rational64, FormulaProblem> {
        let Some(whole) = self.number()? else { return Ok(Rational64::from(1)) };
        let whole = whole as i64;
        let digit_follows =
            self.chars.get(self.at + 1).is_some_and(|(digit, _)| digit.is_ascii_digit());
        match self.peek() {
            Some('.') if digit_follows => {
                self.at += 1;
                let from = self.at;
                let decimals = self.number()?.unwrap_or_default() as i64;
                match 10_i64.checked_pow((self.at - from) as u32) {
                    Some(scale) if scale <= LARGEST_NUMBER as i64 => {
                        Ok(Rational64::from(whole) + Rational64::new(decimals, scale))
                    }
                    _ => self.problem(from, self.at, Kind::NumberTooLarge),
                }
            }
            Some('/') if digit_follows => {
                self.at += 1;
                let from = self.at;
                match self.number()?.unwrap_or_default() as i64 {
                    0 => self.problem(from, self.at, Kind::ZeroCount),
                    below => Ok(Rational64::new(whole, below)),
                }
            }
            _ => Ok(Rational64::from(whole)),
        }
    }

    /// Adds the atoms since the last dot to the whole.
    fn end_segment(&mut self) -> Result<(), FormulaProblem> {
        let atoms = std::mem::take(&mut self.levels[0].atoms);
        for (atom, count) in atoms {
            let sum = self.total.entry(atom).or_default();
            match Rational64::from(count as i64)
                .checked_mul(&self.multiplier)
                .and_then(|count| sum.checked_add(&count))
            {
                Some(more) => *sum = more,
                None => return self.problem(0, self.at, Kind::NumberTooLarge),
            }
        }
        Ok(())
    }
}

fn subscript(c: char) -> Option<char> {
    match c {
        '₀'..='₉' => char::from_digit(c as u32 - '₀' as u32, 10),
        _ => None,
    }
}

fn superscript(c: char) -> Option<char> {
    Some(match c {
        '⁰' => '0',
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁴'..='⁹' => char::from_digit(c as u32 - '⁰' as u32, 10)?,
        '⁺' => '+',
        '⁻' => '-',
        _ => return None,
    })
}
