//! A file's own constants against those that it uses for the same equilibria.

use std::collections::HashMap;
use std::sync::Arc;

use num_rational::Rational64;
use num_traits::Zero;

use super::defect::DefectKind;
use super::reaction::{LogK, Participant, Reaction};
use super::resolve::Resolver;
use crate::text::span::Place;

/// Own constants against those of used files and sets for the same equilibrium.
pub fn compare_with_used(own: &[Arc<Reaction>], used: &[Arc<Reaction>], resolver: &mut Resolver) {
    if own.is_empty() {
        return;
    }
    let by_key: HashMap<_, _> =
        used.iter().map(|reaction| (reaction.key.as_str(), reaction)).collect();
    for reaction in own {
        let Some(other) = by_key.get(reaction.key.as_str()) else { continue };
        let Some(factor) = proportion(&reaction.participants, &other.participants) else {
            continue;
        };
        let own_kelvin = match reaction.constant.as_ref().map(|constant| &constant.value) {
            Some(LogK::At { kelvin, .. }) => *kelvin,
            _ => super::reaction::STANDARD,
        };
        if let (Some((own_log_k, _)), Some((set, None)), Some(at)) =
            (reaction.log_k(own_kelvin), other.log_k(own_kelvin), reaction.origin.own())
            && let Some(constant) = &reaction.constant
        {
            let set = set * factor;
            if (own_log_k - set).abs() > 0.05 {
                let at = Place { span: constant.span, ..at };
                let origin = other.origin.words();
                resolver.report(at, DefectKind::DiffersFromSet { own: own_log_k, set, origin });
            }
        }
    }
}

/// The factor that makes the second reaction the first; none where there is none.
fn proportion(one: &[Participant], two: &[Participant]) -> Option<f64> {
    let of = |participants: &[Participant], name: &str| -> Rational64 {
        participants.iter().filter(|p| p.formula.name == name).map(|p| p.coefficient).sum()
    };
    let mut factor = None;
    for participant in one {
        let name = participant.formula.name.as_str();
        let (a, b) = (of(one, name), of(two, name));
        if name == "H2O" || a.is_zero() {
            continue;
        }
        if b.is_zero() || factor.is_some_and(|f| f != a / b) {
            return None;
        }
        factor = Some(a / b);
    }
    factor.map(|f| *f.numer() as f64 / *f.denom() as f64)
}
