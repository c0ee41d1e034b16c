//! Solids that may form, and solids in excess.

use super::case::CaseResolver;
use super::defect::DefectKind;
use super::model::{Presence, Problem, Solid};
use crate::chemistry::formula::Phase;
use crate::text::tree::Statement;

/// Reads `precipitate` and `saturate with`.
pub fn read(case: &mut CaseResolver, problem: &mut Problem) {
    for written in case.statements {
        let (name, presence) = match written.statement() {
            Statement::Precipitate { solid } => (solid, Presence::Forms),
            Statement::Saturate { solid } => (solid, Presence::Excess),
            _ => continue,
        };
        let Some(species) = case.species(written, name) else {
            // What it would have brought is not known.
            case.all_amounts_read = false;
            continue;
        };
        let at = written.place(name.span);
        if !matches!(case.scope.species[species].phase, Phase::Solid(_)) {
            let name = case.scope.species[species].name.clone();
            case.resolver.report(at, DefectKind::WrongPhase { name, needs: "a solid" });
            continue;
        }
        problem.solids.push(Solid { at, species, presence });
    }
}
