//! Every formula that a statement names, in the order of the tree.

use super::tree::{
    BalanceKind, By, Member, Name, Over, Statement, Subject, Term, TermKind, Without,
};

impl Statement {
    /// Calls back with each formula as written: species, components, reagents, groups'
    /// compositions. Units and what follows `as` are none.
    pub fn each_formula<'a>(&'a self, call: &mut dyn FnMut(&'a Name)) {
        match self {
            Statement::Group { formula, .. } => {
                if let Some(formula) = formula {
                    call(formula);
                }
            }
            Statement::Component { items } => items.iter().for_each(|item| call(&item.name)),
            Statement::Reaction(reaction) => members(&[&reaction.left, &reaction.right], call),
            Statement::Total { component, .. } => call(component),
            Statement::Add { reagent, giving, .. } => {
                call(reagent);
                if let Some(giving) = giving {
                    members(&[giving], call);
                }
            }
            Statement::Hold { subject: what, by, .. } => {
                subject(&what.value, call);
                if let Some(by) = by {
                    match &by.value {
                        By::Reagent(name, _) | By::Total(name) => call(name),
                    }
                }
            }
            Statement::Precipitate { solid } | Statement::Saturate { solid } => call(solid),
            Statement::Balance { kind, left, right, .. } => {
                balance(&kind.value, call);
                left.iter().chain(right).for_each(|one| term(one, call));
            }
            Statement::Expect { subject: what, .. } => subject(&what.value, call),
            Statement::Curve { over, .. } => match &over.value {
                Over::Reagent(name) | Over::Total(name) => call(name),
                Over::Ph | Over::Temperature | Over::Blend(_) => {}
            },
            Statement::Without(without) => match &without.value {
                Without::Hold(what) | Without::Expect(what) => subject(what, call),
                Without::Total(name)
                | Without::Add(name)
                | Without::Precipitate(name)
                | Without::Saturate(name) => call(name),
                Without::Balance(kind) => balance(kind, call),
                Without::IonicStrength | Without::Blend => {}
            },
            Statement::Problem { .. }
            | Statement::Use(_)
            | Statement::Temperature { .. }
            | Statement::Activity { .. }
            | Statement::IonicStrength { .. }
            | Statement::Blend { .. }
            | Statement::Case { .. }
            | Statement::Broken => {}
        }
    }
}

fn members<'a>(sides: &[&'a Vec<Member>], call: &mut dyn FnMut(&'a Name)) {
    sides.iter().flat_map(|side| side.iter()).for_each(|member| call(&member.name));
}

fn subject<'a>(subject: &'a Subject, call: &mut dyn FnMut(&'a Name)) {
    match subject {
        Subject::Concentration(name)
        | Subject::Activity(name)
        | Subject::Pressure(name)
        | Subject::Total(name)
        | Subject::Fraction(name)
        | Subject::SaturationIndex(name)
        | Subject::Precipitated(name)
        | Subject::Dose(name) => call(name),
        Subject::Ph
        | Subject::Poh
        | Subject::Pe
        | Subject::Potential
        | Subject::Alkalinity
        | Subject::Acidity
        | Subject::Hardness
        | Subject::CarbonateHardness
        | Subject::IonicStrength
        | Subject::BufferCapacity
        | Subject::ChargeImbalance => {}
    }
}

fn balance<'a>(kind: &'a BalanceKind, call: &mut dyn FnMut(&'a Name)) {
    if let BalanceKind::Component(name) = kind {
        call(name);
    }
}

fn term<'a>(term: &'a Term, call: &mut dyn FnMut(&'a Name)) {
    match &term.what {
        TermKind::Concentration(name)
        | TermKind::Total(name)
        | TermKind::Added(name)
        | TermKind::Precipitated(name) => call(name),
        TermKind::Amount(_) => {}
    }
}
