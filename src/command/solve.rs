//! `lyate solve`: the answer for a file and each of its cases.

use super::chosen::Asked;
use super::reply::{Complaint, Reply};
use super::terminal::style;
use crate::report::answer::{answer, conditions, overview};
use crate::report::cautions;
use crate::report::curve::{Traced, traced};
use crate::report::expectation::verdict;
use crate::report::solution::json;
use crate::report::source::{FileReport, Stated};
use crate::report::style::{Paint, Style};
use crate::report::terminal;
use crate::rules::finding::Severity;

/// Solve a problem file, and show the answer for its base and each case
///
/// Shows pH, ionic strength and alkalinity; every dissolved species with its activity
/// and its share; partial pressures, saturation indices, both sides of the charge balance
/// and the proton condition; what the file expects of the answer; and points along its
/// curves.
#[derive(clap::Args)]
#[command(
    verbatim_doc_comment,
    after_help = "\
Exit code:
  0  everything asked for was solved, and meets what the file expects
  1  something was not solved, a point of a curve too, or an expectation is not met
  2  not run: wrong usage, or a file that cannot be read"
)]
pub struct Arguments {
    #[command(flatten)]
    asked: Asked,
    /// How to tell the answer
    #[arg(long, value_name = "FORM", value_enum, default_value_t = Form::Text)]
    output: Form,
}

#[derive(Clone, Copy, PartialEq, Eq, clap::ValueEnum)]
enum Form {
    /// For people
    Text,
    /// For programs
    Json,
}

pub fn run(arguments: &Arguments) -> Result<Reply, Complaint> {
    let file = arguments.asked.check()?;
    let problems = arguments.asked.problems(&file)?;
    let curves: Vec<Vec<Traced>> = problems.iter().map(|stated| traced(stated.outcome)).collect();
    let good = !problems.is_empty()
        && problems.iter().all(is_good)
        && curves.iter().flatten().all(Traced::is_solved);
    let style = style();
    let (text, remark) = match arguments.output {
        Form::Text => (text(&file, &problems, &curves, style), String::new()),
        Form::Json => {
            let text = json(&file, &problems, &curves)
                .map_err(|e| Complaint(format!("the answer could not be written: {e}")))?;
            let hindrances: Vec<String> = problems
                .iter()
                .filter(|stated| stated.outcome.solved().is_none())
                .map(|stated| hindrance(&file, *stated, Style::Plain))
                .collect();
            (text + "\n", hindrances.concat())
        }
    };
    let text = if problems.is_empty() && arguments.output == Form::Text {
        format!("{} states no amounts: there is nothing to solve\n", file.source.name)
    } else {
        text
    };
    Ok(Reply { text, remark, code: u8::from(!good) })
}

fn is_good(stated: &Stated) -> bool {
    let problem = &stated.outcome.problem;
    stated.outcome.solved().is_some_and(|solved| {
        problem.expectations.iter().all(|expectation| verdict(problem, solved, expectation).met)
    })
}

fn text(file: &FileReport, problems: &[Stated], curves: &[Vec<Traced>], style: Style) -> String {
    let mut parts = Vec::new();
    let title = problems.iter().find_map(|stated| stated.outcome.problem.title.as_deref());
    let title = style.paint(Paint::Heading, title.unwrap_or(&file.source.name));
    for (stated, curves) in problems.iter().zip(curves) {
        let head = match stated.case {
            Some(case) => format!("{title}, case \"{case}\""),
            None => title.clone(),
        };
        let body = match (file.checked(), stated.outcome.solved()) {
            (Some(checked), Some(solved)) => {
                answer(&file.source, checked, *stated, solved, curves, style)
            }
            _ => {
                let conditions = conditions(&stated.outcome.problem);
                let state = style.paint(Paint::Bad, "not solved");
                format!("{conditions}: {state}\n\n{}", hindrance(file, *stated, style))
            }
        };
        let mut part = format!("{head}\n{body}");
        let cautions = cautions::lines(stated.outcome, style);
        if !cautions.is_empty() {
            part = format!("{}\n\n{cautions}", part.trim_end());
        }
        parts.push(part);
    }
    if problems.len() > 1 {
        parts.push(overview(problems, style));
    }
    parts.join("\n\n")
}

/// The findings that stand in the way of a problem's answer.
fn hindrance(file: &FileReport, stated: Stated, style: Style) -> String {
    let findings = file.findings.iter().filter(|finding| {
        finding.severity == Severity::Error
            && (finding.case.is_none() || finding.case.as_deref() == stated.case)
    });
    let shown: Vec<String> =
        findings.map(|finding| terminal::finding(finding, &file.source, style) + "\n").collect();
    if shown.is_empty() {
        return "the problem is not well posed\n".into();
    }
    shown.join("\n")
}
