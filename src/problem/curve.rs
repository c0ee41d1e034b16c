//! Curves: what is moved, from where to where, and the problem at one point of it.

use num_traits::ToPrimitive;

use super::amounts;
use super::blend::Blend;
use super::case::CaseResolver;
use super::defect::{DefectKind, Expected};
use super::effective::{Written, over_words};
use super::model::{AmountSource, Held, HeldWhat, Problem, Reagent, ShownUnit};
use super::quantity::{Read, with_unit_of};
use super::reaction::TemperatureIssue;
use super::scope::PROTON;
use crate::chemistry::unit::ZERO_CELSIUS;
use crate::text::span::{Place, Span};
use crate::text::tree::{Name, Over, Quantity, Statement};

/// Points of a curve that does not say how many, both ends among them.
pub const USUAL_POINTS: usize = 101;
/// A curve of fewer points is none, and one of more is a slip of the pen.
pub const POINTS: std::ops::RangeInclusive<usize> = 2..=10_000;

/// A `curve` statement: the problem solved again and again while one thing is moved.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// The whole statement.
    pub at: Place,
    pub over: Sweep,
    /// In canonical words: `pH`, `NaOH`, `total NH3`, `temperature`.
    pub words: String,
    /// In base units: plain, mol per litre or kilogram, kelvin, a share of one.
    pub from: f64,
    pub to: f64,
    /// Both ends among them, the same distance apart.
    pub points: usize,
    /// As written, and what one of it is in base units; a pH has none.
    pub unit: Option<ShownUnit>,
}

/// What a curve moves. It goes before what the file says of the same thing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Sweep {
    Ph,
    /// A reagent of the problem.
    Reagent(usize),
    /// A component of the scope.
    Total(usize),
    Temperature,
    /// The share of the file of this part of the blend; the others keep their proportions.
    Blend(usize),
}

/// The constant of this reaction of the scope has no value at a point's temperature.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct NoConstant {
    pub reaction: usize,
}

impl Curve {
    /// Where a point lies, in base units; the last is `to` to the last digit.
    pub fn x(&self, point: usize) -> f64 {
        let last = self.points.saturating_sub(1);
        if point >= last {
            return self.to;
        }
        self.from + (self.to - self.from) * (point as f64 / last as f64)
    }

    /// A value in the unit that it was written in.
    pub fn shown(&self, x: f64) -> f64 {
        let unit = self.unit.as_ref();
        match self.over {
            Sweep::Temperature if unit.is_some_and(|unit| unit.words == "°C") => x - ZERO_CELSIUS,
            _ => x / unit.map_or(1.0, |unit| unit.factor),
        }
    }

    /// Moves `moved`, which is `base` at some other point of this curve, to `x`.
    ///
    /// # Errors
    /// Where a constant has no value at that temperature; the rest is moved all the same.
    pub fn place(&self, base: &Problem, moved: &mut Problem, x: f64) -> Result<(), NoConstant> {
        match self.over {
            Sweep::Ph => {
                let held = moved.held.iter_mut().find(|held| matches!(held.what, HeldWhat::Ph(_)));
                match held {
                    Some(held) => held.what = HeldWhat::Ph(x),
                    None => moved.held.push(Held {
                        at: self.at,
                        words: "pH".into(),
                        what: HeldWhat::Ph(x),
                        releases: None,
                    }),
                }
            }
            Sweep::Reagent(reagent) => {
                moved.reagents[reagent].set_amount(x, moved.scale);
                for index in 0..moved.reagents[reagent].row.len() {
                    let (component, _) = moved.reagents[reagent].row[index];
                    let amount = &mut moved.amounts[component];
                    let blended = match amount.source {
                        AmountSource::Reagents => 0.0,
                        AmountSource::Blend => of_blend(&moved.blend, component),
                        _ => continue,
                    };
                    amount.total = Some(blended + brought(&moved.reagents, component));
                }
            }
            Sweep::Total(component) => moved.amounts[component].total = Some(x),
            Sweep::Temperature => return self.warm(base, moved, x),
            Sweep::Blend(portion) => return self.blend(base, moved, portion, x),
        }
        Ok(())
    }

    fn blend(
        &self,
        base: &Problem,
        moved: &mut Problem,
        portion: usize,
        share: f64,
    ) -> Result<(), NoConstant> {
        let Some(blend) = &base.blend else { return Ok(()) };
        let file = &blend.portions[portion].file;
        let Some(mixed) = blend.with_share(file, share) else { return Ok(()) };
        // Unless the file states another temperature, it is that of the mixture.
        let kelvin = (base.temperature_at == Some(blend.at)).then(|| mixed.kelvin());
        moved.blend = Some(mixed);
        for (component, amount) in moved.amounts.iter_mut().enumerate() {
            if amount.source == AmountSource::Blend {
                let blended = of_blend(&moved.blend, component);
                amount.total = Some(blended + brought(&moved.reagents, component));
            }
        }
        kelvin.map_or(Ok(()), |kelvin| self.warm(base, moved, kelvin))
    }

    fn warm(&self, base: &Problem, moved: &mut Problem, kelvin: f64) -> Result<(), NoConstant> {
        moved.kelvin = kelvin;
        let mut without = None;
        for (reaction, read) in base.scope.reactions_in_use() {
            let Some((log_k, issue)) = read.log_k(kelvin) else { continue };
            moved.log_k[reaction] = log_k;
            if issue == Some(TemperatureIssue::NoValue) {
                without.get_or_insert(NoConstant { reaction });
            }
        }
        // A held potential is a pe by Nernst's equation, which goes with the temperature.
        for (held, given) in moved.held.iter_mut().zip(&base.held) {
            if let (HeldWhat::Pe(pe), "potential") = (given.what, given.words.as_str()) {
                held.what = HeldWhat::Pe(pe * base.kelvin / kelvin);
            }
        }
        // A held pOH is a pH by the ion product of water, which moves.
        let hydroxide = |problem: &Problem| {
            let made = problem.scope.belonging.made[problem.scope.find("OH-")?].as_ref()?;
            Some(made.log_beta(|r| problem.log_k[r]))
        };
        if let Some((before, after)) = hydroxide(base).zip(hydroxide(moved)) {
            for (held, given) in moved.held.iter_mut().zip(&base.held) {
                if let (HeldWhat::Ph(ph), "pOH") = (given.what, given.words.as_str()) {
                    held.what = HeldWhat::Ph(ph + before - after);
                }
            }
        }
        without.map_or(Ok(()), Err)
    }
}

/// The problem at `x` of a curve of its own.
///
/// # Errors
/// See [`Curve::place`].
pub fn at(base: &Problem, curve: &Curve, x: f64) -> Result<Problem, NoConstant> {
    let mut moved = base.clone();
    curve.place(base, &mut moved, x)?;
    Ok(moved)
}

/// mol per litre or kilogram of a component that the blend brings.
fn of_blend(blend: &Option<Blend>, component: usize) -> f64 {
    blend.as_ref().and_then(|blend| blend.total(component)).unwrap_or(0.0)
}

/// mol per litre or kilogram of a component that the reagents bring.
pub fn brought(reagents: &[Reagent], component: usize) -> f64 {
    let shares = reagents.iter().flat_map(|reagent| {
        let row = reagent.row.iter().filter(|&&(j, _)| j == component);
        row.map(|(_, n)| n.to_f64().unwrap_or(0.0) * reagent.amount)
    });
    shares.sum()
}

/// Puts reagents that a curve is over and no `add` names among those put in, with an amount
/// of nothing. Gives back whether each could be read.
pub(super) fn reagents(case: &mut CaseResolver, problem: &mut Problem) -> bool {
    let mut all = true;
    for written in case.statements {
        let Statement::Curve { over, .. } = written.statement() else { continue };
        let Over::Reagent(name) = &over.value else { continue };
        if reagent(case, problem, name).is_some() {
            continue;
        }
        let Some(found) = amounts::reagent(case, written, name, None) else {
            all = false;
            continue;
        };
        // Its components must take their amounts from reagents, or from nothing so far.
        let given = found.row.iter().find_map(|&(j, _)| match problem.amounts[j].source {
            AmountSource::Total => problem.amounts[j].at.map(|at| (j, at)),
            _ => None,
        });
        match given {
            None => problem.reagents.push(found),
            Some((j, at)) => {
                let name = case.scope.components[j].formula.name.clone();
                let kind = DefectKind::CurveNotFree { name, by: Some(at) };
                case.resolver.report(written.place(over.span), kind);
            }
        }
    }
    all
}

fn reagent(case: &mut CaseResolver, problem: &Problem, name: &Name) -> Option<usize> {
    let formula = case.resolver.quiet_formula(&name.value)?;
    problem.reagents.iter().position(|reagent| reagent.formula.name == formula.name)
}

/// The curves in force, once amounts and held values are known.
pub(super) fn read(case: &mut CaseResolver, problem: &Problem) -> Vec<Curve> {
    let mut curves = Vec::new();
    for written in case.statements {
        let Statement::Curve { over, from, to, points } = written.statement() else { continue };
        let asked = points.as_ref().map_or(USUAL_POINTS, |points| points.value as usize);
        if let Some(points) = points.as_ref().filter(|_| !POINTS.contains(&asked)) {
            let kind = DefectKind::CurvePoints { points: asked };
            case.resolver.report(written.place(points.span), kind);
        }
        let Some(sweep) = swept(case, problem, written, &over.value, over.span) else { continue };
        let shared = with_unit_of(from, to);
        // The last first: it has the unit, and what is wrong with that is told once.
        let Some(last) = end(case, written, sweep, problem, to) else { continue };
        let Some(first) = end(case, written, sweep, problem, &shared) else { continue };
        if first.value == last.value {
            let at = written.place(from.span.to(to.span));
            case.resolver.report(at, DefectKind::CurveWithoutLength);
            continue;
        }
        let curve = Curve {
            at: written.whole(),
            over: sweep,
            words: over_words(&over.value),
            from: first.value,
            to: last.value,
            points: asked,
            unit: last.words.map(|words| ShownUnit { words, factor: last.per_unit }),
        };
        if sweep == Sweep::Temperature {
            constants(case, problem, &curve);
        }
        if POINTS.contains(&asked) {
            curves.push(curve);
        }
    }
    curves
}

/// What is moved; a defect where the file leaves it to the answer.
fn swept(
    case: &mut CaseResolver,
    problem: &Problem,
    written: &Written,
    over: &Over,
    span: Span,
) -> Option<Sweep> {
    Some(match over {
        Over::Ph => Sweep::Ph,
        Over::Temperature => Sweep::Temperature,
        Over::Blend(file) => {
            let blend = problem.blend.as_ref();
            let portions = blend.map_or(&[][..], |blend| &blend.portions);
            let portion = portions.iter().position(|portion| portion.file == file.value);
            let moves = |blend: &Blend| blend.with_share(&file.value, 0.5).is_some();
            if let Some(portion) = portion.filter(|_| blend.is_some_and(moves)) {
                return Some(Sweep::Blend(portion));
            }
            // A blend that could not be read has its own defect.
            let stated = |w: &Written| matches!(w.statement(), Statement::Blend { .. });
            if blend.is_some() || !case.statements.iter().any(stated) {
                let mut parts: Vec<String> =
                    portions.iter().map(|portion| portion.file.clone()).collect();
                parts.dedup();
                let kind = DefectKind::CurveOverNoPart { file: file.value.clone(), parts };
                case.resolver.report(written.place(span), kind);
            }
            return None;
        }
        // One that is not among them has its defect already.
        Over::Reagent(name) => Sweep::Reagent(reagent(case, problem, name)?),
        Over::Total(name) => {
            let component = case.component(written, name)?;
            let amount = &problem.amounts[component];
            let by = match amount.source {
                _ if component == PROTON => None,
                AmountSource::Total => return Some(Sweep::Total(component)),
                AmountSource::Nothing => None,
                AmountSource::Reagents | AmountSource::Blend => amount.at,
                AmountSource::Held(held) => problem.held.get(held).map(|held| held.at),
                AmountSource::Found(target) => problem.targets.get(target).map(|found| found.by),
            };
            let name = format!("total {}", case.scope.components[component].formula.name);
            case.resolver.report(written.place(span), DefectKind::CurveNotFree { name, by });
            return None;
        }
    })
}

/// One end of a curve in base units.
fn end(
    case: &mut CaseResolver,
    written: &Written,
    sweep: Sweep,
    problem: &Problem,
    value: &Quantity,
) -> Option<Read> {
    case.resolver.carries_nothing(written, value);
    match sweep {
        Sweep::Ph => case.number(written, value, Expected::Plain),
        Sweep::Temperature => case.resolver.kelvin_read(written, value),
        Sweep::Blend(_) => {
            let read = case.number(written, value, Expected::Share)?;
            if !(0.0..=1.0).contains(&read.value) {
                let why = "a share lies between 0 and 100 %";
                let at = written.place(value.span);
                case.resolver.report(at, DefectKind::ImpossibleValue { why });
                return None;
            }
            Some(read)
        }
        Sweep::Reagent(reagent) => {
            let formula = problem.reagents[reagent].formula.clone();
            let expected = Expected::Concentration;
            let read = case.concentration(written, value, Some(&formula), expected)?;
            case.not_negative(written, value).then_some(read)
        }
        Sweep::Total(component) => {
            let formula = case.scope.components[component].formula.clone();
            let expected = Expected::Concentration;
            let read = case.concentration(written, value, Some(&formula), expected)?;
            if read.value < 0.0 && !formula.is_electron() {
                let name = formula.name.clone();
                let kind = DefectKind::NegativeTotal { name, value: read.value };
                case.resolver.report(written.place(value.span), kind);
                return None;
            }
            Some(read)
        }
    }
}

/// Reports constants that do not reach to the ends of a curve over temperature, where the
/// problem's own temperature has not made them told of already.
fn constants(case: &mut CaseResolver, problem: &Problem, curve: &Curve) {
    for (_, reaction) in case.scope.reactions_in_use() {
        let issue = |kelvin: f64| reaction.log_k(kelvin).and_then(|(_, issue)| issue);
        if reaction.is_ion_product() || issue(problem.kelvin).is_some() {
            continue;
        }
        let at_end = |wanted: f64| issue(wanted).map(|issue| (issue, wanted));
        let Some((issue, wanted)) = at_end(curve.from).or_else(|| at_end(curve.to)) else {
            continue;
        };
        let kind = DefectKind::at_temperature(issue, reaction.equation.clone(), wanted, false);
        case.resolver.report(curve.at, kind);
    }
}
