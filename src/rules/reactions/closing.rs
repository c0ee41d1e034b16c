//! What would close a reaction that loses or gains matter or charge: water, protons or
//! hydroxide on one side, or another charge of one of its species.

use num_rational::Rational64;
use num_traits::{Signed, Zero};

use super::own;
use crate::chemistry::formula::{Atom, Formula, Groups};
use crate::problem::defect::Conserved;
use crate::problem::reaction::{Participant, Reaction};
use crate::problem::resolve::differences;
use crate::rules::context::Context;
use crate::rules::finding::Finding;
use crate::text::span::{Place, Span};
use crate::text::tree;

/// Adds to a finding about a reaction the fixes that would close it.
pub fn offer(mut finding: Finding<Place>, context: &Context) -> Finding<Place> {
    let at = finding.at;
    let Some((_, reaction)) = own::reaction(context, at) else { return finding };
    let Some(differences) = differences(&reaction.participants) else { return finding };
    if let Some((span, added)) = missing(reaction, own::tree(context, at), &differences) {
        let title = match added.strip_prefix(" + ") {
            Some(added) => format!("add `{added}`"),
            None => format!("write `{added}`"),
        };
        finding = finding.with_fix(title, false, Place { span, ..at }, added);
    }
    if let [(Conserved::Charge, left, right)] = differences[..] {
        for (participant, name) in recharged(context, reaction, right - left) {
            let place = Place { span: participant.span, ..at };
            finding = finding.with_fix(format!("write `{name}`"), false, place, name);
        }
    }
    finding
}

type Difference = (Conserved, Rational64, Rational64);

/// What to put where: ` + 2 H2O` at the end of the side that lacks it, or `2 H+` in the
/// place of the `H+` that stands there.
fn missing(
    reaction: &Reaction,
    tree: Option<&tree::Reaction>,
    differences: &[Difference],
) -> Option<(Span, String)> {
    ["H2O", "H+", "OH-"].iter().find_map(|name| {
        let formula = Formula::parse(name, &Groups::default()).ok()?;
        let count = times(&formula, differences)?;
        // More on the left than on the right: the right lacks it.
        let on_left = count.is_negative();
        let last = reaction
            .participants
            .iter()
            .rev()
            .find(|participant| participant.coefficient.is_negative() == on_left)?;
        let here = reaction.participants.iter().find(|participant| {
            participant.formula.name == *name && participant.coefficient.is_negative() == on_left
        });
        let more = |count: Rational64| match count == Rational64::from_integer(1) {
            true => (*name).to_owned(),
            false => format!("{count} {name}"),
        };
        Some(match here {
            // Its coefficient, where one is written, goes with the name.
            Some(here) => (
                tree.map_or(here.span, |tree| whole_member(tree, here.span)),
                more(here.coefficient.abs() + count.abs()),
            ),
            None => {
                let end = last.span.end;
                (Span { start: end, end }, format!(" + {}", more(count.abs())))
            }
        })
    })
}

/// The member of a reaction with a name at this range: coefficient and name.
fn whole_member(tree: &tree::Reaction, name: Span) -> Span {
    let members = || tree.left.iter().chain(&tree.right);
    members().find(|member| member.name.span == name).map_or(name, |member| member.span)
}

/// How many of a formula make up the whole difference, left less right.
fn times(formula: &Formula, differences: &[Difference]) -> Option<Rational64> {
    let held = |what: &Conserved| -> Rational64 {
        match what {
            Conserved::Charge => Rational64::from_integer(i64::from(formula.charge)),
            Conserved::Element(symbol) => formula
                .conserved()
                .find(|(atom, _)| matches!(atom, Atom::Element(e) if e.symbol() == symbol))
                .map_or(Rational64::zero(), |(_, count)| count),
            Conserved::Group(_) => Rational64::zero(),
        }
    };
    let kinds = formula.atoms.len() + usize::from(formula.charge != 0);
    let mut count = None;
    for (what, left, right) in differences {
        let per = held(what);
        if per.is_zero() || count.is_some_and(|count| count != (left - right) / per) {
            return None;
        }
        count = Some((left - right) / per);
    }
    count.filter(|_| differences.len() == kinds)
}

/// Species with another charge, known to the problem, that would close the charge;
/// `excess` is what the right has more than the left.
fn recharged<'a>(
    context: &Context,
    reaction: &'a Reaction,
    excess: Rational64,
) -> Vec<(&'a Participant, String)> {
    let mut offers = Vec::new();
    for participant in &reaction.participants {
        let formula = &participant.formula;
        let charge =
            Rational64::from_integer(i64::from(formula.charge)) - excess / participant.coefficient;
        let known = context.problem.scope.species.iter().find(|other| {
            charge == Rational64::from_integer(i64::from(other.charge))
                && other.atoms == formula.atoms
                && other.phase == formula.phase
        });
        offers.extend(known.map(|known| (participant, known.name.clone())));
    }
    offers
}
