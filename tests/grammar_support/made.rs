//! Sentences made of a grammar, at random but the same in every run.

use std::collections::{BTreeMap, BTreeSet};

use super::{Expression, Grammar, is_lexical};

pub struct Maker<'g> {
    grammar: &'g Grammar,
    /// How deep the shallowest sentence of a rule is.
    heights: BTreeMap<&'g str, usize>,
    state: u64,
    /// The rules that took part in any sentence.
    pub seen: BTreeSet<&'g str>,
}

/// Deeper than this, the shortest way is taken.
const DEEP: usize = 8;
/// For the height of a rule before it is known.
const UNKNOWN: usize = 1000;
/// What a class of all but some characters is tried with.
const ANY: &[char] = &['a', 'Z', ' ', '9', ',', '.', '#', '=', '<', '(', '°', 'é', '^', '%', '\''];

impl<'g> Maker<'g> {
    pub fn new(grammar: &'g Grammar) -> Maker<'g> {
        let mut heights: BTreeMap<&str, usize> =
            grammar.rules.keys().map(|name| (name.as_str(), UNKNOWN)).collect();
        // Each round settles the rules whose shortest sentence is one deeper.
        for _ in 0..grammar.rules.len() {
            for (name, expression) in &grammar.rules {
                let height = height(expression, &heights);
                heights.insert(name, height);
            }
        }
        let endless: Vec<_> = heights.iter().filter(|(_, height)| **height >= UNKNOWN).collect();
        assert!(endless.is_empty(), "rules with no sentence that ends: {endless:?}");
        Maker { grammar, heights, state: 0x9E37_79B9_7F4A_7C15, seen: BTreeSet::new() }
    }

    /// A sentence of a rule, with some white space or other between its words.
    pub fn sentence(&mut self, rule: &str) -> String {
        let (name, expression) =
            self.grammar.rules.get_key_value(rule).unwrap_or_else(|| panic!("no rule {rule}"));
        self.seen.insert(name);
        let mut words = Vec::new();
        self.words(expression, 0, &mut words);
        let mut text = String::new();
        let mut last = "[".to_owned();
        for word in words {
            let may_touch =
                ["[", "{"].contains(&last.as_str()) || ["]", "}", ","].contains(&word.as_str());
            if !(text.is_empty() || may_touch && self.below(2) == 0) {
                text.push_str(self.space());
            }
            text.push_str(&word);
            last = word;
        }
        text
    }

    /// Only layout can say which spaces may stand inside a statement.
    fn space(&mut self) -> &'static str {
        match self.below(12) {
            0 => "\n    ",
            1 => "  ",
            2 => " # why, in \"words\"\n\n\t",
            3 => "\r\n  # alone\r\n      ",
            _ => " ",
        }
    }

    fn words(&mut self, expression: &'g Expression, depth: usize, words: &mut Vec<String>) {
        match expression {
            Expression::Rule(name) if is_lexical(name) => {
                let mut word = String::new();
                self.characters(expression, depth, &mut word);
                words.push(word);
            }
            Expression::Rule(name) => {
                self.seen.insert(name);
                self.words(self.grammar.rule(name), depth + 1, words);
            }
            Expression::Literal(text) => words.push(text.clone()),
            Expression::Class { .. } => panic!("a class outside a rule in capitals"),
            Expression::Sequence(parts) => {
                parts.iter().for_each(|part| self.words(part, depth, words));
            }
            Expression::Choice(choices) => {
                let choice = self.choose(choices, depth);
                self.words(choice, depth, words);
            }
            Expression::Repeat(part, least, most) => {
                for _ in 0..self.times(*least, *most, depth) {
                    self.words(part, depth, words);
                }
            }
        }
    }

    fn characters(&mut self, expression: &'g Expression, depth: usize, text: &mut String) {
        match expression {
            Expression::Rule(name) if name == "SPACE" => text.push_str(self.space()),
            Expression::Rule(name) => {
                assert!(is_lexical(name), "{name} inside a rule in capitals");
                self.seen.insert(name);
                self.characters(self.grammar.rule(name), depth + 1, text);
            }
            Expression::Literal(literal) => text.push_str(literal),
            Expression::Class { negated: false, ranges } => {
                let (from, to) = ranges[self.below(ranges.len())];
                let one = from as u32 + self.below((to as u32 - from as u32 + 1) as usize) as u32;
                text.extend(char::from_u32(one));
            }
            Expression::Class { negated: true, ranges } => {
                let one = ANY[self.below(ANY.len())];
                if !ranges.iter().any(|(from, to)| (*from..=*to).contains(&one)) {
                    text.push(one);
                }
            }
            Expression::Sequence(parts) => {
                parts.iter().for_each(|part| self.characters(part, depth, text));
            }
            Expression::Choice(choices) => {
                let choice = self.choose(choices, depth);
                self.characters(choice, depth, text);
            }
            Expression::Repeat(part, least, most) => {
                for _ in 0..self.times(*least, *most, depth) {
                    self.characters(part, depth, text);
                }
            }
        }
    }

    fn choose(&mut self, choices: &'g [Expression], depth: usize) -> &'g Expression {
        if depth > DEEP {
            let shortest = choices.iter().min_by_key(|choice| height(choice, &self.heights));
            return shortest.expect("a choice");
        }
        &choices[self.below(choices.len())]
    }

    fn times(&mut self, least: usize, most: Option<usize>, depth: usize) -> usize {
        let more = if depth > DEEP { 1 } else { 1 + self.below(3).min(2) };
        (least + self.below(more)).min(most.unwrap_or(usize::MAX))
    }

    /// A whole number below `limit` (xorshift).
    fn below(&mut self, limit: usize) -> usize {
        self.state ^= self.state << 13;
        self.state ^= self.state >> 7;
        self.state ^= self.state << 17;
        (self.state % limit as u64) as usize
    }
}

fn height(expression: &Expression, heights: &BTreeMap<&str, usize>) -> usize {
    let of = |part| height(part, heights);
    match expression {
        Expression::Literal(_) | Expression::Class { .. } => 0,
        Expression::Rule(name) => heights.get(name.as_str()).map_or(UNKNOWN, |height| height + 1),
        Expression::Sequence(parts) => parts.iter().map(of).max().unwrap_or(0),
        Expression::Choice(choices) => choices.iter().map(of).min().unwrap_or(0),
        Expression::Repeat(_, 0, _) => 0,
        Expression::Repeat(part, _, _) => of(part),
    }
    .min(UNKNOWN)
}
