//! From text to tree. A file is parsed statement by statement, and a statement whose
//! text was parsed before keeps its tree, so that an edit costs about one statement.

mod basic;
mod expression;
mod failure;
mod quantity;
mod reaction;
mod statement;
mod subject;
mod sum;

use std::collections::HashMap;
use std::hash::{DefaultHasher, Hash, Hasher};
use std::sync::Arc;

pub use expression::{DEEPEST, LONGEST};
pub use statement::KEYWORDS;

use self::basic::Lexeme;
use super::layout::{self, Extent};
use super::number::shortened;
use super::problem::{SyntaxProblem, SyntaxProblemKind};
use super::span::Span;
use super::token::lex;
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
    let mut lexemes = Vec::new();
    for (extent, kept) in extents.iter().zip(kept) {
        if position < extent.start {
            pieces.push(Piece { start: position, end: extent.start, statement: None });
        }
        position = extent.end;
        let parsed = kept.unwrap_or_else(|| {
            lexemes.clear();
            Arc::new(parse(&text[extent.start..extent.end], extent.stray, &mut lexemes))
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
    drop(lexemes);
    Document { text, pieces, sections }
}

/// Reads one statement. `lexemes` is empty; it is the caller's so that its memory is
/// used again.
fn parse<'t>(text: &'t str, stray: bool, lexemes: &mut Vec<Lexeme<'t>>) -> Parsed {
    let mut tokens = Vec::with_capacity(text.len() / 3);
    let mut broken = Vec::new();
    lex(text, &mut tokens, &mut broken);
    lexemes.extend(tokens.iter().filter(|(token, _)| !token.is_trivia()).map(|(token, span)| {
        Lexeme { token: *token, start: span.start, end: span.end, text: &text[span.range()] }
    }));

    let mut problems = Vec::new();
    let statement = match statement::read(lexemes, &mut problems) {
        Some(statement) => {
            // A token that is broken in itself needs no second finding.
            problems.retain(|problem| !hides(&broken, problem));
            problems.append(&mut broken);
            statement
        }
        None => {
            broken.truncate(1);
            let first = lexemes.first().map_or(Span::default(), Lexeme::span);
            if broken.first().is_some_and(|problem| problem.span.start == first.start) {
                problems.append(&mut broken);
            } else {
                let word = lexemes.first().map_or("", |first| first.text);
                let nearest = failure::nearest(word, &KEYWORDS);
                let kind = SyntaxProblemKind::UnknownStatement { word: shortened(word), nearest };
                problems.push(SyntaxProblem { span: first, kind });
            }
            Statement::Broken
        }
    };
    if stray {
        let span = lexemes.first().map_or(Span::default(), Lexeme::span);
        problems.push(SyntaxProblem { span, kind: SyntaxProblemKind::StrayIndent });
    }
    problems.sort_by_key(|problem| problem.span);
    tokens.shrink_to_fit();
    Parsed { text: text.into(), hash: hash(text), tokens, statement, problems }
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
