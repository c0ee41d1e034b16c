//! `lyate derive`: the balances of a file's problems, and how the proton condition follows.

use super::chosen::Asked;
use super::reply::{Complaint, Reply};
use super::terminal::style;
use crate::report::derivation::{Derivation, json, latex, markdown, text};

/// Derive the balances of a problem file, and what is left of them at the answer
///
/// Shows the mass balance of each component, the charge balance, the proton condition
/// with the combination of the others that it is, and the terms that the pH rests on.
/// A reference level is taken from what was put in.
#[derive(clap::Args)]
#[command(
    verbatim_doc_comment,
    after_help = "\
Exit code:
  0  derived, and solved
  1  derived, but something could not be solved, or nothing is stated
  2  not run: wrong usage, or a file that cannot be read"
)]
pub struct Arguments {
    #[command(flatten)]
    asked: Asked,
    /// How to tell it
    #[arg(long, value_name = "FORM", value_enum, default_value_t = Form::Text)]
    output: Form,
}

#[derive(Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
enum Form {
    /// For people
    Text,
    /// For programs
    Json,
    /// For a page of notes
    Markdown,
    /// For a report; needs the packages amsmath and mhchem
    Latex,
}

pub fn run(arguments: &Arguments) -> Result<Reply, Complaint> {
    let file = arguments.asked.check()?;
    let problems = arguments.asked.problems(&file)?;
    let derivations: Vec<Derivation> = problems.iter().map(Derivation::new).collect();
    let title = problems.iter().find_map(|stated| stated.outcome.problem.title.as_deref());
    let shown = title.unwrap_or(&file.source.name);
    let text = match arguments.output {
        Form::Json => json(&file, title, &derivations) + "\n",
        _ if derivations.is_empty() => String::new(),
        Form::Text => text(shown, &derivations, style()),
        Form::Markdown => markdown(shown, &derivations),
        Form::Latex => latex(shown, &derivations),
    };
    let solved = problems.iter().all(|stated| stated.outcome.solved().is_some());
    let mut reply = Reply::new(text, u8::from(!solved || problems.is_empty()));
    if problems.is_empty() {
        let name = &file.source.name;
        reply.remark = format!("lyate: {name} states no amounts: there is nothing to derive\n");
    } else if !solved {
        let name = &file.source.name;
        reply.remark = format!("lyate: not all of it could be solved: see `lyate check {name}`\n");
    }
    Ok(reply)
}
