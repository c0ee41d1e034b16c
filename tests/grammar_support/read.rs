//! Reads EBNF as the W3C writes it: `name ::= …`, `"…"`, `[…]`, `#xN`, `|`, `? * +`,
//! parentheses and `/* … */`.

use super::{Expression, Grammar};

struct Reader<'g> {
    rest: &'g str,
}

/// The grammar of a text; what is wrong with it is told by panicking.
pub fn read(text: &str) -> Grammar {
    let mut reader = Reader { rest: text };
    let mut grammar = Grammar { rules: Default::default() };
    while let Some(name) = reader.name() {
        assert!(reader.take("::="), "`::=` after {name}, not {}", reader.glimpse());
        let expression = reader.choice();
        let twice = grammar.rules.insert(name.clone(), expression);
        assert!(twice.is_none(), "{name} is defined twice");
    }
    assert!(reader.rest.is_empty(), "a rule, not {}", reader.glimpse());
    grammar
}

impl Reader<'_> {
    fn space(&mut self) {
        loop {
            self.rest = self.rest.trim_start();
            let Some(comment) = self.rest.strip_prefix("/*") else { return };
            let (_, after) = comment.split_once("*/").expect("a comment that ends");
            self.rest = after;
        }
    }

    fn take(&mut self, sign: &str) -> bool {
        self.space();
        let rest = self.rest.strip_prefix(sign);
        self.rest = rest.unwrap_or(self.rest);
        rest.is_some()
    }

    fn name(&mut self) -> Option<String> {
        self.space();
        let end = self.rest.find(|c: char| !(c.is_ascii_alphanumeric() || c == '-'));
        let (name, rest) = self.rest.split_at(end.unwrap_or(self.rest.len()));
        self.rest = rest;
        (!name.is_empty()).then(|| name.to_owned())
    }

    fn choice(&mut self) -> Expression {
        let mut choices = vec![self.sequence()];
        while self.take("|") {
            choices.push(self.sequence());
        }
        if choices.len() == 1 { choices.remove(0) } else { Expression::Choice(choices) }
    }

    fn sequence(&mut self) -> Expression {
        let mut parts = Vec::new();
        while let Some(part) = self.repeated() {
            parts.push(part);
        }
        assert!(!parts.is_empty(), "an empty rule before {}", self.glimpse());
        if parts.len() == 1 { parts.remove(0) } else { Expression::Sequence(parts) }
    }

    fn repeated(&mut self) -> Option<Expression> {
        let part = self.part()?;
        let (least, most) = match self.rest.chars().next() {
            Some('?') => (0, Some(1)),
            Some('*') => (0, None),
            Some('+') => (1, None),
            _ => return Some(part),
        };
        self.rest = &self.rest[1..];
        Some(Expression::Repeat(Box::new(part), least, most))
    }

    fn part(&mut self) -> Option<Expression> {
        self.space();
        let first = self.rest.chars().next()?;
        match first {
            '"' | '\'' => {
                let (text, rest) = self.rest[1..].split_once(first).expect("a literal that ends");
                self.rest = rest;
                Some(Expression::Literal(text.to_owned()))
            }
            '[' => Some(self.class()),
            '(' => {
                self.rest = &self.rest[1..];
                let inside = self.choice();
                assert!(self.take(")"), "`)`, not {}", self.glimpse());
                Some(inside)
            }
            _ => {
                // A name with `::=` behind it starts the next rule.
                let before = self.rest;
                let name = self.name()?;
                let after = self.rest;
                if self.take("::=") {
                    self.rest = before;
                    return None;
                }
                self.rest = after;
                Some(Expression::Rule(name))
            }
        }
    }

    fn class(&mut self) -> Expression {
        let (inside, rest) = self.rest[1..].split_once(']').expect("a class that ends");
        self.rest = rest;
        let negated = inside.starts_with('^');
        let mut inside = inside.trim_start_matches('^');
        let mut ranges = Vec::new();
        while let Some(from) = character(&mut inside) {
            let range = inside.strip_prefix('-').filter(|after| !after.is_empty());
            let to = range.and_then(|after| {
                inside = after;
                character(&mut inside)
            });
            ranges.push((from, to.unwrap_or(from)));
        }
        Expression::Class { negated, ranges }
    }

    fn glimpse(&self) -> String {
        self.rest.chars().take(30).collect()
    }
}

/// One character of a class, which may be written as its number: `#xD`.
fn character(inside: &mut &str) -> Option<char> {
    if let Some(number) = inside.strip_prefix("#x") {
        let end = number.find(|c: char| !c.is_ascii_hexdigit()).unwrap_or(number.len());
        let (digits, rest) = number.split_at(end);
        *inside = rest;
        return u32::from_str_radix(digits, 16).ok().and_then(char::from_u32);
    }
    let first = inside.chars().next()?;
    *inside = &inside[first.len_utf8()..];
    Some(first)
}
