//! `lyate explain`: what a rule means, why it matters, an example before and after.

use super::chosen::nearest;
use super::reply::{Complaint, Reply};
use super::terminal::style;
use crate::report::page;
use crate::rules::catalogue::{find, rules};

/// Show the page of a rule, or list all rules
///
/// The page says what the rule finds, why it matters at the plant, and shows an example
/// before and after. A finding's rule is the name in its brackets.
#[derive(clap::Args)]
#[command(
    verbatim_doc_comment,
    after_help = "\
Exit code:
  0  shown
  2  there is no such rule"
)]
pub struct Arguments {
    /// The rule's name, such as charge-not-conserved
    rule: Option<String>,
    /// How to tell it
    #[arg(long, value_name = "FORM", value_enum, default_value_t = Form::Text)]
    output: Form,
}

#[derive(Clone, Copy, clap::ValueEnum)]
enum Form {
    /// For people
    Text,
    /// For programs; the page is Markdown
    Json,
}

pub fn run(arguments: &Arguments) -> Result<Reply, Complaint> {
    let Some(name) = &arguments.rule else {
        return Ok(Reply::new(
            match arguments.output {
                Form::Text => {
                    page::list(style()) + "\n`lyate explain RULE` shows the page of a rule.\n"
                }
                Form::Json => page::json::list() + "\n",
            },
            0,
        ));
    };
    // As copied from a finding, `error[name]`.
    let bare = name.rsplit('[').next().unwrap_or(name).trim_end_matches([']', ':']);
    let Some(rule) = find(bare) else {
        let words = match nearest(bare, rules().map(|rule| rule.name)) {
            Some(nearest) => format!("there is no rule {name}; did you mean {nearest}?"),
            None => format!("there is no rule {name}; `lyate explain` lists all of them"),
        };
        return Err(Complaint(words));
    };
    Ok(Reply::new(
        match arguments.output {
            Form::Text => page::page(rule, style()),
            Form::Json => page::json::page(rule) + "\n",
        },
        0,
    ))
}
