//! The solved problem that a picture is of, and what every picture says of it.

use std::sync::atomic::AtomicBool;

use crate::equilibrium::diagram::{Sweep, over_ph};
use crate::equilibrium::quantities::Solved;
use crate::problem::model::{HeldWhat, Problem};
use crate::report::answer::conditions;
use crate::report::figures::{concentration, decimals};
use crate::report::source::Stated;

pub struct Subject<'a> {
    /// Of the problem, or the name of its file.
    pub title: String,
    pub stated: Stated<'a>,
    pub solved: &'a Solved,
}

impl<'a> Subject<'a> {
    /// None where the problem is not solved.
    pub fn new(file: &str, stated: Stated<'a>) -> Option<Subject<'a>> {
        let solved = stated.outcome.solved()?;
        let title = stated.outcome.problem.title.as_deref().unwrap_or(file).to_owned();
        Some(Subject { title, stated, solved })
    }

    pub fn problem(&self) -> &'a Problem {
        &self.stated.outcome.problem
    }

    pub fn ph_is_held(&self) -> bool {
        self.problem().held.iter().any(|held| matches!(held.what, HeldWhat::Ph(_)))
    }

    /// `pH 9.322`
    pub fn ph_words(&self) -> String {
        let held = if self.ph_is_held() { ", held" } else { "" };
        format!("pH {}{held}", decimals(self.solved.ph(), 3))
    }

    /// `case "winter", 4 °C, Davies activities`; with the ionic strength where the picture
    /// keeps that of the answer.
    pub fn conditions(&self, one_ionic_strength: bool) -> String {
        let problem = self.problem();
        let mut words = match self.stated.case {
            Some(case) => format!("case \"{case}\", "),
            None => String::new(),
        };
        words += &conditions(problem);
        if one_ionic_strength && self.has_activities() {
            let value = concentration(self.solved.answer.ionic_strength, problem.scale);
            words += &format!(" at ionic strength {value}");
        }
        words
    }

    fn has_activities(&self) -> bool {
        self.problem().activity != crate::chemistry::activity::ActivityKind::Ideal
    }

    /// 0 to 14, or further where the answer lies outside.
    pub fn ph_range(&self) -> (f64, f64) {
        let ph = self.solved.ph();
        (0f64.min((ph - 0.5).floor()), 14f64.max((ph + 0.5).ceil()))
    }

    /// The states over the whole range of pH; none where the work was cancelled.
    pub fn sweep(&self, cancel: &AtomicBool) -> Option<Sweep> {
        let (from, to) = self.ph_range();
        let given = Some(self.solved.answer.ionic_strength);
        over_ph(&self.solved.asked(), given, from, to, cancel).ok()
    }
}
