//! The statements in force: the base as varied by one case.

use std::collections::HashMap;

use super::defect::{Defect, DefectKind};
use crate::chemistry::formula::canonical;
use crate::text::span::{Part, Place, Span};
use crate::text::tree::{BalanceKind, Over, Parsed, Section, Statement, Subject, Without};

/// A statement in force, and where it stands.
#[derive(Clone, Copy)]
pub struct Written<'a> {
    pub part: Part,
    pub index: u32,
    pub parsed: &'a Parsed,
}

impl<'a> Written<'a> {
    pub fn statement(&self) -> &'a Statement {
        &self.parsed.statement
    }

    pub fn place(&self, span: Span) -> Place {
        Place { section: self.part, statement: self.index, span }
    }

    /// The statement's words, without the white space and comments after them.
    pub fn whole(&self) -> Place {
        let text = self.parsed.text.trim_end();
        self.place(Span::new(0, first_line_end(text)))
    }
}

fn first_line_end(text: &str) -> usize {
    let line = text.lines().next().unwrap_or_default();
    let code = line.split('#').next().unwrap_or_default();
    if code.contains('"') { line.trim_end().len() } else { code.trim_end().len() }
}

/// What a single-valued statement speaks of: a case's replaces the base's of the same key.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Key {
    Title,
    Temperature,
    Activity,
    IonicStrength,
    Total(String),
    Add(String),
    Hold(String),
    /// Species of both sides, sorted: the same equilibrium whichever way it is written.
    Reaction(Vec<String>),
    Balance(String),
    Expect(String),
    /// What is said of a solid: it may form, or is in excess.
    Solid(String),
    Group(String),
    Curve(String),
    Blend,
}

pub fn key(statement: &Statement) -> Option<Key> {
    Some(match statement {
        Statement::Problem { .. } => Key::Title,
        Statement::Temperature { .. } => Key::Temperature,
        Statement::Activity { .. } => Key::Activity,
        Statement::IonicStrength { .. } => Key::IonicStrength,
        Statement::Total { component, .. } => Key::Total(canonical(component)),
        Statement::Add { reagent, .. } => Key::Add(canonical(reagent)),
        Statement::Hold { subject, .. } => Key::Hold(subject_key(subject)),
        Statement::Balance { kind, .. } => Key::Balance(balance_key(kind)),
        Statement::Expect { subject, .. } => Key::Expect(subject_key(subject)),
        Statement::Precipitate { solid } | Statement::Saturate { solid } => {
            Key::Solid(canonical(solid))
        }
        Statement::Group { symbol, .. } => Key::Group(symbol.value.clone()),
        Statement::Curve { over, .. } => Key::Curve(over_words(&over.value)),
        Statement::Blend { .. } => Key::Blend,
        Statement::Reaction(reaction) => {
            let mut names: Vec<_> =
                reaction.left.iter().chain(&reaction.right).map(|m| canonical(&m.name)).collect();
            names.retain(|name| name != "H2O");
            names.sort();
            Key::Reaction(names)
        }
        Statement::Use(_)
        | Statement::Component { .. }
        | Statement::Case { .. }
        | Statement::Without(_)
        | Statement::Broken => return None,
    })
}

/// The subject in canonical words, such as `[NH3]` or `saturation index CaCO3(s)`.
pub fn subject_key(subject: &Subject) -> String {
    match subject {
        Subject::Ph => "pH".into(),
        Subject::Poh => "pOH".into(),
        Subject::Pe => "pe".into(),
        Subject::Potential => "potential".into(),
        Subject::Concentration(name) => format!("[{}]", canonical(name)),
        Subject::Activity(name) => format!("{{{}}}", canonical(name)),
        Subject::Pressure(name) => canonical(name),
        Subject::Total(name) => format!("total {}", canonical(name)),
        Subject::Fraction(name) => format!("fraction {}", canonical(name)),
        Subject::Alkalinity => "alkalinity".into(),
        Subject::Acidity => "acidity".into(),
        Subject::Hardness => "hardness".into(),
        Subject::CarbonateHardness => "carbonate hardness".into(),
        Subject::IonicStrength => "ionic strength".into(),
        Subject::BufferCapacity => "buffer capacity".into(),
        Subject::SaturationIndex(name) => format!("saturation index {}", canonical(name)),
        Subject::Precipitated(name) => format!("precipitated {}", canonical(name)),
        Subject::Dose(name) => format!("dose {}", canonical(name)),
        Subject::ChargeImbalance => "charge imbalance".into(),
    }
}

pub fn balance_key(kind: &BalanceKind) -> String {
    match kind {
        BalanceKind::Charge => "charge".into(),
        BalanceKind::Protons => "protons".into(),
        BalanceKind::Component(name) => canonical(name),
    }
}

/// What a curve is over, in canonical words: `pH`, `NaOH`, `total NH3`, `temperature`.
pub fn over_words(over: &Over) -> String {
    match over {
        Over::Ph => "pH".into(),
        Over::Reagent(name) => canonical(name),
        Over::Total(name) => format!("total {}", canonical(name)),
        Over::Temperature => "temperature".into(),
        Over::Blend(file) => format!("blend \"{}\"", file.value),
    }
}

fn removed_key(without: &Without) -> Key {
    match without {
        Without::Hold(subject) => Key::Hold(subject_key(subject)),
        Without::Expect(subject) => Key::Expect(subject_key(subject)),
        Without::Total(name) => Key::Total(canonical(name)),
        Without::Add(name) => Key::Add(canonical(name)),
        Without::Balance(kind) => Key::Balance(balance_key(kind)),
        Without::Precipitate(name) | Without::Saturate(name) => Key::Solid(canonical(name)),
        Without::IonicStrength => Key::IonicStrength,
        Without::Blend => Key::Blend,
    }
}

/// Whether several statements of this key may stand in one section and all count.
fn adds_up(key: &Key) -> bool {
    matches!(key, Key::Add(_) | Key::Expect(_))
}

/// The statements that count in a base or a case.
pub struct InForce<'a> {
    pub statements: Vec<Written<'a>>,
    /// Statements that repeat a single-valued subject in their section, and do not count.
    pub left_out: Vec<Written<'a>>,
    pub defects: Vec<Defect>,
    /// Whether a case brings in or takes away a total, a reagent, a solid or a held value, where it
    /// does not only change how much of it there is.
    pub other_sources: bool,
}

/// Merges the base with a case. Statements of one section that repeat a single-valued
/// subject are a defect; the later one is left out.
pub fn in_force<'a>(base: &'a Section, case: Option<&'a Section>) -> InForce<'a> {
    let mut base = section(base, Part::Base);
    let Some(case) = case else {
        let mut found = base.into_force();
        // The base has nothing before it to take away from.
        for written in &found.statements {
            if let Statement::Without(without) = written.statement() {
                let at = written.place(without.span);
                found.defects.push(Defect { at, kind: DefectKind::NothingToRemove });
            }
        }
        return found;
    };
    let varied = section(case, Part::Case);
    let mut replaced: HashMap<Key, bool> = HashMap::new();
    for (key, written) in &varied.kept {
        if let Some(key) = key {
            replaced.insert(key.clone(), false);
        }
        if let Statement::Without(without) = written.statement() {
            replaced.insert(removed_key(&without.value), false);
        }
    }
    let mut from_nothing = false;
    base.kept.retain(|(key, written)| match key.as_ref().and_then(|key| replaced.get_mut(key)) {
        Some(met) => {
            *met = true;
            from_nothing |= is_nothing(written.statement());
            false
        }
        None => true,
    });
    base.repeated.retain(|(key, _, _)| !replaced.contains_key(key));
    let mut found = base.into_force();
    for (_, written) in &varied.kept {
        if let Statement::Without(without) = written.statement()
            && replaced.get(&removed_key(&without.value)) == Some(&false)
        {
            let at = written.place(without.span);
            found.defects.push(Defect { at, kind: DefectKind::NothingToRemove });
        }
    }
    let is_source =
        |key: &Key| matches!(key, Key::Total(_) | Key::Add(_) | Key::Hold(_) | Key::Blend);
    // Whether a solid forms or is in excess is another source in either direction.
    found.other_sources = from_nothing
        || replaced.keys().any(|key| matches!(key, Key::Solid(_)))
        // Another blend may bring other components.
        || replaced.iter().any(|(key, met)| is_source(key) && (!met || *key == Key::Blend))
        || varied.kept.iter().any(|(_, written)| {
            matches!(written.statement(), Statement::Without(_)) || is_nothing(written.statement())
        });
    let varied = varied.into_force();
    found.statements.extend(varied.statements);
    found.left_out.extend(varied.left_out);
    found.defects.extend(varied.defects);
    found
}

/// Whether it says that there is none of something.
fn is_nothing(statement: &Statement) -> bool {
    match statement {
        Statement::Total { value, .. } => value.number.value == 0.0,
        Statement::Add { amount, .. } => amount.number.value == 0.0,
        _ => false,
    }
}

/// The statements of one section, by what they speak of.
struct Sorted<'a> {
    kept: Vec<(Option<Key>, Written<'a>)>,
    repeated: Vec<(Key, Written<'a>, Defect)>,
}

impl<'a> Sorted<'a> {
    fn into_force(self) -> InForce<'a> {
        let statements = self.kept.into_iter().map(|(_, written)| written).collect();
        let (left_out, defects) =
            self.repeated.into_iter().map(|(_, written, defect)| (written, defect)).unzip();
        InForce { statements, left_out, defects, other_sources: false }
    }
}

fn section(section: &Section, part: Part) -> Sorted<'_> {
    let mut first: HashMap<Key, Place> = HashMap::new();
    let mut kept = Vec::with_capacity(section.statements.len());
    let mut repetitions = Vec::new();
    for (index, placed) in section.statements.iter().enumerate() {
        let written = Written { part, index: index as u32, parsed: &placed.parsed };
        let key = key(written.statement());
        if let Some(key) = key.as_ref().filter(|key| !adds_up(key)) {
            let at = match written.statement() {
                Statement::Reaction(reaction) => written.place(reaction.equation),
                _ => written.whole(),
            };
            if let Some(other) = first.get(key) {
                let defect = Defect { at, kind: repeated(key, *other) };
                repetitions.push((key.clone(), written, defect));
                continue;
            }
            first.insert(key.clone(), at);
        }
        kept.push((key, written));
    }
    Sorted { kept, repeated: repetitions }
}

fn repeated(key: &Key, other: Place) -> DefectKind {
    match key {
        Key::Total(name) => DefectKind::TotalTwice { name: name.clone(), other },
        Key::Hold(subject) => DefectKind::HeldTwice { subject: subject.clone(), other },
        Key::Reaction(_) => DefectKind::ReactionRepeated { other },
        Key::Solid(name) => DefectKind::SolidTwice { name: name.clone(), other },
        Key::Group(symbol) => DefectKind::GroupRepeated { symbol: symbol.clone(), other },
        _ => DefectKind::StatementRepeated { other },
    }
}
