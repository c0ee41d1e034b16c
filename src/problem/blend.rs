//! Waters of other files, blended: what each brings over this file's components. The waters
//! themselves are solved elsewhere and handed in.

use std::collections::HashMap;
use std::path::PathBuf;
use std::sync::{Arc, Mutex};

use num_traits::ToPrimitive;

use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::Written;
use super::scope::PROTON;
use crate::chemistry::quantity::Scale;
use crate::chemistry::unit::{Dimension, Unit};
use crate::text::span::Place;
use crate::text::tree::{BlendPart, Statement};

/// A water as its own file solves it.
#[derive(Debug)]
pub struct BlendedWater {
    pub scale: Scale,
    pub kelvin: f64,
    /// What is dissolved in it. What its gases gave or took is in it, a solid that formed is
    /// not: it stays behind.
    pub matter: Vec<Matter>,
    /// Cations less anions, eq per litre or kilogram: what a measured pH leaves open. It
    /// mixes as all else does, so that the alkalinity is kept.
    pub charge: f64,
    pub ph: f64,
    /// eq per litre or kilogram.
    pub alkalinity: f64,
    /// Of this state of it; another after each change.
    pub number: u64,
    /// Files that it rests on, its own first.
    pub files: Vec<PathBuf>,
}

#[derive(Clone, Debug, PartialEq)]
pub struct Matter {
    /// The form that it is counted in, then others that differ from it in protons and water
    /// alone.
    pub names: Vec<String>,
    /// mol per litre or kilogram.
    pub amount: f64,
}

/// A water, or why there is none, in the words of a defect of the file that asks.
pub type WaterResult = Result<Arc<BlendedWater>, DefectKind>;

/// The waters of a blend's parts, each with the part's place.
pub type Waters = Vec<(Place, WaterResult)>;

/// A file, and its case where it is not its base.
pub type WaterOf = (PathBuf, Option<String>);

/// Waters kept between edits: each with what it rested on.
#[derive(Debug, Default)]
pub struct Kept(Mutex<HashMap<WaterOf, (u64, WaterResult)>>);

impl Kept {
    /// What was found for this state of a file.
    pub fn get(&self, path: &WaterOf, state: u64) -> Option<WaterResult> {
        let kept = self.0.lock().unwrap_or_else(|e| e.into_inner());
        kept.get(path).filter(|(of, _)| *of == state).map(|(_, water)| water.clone())
    }

    pub fn keep(&self, path: WaterOf, state: u64, water: WaterResult) {
        let mut kept = self.0.lock().unwrap_or_else(|e| e.into_inner());
        kept.insert(path, (state, water));
    }
}

/// A blend over the components of a problem.
#[derive(Clone, Debug)]
pub struct Blend {
    /// The statement.
    pub at: Place,
    pub portions: Vec<Portion>,
}

#[derive(Clone, Debug)]
pub struct Portion {
    pub at: Place,
    /// The file as it is written, and its case.
    pub file: String,
    pub case: Option<String>,
    /// Of one.
    pub share: f64,
    pub water: Arc<BlendedWater>,
    /// mol of each component in a litre or kilogram of it; none of those that it does not
    /// list.
    pub brings: Vec<Option<f64>>,
    /// Cations less anions on the scale of this problem, eq per litre or kilogram.
    pub charge: f64,
}

impl Blend {
    /// mol of a component per litre or kilogram; none where no water lists it.
    pub fn total(&self, component: usize) -> Option<f64> {
        let of = |portion: &Portion| Some(portion.share * portion.brings.get(component)?.as_ref()?);
        self.portions.iter().filter_map(of).reduce(|a, b| a + b)
    }

    /// Cations less anions, eq per litre or kilogram.
    pub fn charge(&self) -> f64 {
        self.portions.iter().map(|portion| portion.share * portion.charge).sum()
    }

    /// Kelvin, as waters of one heat capacity mix.
    pub fn kelvin(&self) -> f64 {
        self.portions.iter().map(|portion| portion.share * portion.water.kelvin).sum()
    }

    /// The same blend with this share, of one, of the part from a file; the others keep to
    /// their proportions. None where no part, or every part, is from that file, or where the
    /// others have no proportions.
    pub fn with_share(&self, file: &str, share: f64) -> Option<Blend> {
        let of = |own: bool| -> f64 {
            let portions = self.portions.iter().filter(|portion| (portion.file == file) == own);
            portions.map(|portion| portion.share).sum()
        };
        let (own, others) = (of(true), of(false));
        let count = self.portions.iter().filter(|portion| portion.file == file).count();
        if count == 0 || others <= 0.0 {
            return None;
        }
        let mut blend = self.clone();
        for portion in &mut blend.portions {
            portion.share = match portion.file == file {
                true if own > 0.0 => portion.share * share / own,
                true => share / count as f64,
                false => portion.share * (1.0 - share) / others,
            };
        }
        Some(blend)
    }
}

/// How far a sum of percentages may lie from 100: rounding, and no written digit.
const ROUNDING: f64 = 1e-9;

/// Reads the shares of the blend in force, and puts each to its water.
pub fn read(case: &mut CaseResolver, waters: &Waters) -> Option<Blend> {
    let found = case.statements.iter().find_map(|written| match written.statement() {
        Statement::Blend { parts } => Some((*written, parts)),
        _ => None,
    });
    let (written, parts) = found?;
    let shares = shares(case, &written, parts);
    let mut portions = Vec::with_capacity(parts.len());
    for (index, part) in parts.iter().enumerate() {
        let water = match waters.get(index) {
            Some((_, Ok(water))) => water.clone(),
            Some((at, Err(kind))) => {
                case.resolver.report(*at, kind.clone());
                continue;
            }
            None => continue,
        };
        portions.push(Portion {
            at: written.place(part.span),
            file: part.file.value.clone(),
            case: part.case.as_ref().map(|case| case.value.clone()),
            share: shares.as_ref().map_or(0.0, |shares| shares[index]),
            water,
            brings: Vec::new(),
            charge: 0.0,
        });
    }
    if shares.is_none() || portions.len() != parts.len() {
        case.all_amounts_read = false;
        return None;
    }
    Some(Blend { at: written.whole(), portions })
}

/// The shares, of one: percentages that come to 100, or numbers of parts.
fn shares(case: &mut CaseResolver, written: &Written, parts: &[BlendPart]) -> Option<Vec<f64>> {
    let mut shares = Vec::with_capacity(parts.len());
    for part in parts {
        case.number(written, &part.share, Expected::Share)?;
        case.resolver.carries_nothing(written, &part.share);
        // As written: 70 % over 100 % is 0.7 to the last digit.
        let share = part.share.number.value;
        if share < 0.0 {
            let why = "a share is zero or more";
            let at = written.place(part.share.span);
            case.resolver.report(at, DefectKind::ImpossibleValue { why });
            return None;
        }
        shares.push(share);
    }
    let in_percent = parts.iter().filter(|part| part.share.unit.is_some()).count();
    let sum: f64 = shares.iter().sum();
    let kind = if (1..parts.len()).contains(&in_percent) {
        DefectKind::BlendSharesMixed
    } else if in_percent > 0 && (sum - 100.0).abs() > ROUNDING {
        DefectKind::BlendSharesSum { percent: sum }
    } else if sum > 0.0 {
        shares.iter_mut().for_each(|share| *share /= sum);
        return Some(shares);
    } else {
        DefectKind::BlendOfNothing
    };
    case.resolver.report(written.whole(), kind);
    None
}

/// Puts what each water brings over the components of this problem; reports what none of
/// them holds.
pub fn over_components(case: &mut CaseResolver, mut blend: Blend) -> Option<Blend> {
    let mut complete = true;
    if case.scale.is_none() {
        case.scale = own_scale(case.statements);
    }
    for portion in &mut blend.portions {
        let (factor, _) = case.onto_scale(portion.water.scale, portion.at);
        portion.charge = factor * portion.water.charge;
        portion.brings = vec![None; case.scope.components.len()];
        let mut missing = Vec::new();
        for matter in &portion.water.matter {
            let amount = factor * matter.amount;
            let Some(row) = row_of(case, matter) else {
                if amount != 0.0 {
                    missing.extend(wanted_for(case, matter));
                }
                continue;
            };
            for (j, n) in row {
                *portion.brings[j].get_or_insert(0.0) += n * amount;
            }
        }
        missing.sort();
        missing.dedup();
        if !missing.is_empty() {
            complete = false;
            let file = portion.file.clone();
            let kind = DefectKind::BlendedComponentMissing { file, names: missing };
            case.resolver.report(portion.at, kind);
        }
    }
    case.all_amounts_read &= complete;
    complete.then_some(blend)
}

/// The scale of the first amount that the file itself states: it goes before those of the
/// waters, which are read first.
fn own_scale(statements: &[Written]) -> Option<(Scale, Place)> {
    statements.iter().find_map(|written| {
        let (Statement::Total { value: amount, .. } | Statement::Add { amount, stock: None, .. }) =
            written.statement()
        else {
            return None;
        };
        let scale = match Unit::parse(&amount.unit.as_ref()?.value).ok()?.dimension {
            Dimension::AmountPerKilogram | Dimension::MassPerKilogram | Dimension::MassFraction => {
                Scale::PerKilogram
            }
            other if other.is_concentration() => Scale::PerLitre,
            _ => return None,
        };
        Some((scale, written.place(amount.span)))
    })
}

/// What one mole is over the components of this problem, protons left out: the charge says
/// them.
fn row_of(case: &CaseResolver, matter: &Matter) -> Option<Vec<(usize, f64)>> {
    let made = matter.names.iter().find_map(|name| {
        let species = case.scope.find(name)?;
        case.scope.belonging.made[species].as_ref()
    })?;
    let others = made.row.iter().filter(|&&(j, _)| j != PROTON);
    Some(others.map(|&(j, n)| (j, n.to_f64().unwrap_or(0.0))).collect())
}

/// The components that would bring it in here.
fn wanted_for(case: &CaseResolver, matter: &Matter) -> Vec<String> {
    let known = matter.names.iter().find_map(|name| case.scope.find(name));
    known.map_or_else(
        || matter.names.first().cloned().into_iter().collect(),
        |species| case.scope.missing_for(species),
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::text::span::{Part, Span};

    fn portion(file: &str, share: f64, total: f64) -> Portion {
        let at = Place { section: Part::Base, statement: 0, span: Span::default() };
        let water = BlendedWater {
            scale: Scale::PerLitre,
            kelvin: 280.0 + 10.0 * total,
            matter: Vec::new(),
            charge: 0.0,
            ph: 7.0,
            alkalinity: 0.0,
            number: 0,
            files: Vec::new(),
        };
        Portion {
            at,
            file: file.into(),
            case: None,
            share,
            water: Arc::new(water),
            brings: vec![None, Some(total), None],
            charge: 0.0,
        }
    }

    #[test]
    fn a_share_that_changes_leaves_the_others_in_proportion() {
        let portions = vec![portion("a", 0.5, 1.0), portion("b", 0.3, 2.0), portion("c", 0.2, 4.0)];
        let blend = Blend { at: portions[0].at, portions };
        assert!((blend.total(1).unwrap_or(0.0) - 1.9).abs() < 1e-15);
        assert_eq!(blend.total(2), None);
        let other = blend.with_share("a", 0.0).expect("two others");
        let shares: Vec<f64> = other.portions.iter().map(|portion| portion.share).collect();
        assert_eq!(shares, [0.0, 0.6, 0.4]);
        assert!((other.kelvin() - 308.0).abs() < 1e-12);
        assert!(blend.with_share("d", 0.5).is_none());
        let alone = Blend { at: blend.at, portions: vec![portion("a", 1.0, 1.0)] };
        assert!(alone.with_share("a", 0.5).is_none());
    }
}
