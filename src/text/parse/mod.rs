//! From text to tree. A file is parsed statement by statement, and a statement whose
//! text was parsed before keeps its tree, so that an edit costs about one statement.

mod basic;
mod expression;
mod failure;
mod quantity;
mod reaction;
mod statement;
mod stock;
mod subject;
mod sum;

use std::collections::HashMap;
use std::hash::{DefaultHasher, Hash, Hasher};
use std::sync::Arc;

pub use expression::{DEEPEST, LONGEST};
pub use reaction::CLAUSES;
pub use statement::KEYWORDS;

use self::basic::Lexeme;
use super::layout::{self, Extent};
use super::number::shortened;
use super::problem::{SyntaxProblem, SyntaxProblemKind};
use super::span::Span;
use super::token::{Token, lex};
use super::tree::{Document, Parsed, Piece, Placed, Section, Statement};

impl Document {
    /// Reads a file. Whatever the text is, there is a tree, with the problems on its
    /// statements.
    pub fn parse(text: impl Into<Arc<str>>) -> Document {
        let text = text.into();
        let extents = layout::statements(&text);
        let kept = extents.iter().map(|_| None).collect();
        build(text, &extents, kept)
    }

    /// Reads a file again after an edit: the trees of statements whose text `previous`
    /// holds are shared with it.
    pub fn parse_with(text: impl Into<Arc<str>>, previous: &Document) -> Document {
        let text = text.into();
        let extents = layout::statements(&text);
        let kept = keep(&text, &extents, previous);
        build(text, &extents, kept)
    }

    /// The statements in the order written, with where each starts.
    pub fn statements(&self) -> impl Iterator<Item = &Placed> {
        self.pieces.iter().filter_map(|piece| {
            let (section, statement) = piece.statement?;
            self.sections.get(section as usize)?.statements.get(statement as usize)
        })
    }
}

/// For each statement its earlier tree, where there is one: those before and after the
/// edit by their order, those between by their text.
fn keep(text: &str, extents: &[Extent], previous: &Document) -> Vec<Option<Arc<Parsed>>> {
    let old: Vec<&Arc<Parsed>> = previous.statements().map(|placed| &placed.parsed).collect();
    let same = |extent: &Extent, parsed: &Parsed| {
        *parsed.text == text[extent.start..extent.end] && is_stray(parsed) == extent.stray
    };
    let mut kept: Vec<Option<Arc<Parsed>>> = Vec::with_capacity(extents.len());
    for (extent, parsed) in extents.iter().zip(&old) {
        if !same(extent, parsed) {
            break;
        }
        kept.push(Some(Arc::clone(parsed)));
    }
    let before = kept.len();
    let after = extents[before..]
        .iter()
        .rev()
        .zip(old[before..].iter().rev())
        .take_while(|(extent, parsed)| same(extent, parsed))
        .count();

    let moved: HashMap<(&str, bool), &Arc<Parsed>> = old[before..old.len() - after]
        .iter()
        .map(|parsed| ((&*parsed.text, is_stray(parsed)), *parsed))
        .collect();
    kept.extend(extents[before..extents.len() - after].iter().map(|extent| {
        moved.get(&(&text[extent.start..extent.end], extent.stray)).map(|parsed| Arc::clone(parsed))
    }));
    kept.extend(old[old.len() - after..].iter().map(|parsed| Some(Arc::clone(parsed))));
    kept
}

fn is_stray(parsed: &Parsed) -> bool {
    parsed.problems.iter().any(|problem| problem.kind == SyntaxProblemKind::StrayIndent)
}

fn build(text: Arc<str>, extents: &[Extent], kept: Vec<Option<Arc<Parsed>>>) -> Document {
    let last_section = extents.iter().map(|extent| extent.section).max().unwrap_or(0);
    let mut sections = vec![Section::default(); last_section as usize + 1];
    let mut pieces = Vec::with_capacity(2 * extents.len() + 1);
    let mut position = 0;
    let mut scratch = Scratch::default();
    for (extent, kept) in extents.iter().zip(kept) {
        if position < extent.start {
            pieces.push(Piece { start: position, end: extent.start, statement: None });
        }
        position = extent.end;
        let parsed = kept.unwrap_or_else(|| {
            Arc::new(scratch.parse(&text[extent.start..extent.end], extent.stray))
        });
        if let Some(Section { statements }) = sections.get_mut(extent.section as usize) {
            let index = Some((extent.section, statements.len() as u32));
            pieces.push(Piece { start: extent.start, end: extent.end, statement: index });
            statements.push(Placed { start: extent.start, parsed });
        }
    }
    if position < text.len() {
        pieces.push(Piece { start: position, end: text.len(), statement: None });
    }
    drop(scratch);
    Document { text, pieces, sections }
}

/// Memory that every statement uses again.
#[derive(Default)]
struct Scratch<'t> {
    tokens: Vec<(Token, Span)>,
    lexemes: Vec<Lexeme<'t>>,
}

impl<'t> Scratch<'t> {
    /// Reads one statement.
    fn parse(&mut self, text: &'t str, stray: bool) -> Parsed {
        let Scratch { tokens, lexemes } = self;
        tokens.clear();
        lexemes.clear();
        let mut broken = Vec::new();
        lex(text, tokens, &mut broken);
        for (token, span) in tokens.iter().filter(|(token, _)| !token.is_trivia()) {
            let text = &text[span.range()];
            lexemes.push(Lexeme { token: *token, start: span.start, end: span.end, text });
        }

        let mut problems = Vec::new();
        let statement = match statement::read(lexemes, &mut problems) {
            Some(statement) => {
                // A token that is broken in itself needs no second finding.
                problems.retain(|problem| !hides(&broken, problem));
                problems.append(&mut broken);
                statement
            }
            None => {
                problems.push(no_statement(lexemes.first(), broken));
                Statement::Broken
            }
        };
        if stray {
            let span = lexemes.first().map_or(Span::default(), Lexeme::span);
            problems.push(SyntaxProblem { span, kind: SyntaxProblemKind::StrayIndent });
        }
        problems.sort_by_key(|problem| problem.span);
        Parsed {
            text: text.into(),
            hash: hash(text),
            tokens: tokens.as_slice().to_vec(),
            statement,
            problems,
        }
    }
}

/// Why a text whose first token is `first` is no statement at all.
fn no_statement(first: Option<&Lexeme<'_>>, broken: Vec<SyntaxProblem>) -> SyntaxProblem {
    let (span, word) = first.map_or((Span::default(), ""), |first| (first.span(), first.text));
    // A first token that is broken in itself says more.
    match broken.into_iter().next() {
        Some(problem) if problem.span.start == span.start => problem,
        _ => {
            let nearest = failure::nearest(word, &KEYWORDS);
            let kind = SyntaxProblemKind::UnknownStatement { word: shortened(word), nearest };
            SyntaxProblem { span, kind }
        }
    }
}

fn hides(broken: &[SyntaxProblem], problem: &SyntaxProblem) -> bool {
    matches!(problem.kind, SyntaxProblemKind::Unexpected { .. })
        && broken.iter().any(|broken| broken.span.start == problem.span.start)
}

fn hash(text: &str) -> u64 {
    let mut hasher = DefaultHasher::new();
    text.hash(&mut hasher);
    hasher.finish()
}
