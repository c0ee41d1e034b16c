//! Whether a text is a sentence of a grammar: every way of reading it is tried, and what
//! a rule can cover from a place is found once.

use std::collections::{BTreeSet, HashMap};

use super::{Expression, Grammar, is_lexical};

type Ends = BTreeSet<usize>;

pub struct Recogniser<'g, 't> {
    grammar: &'g Grammar,
    text: &'t str,
    known: HashMap<(&'g str, usize), Ends>,
}

/// Whether all of a text is a sentence of the rule.
pub fn is_sentence(grammar: &Grammar, rule: &str, text: &str) -> bool {
    let mut recogniser = Recogniser { grammar, text, known: HashMap::new() };
    let (name, _) = grammar.rules.get_key_value(rule).expect("a rule of the grammar");
    let ends = recogniser.rule(name, 0);
    ends.into_iter().any(|end| recogniser.after_space(end) == text.len())
}

impl<'g> Recogniser<'g, '_> {
    /// Where a rule can end that starts at a place.
    fn rule(&mut self, name: &'g str, at: usize) -> Ends {
        if let Some(known) = self.known.get(&(name, at)) {
            return known.clone();
        }
        let ends = self.ends(self.grammar.rule(name), at, is_lexical(name));
        self.known.insert((name, at), ends.clone());
        ends
    }

    fn ends(&mut self, expression: &'g Expression, at: usize, lexical: bool) -> Ends {
        match expression {
            Expression::Literal(text) => {
                let at = if lexical { at } else { self.after_space(at) };
                let matches = self.text[at..].starts_with(text.as_str());
                let end = at + text.len();
                let matches = matches && (lexical || self.is_whole_word(text, end));
                matches.then_some(end).into_iter().collect()
            }
            Expression::Class { negated, ranges } => {
                let Some(one) = self.text[at..].chars().next() else { return Ends::new() };
                let inside = ranges.iter().any(|(from, to)| (*from..=*to).contains(&one));
                (inside != *negated).then_some(at + one.len_utf8()).into_iter().collect()
            }
            // A rule in capitals may begin with the space before it, or after that.
            Expression::Rule(name) if !lexical && is_lexical(name) => {
                let after = self.after_space(at);
                let mut ends = self.rule(name, at);
                ends.extend(self.rule(name, after));
                ends
            }
            Expression::Rule(name) => self.rule(name, at),
            Expression::Sequence(parts) => {
                let mut reached = Ends::from([at]);
                for part in parts {
                    reached = reached.iter().flat_map(|&at| self.ends(part, at, lexical)).collect();
                }
                reached
            }
            Expression::Choice(choices) => {
                choices.iter().flat_map(|choice| self.ends(choice, at, lexical)).collect()
            }
            Expression::Repeat(part, least, most) => {
                let mut all = Ends::new();
                let mut reached = Ends::from([at]);
                for times in 0.. {
                    if times >= *least {
                        let before = all.len();
                        all.extend(&reached);
                        if all.len() == before && times > *least {
                            break;
                        }
                    }
                    if reached.is_empty() || Some(times) == *most {
                        break;
                    }
                    reached = reached.iter().flat_map(|&at| self.ends(part, at, lexical)).collect();
                }
                all
            }
        }
    }

    /// A keyword does not end inside a longer word.
    fn is_whole_word(&self, text: &str, end: usize) -> bool {
        let is_word = |c: char| c.is_alphanumeric() || c == '_';
        !(text.ends_with(is_word) && self.text[end..].starts_with(is_word))
    }

    /// Past white space and comments.
    fn after_space(&self, mut at: usize) -> usize {
        loop {
            let rest = &self.text[at..];
            at += rest.len() - rest.trim_start().len();
            if !self.text[at..].starts_with('#') {
                return at;
            }
            at += self.text[at..].find(['\n', '\r']).unwrap_or(self.text.len() - at);
        }
    }
}
