//! A derivation as text for a terminal, and as Markdown.

use num_rational::Rational64;
use num_traits::Signed;

use super::{Derivation, Protons, share, simplified};
use crate::report::answer::conditions;
use crate::report::figures::{concentration, decimals, percent, scale_unit, scientific};
use crate::report::sheet::{Entry, Sheet, side};
use crate::report::style::{Paint, Style};
use crate::report::table::{Cell, Side, Table};

/// How headings, equations and tables are set.
enum Form {
    Terminal(Style),
    Markdown,
}

/// Derivations for a terminal.
pub fn text(title: &str, derivations: &[Derivation], style: Style) -> String {
    written(title, derivations, &Form::Terminal(style))
}

/// Derivations as Markdown.
pub fn markdown(title: &str, derivations: &[Derivation]) -> String {
    written(title, derivations, &Form::Markdown)
}

fn written(title: &str, derivations: &[Derivation], form: &Form) -> String {
    let parts: Vec<String> = derivations
        .iter()
        .map(|derivation| {
            let title = match derivation.case {
                Some(case) => format!("{title}, case \"{case}\""),
                None => title.to_owned(),
            };
            one(&title, derivation, form)
        })
        .collect();
    parts.join(match form {
        Form::Terminal(_) => "\n\n",
        Form::Markdown => "\n",
    })
}

fn one(title: &str, derivation: &Derivation, form: &Form) -> String {
    let problem = derivation.problem;
    let mut page = Page { form, text: String::new() };
    page.title(title);
    let conditions = conditions(problem);
    page.prose(&match derivation.ph {
        Some(ph) => format!("{conditions}: pH {}", decimals(ph, 3)),
        None => format!("{conditions}: not solved"),
    });
    page.heading("Mass balances");
    for mass in &derivation.masses {
        let mut lines = vec![mass.sheet.equation()];
        if let Some(sources) = &mass.sources {
            lines.push(format!("total {} = {}", mass.component, signed_sum(sources)));
        } else if let Some(value) = mass.sheet.right.iter().find_map(|entry| entry.value) {
            let value = concentration(value, problem.scale);
            lines.push(format!("total {} = {value}", mass.component));
        }
        page.equations(&lines);
    }
    page.heading("Charge balance");
    page.equations(&[derivation.charge.equation()]);
    if let Some(protons) = &derivation.protons {
        page.protons(derivation, protons);
    }
    if derivation.ph_held {
        page.prose(
            "The pH is held, so charge need not balance: what holds the pH is in neither of \
             the last two balances.",
        );
    }
    if let (Some(ph), Some(protons)) = (derivation.ph, &derivation.protons) {
        page.heading(&format!("At the answer, pH {}", decimals(ph, 3)));
        match simplified(&protons.sheet) {
            Some((left, right)) => {
                page.equations(&[format!("{} = {}", side(&left), side(&right))]);
                page.prose("These terms alone give the pH to within 0.01. All of them:");
            }
            None => page.prose("Every term of the proton condition counts:"),
        }
        let table = terms(&protons.sheet, scale_unit(problem.scale));
        page.table(table);
    }
    page.text
}

/// Every term with its value, its share of its side, and what leaving it out does.
fn terms(sheet: &Sheet, unit: &str) -> Table {
    let mut table = Table::new(&[
        ("term", Side::Left),
        (unit, Side::Right),
        ("share of its side", Side::Right),
        ("pH without it", Side::Left),
    ]);
    for entries in [&sheet.left, &sheet.right] {
        let mut sorted: Vec<&Entry> = entries.iter().filter(|e| e.value != Some(0.0)).collect();
        sorted.sort_by(|a, b| b.value.unwrap_or(0.0).total_cmp(&a.value.unwrap_or(0.0)));
        for entry in sorted {
            let paint = if entry.dominant { Paint::Heading } else { Paint::Plain };
            let value = entry.value.map_or(String::new(), |value| scientific(value, 4));
            table.row([
                Cell::painted(paint, entry.with_coefficient()),
                value.into(),
                share(entry, entries).map_or(String::new(), percent).into(),
                shift(entry).into(),
            ]);
        }
    }
    table
}

/// `higher by 0.120`, `lower by 0.120`; `unchanged` below 0.0005.
fn shift(entry: &Entry) -> String {
    match entry.ph_shift {
        None if entry.dominant => "nothing closes it".into(),
        None => String::new(),
        Some(shift) if shift.abs() < 0.0005 => "unchanged".into(),
        Some(shift) if shift > 0.0 => format!("higher by {}", decimals(shift, 3)),
        Some(shift) => format!("lower by {}", decimals(-shift, 3)),
    }
}

/// `2 added (NH4)2SO4 − CO2(g) taken up`.
fn signed_sum(entries: &[Entry]) -> String {
    let mut sum = String::new();
    for entry in entries {
        let negative = entry.coefficient.is_negative();
        let term =
            Entry { coefficient: entry.coefficient.abs(), ..entry.clone() }.with_coefficient();
        sum += match (sum.is_empty(), negative) {
            (true, false) => "",
            (true, true) => "−",
            (false, false) => " + ",
            (false, true) => " − ",
        };
        sum += &term;
    }
    sum
}

struct Page<'a> {
    form: &'a Form,
    text: String,
}

impl Page<'_> {
    fn title(&mut self, words: &str) {
        self.text += &match self.form {
            Form::Terminal(style) => style.paint(Paint::Heading, words) + "\n",
            Form::Markdown => format!("# {words}\n\n"),
        };
    }

    fn heading(&mut self, words: &str) {
        self.text += &match self.form {
            Form::Terminal(style) => format!("\n{}\n", style.paint(Paint::Heading, words)),
            Form::Markdown => format!("## {words}\n\n"),
        };
    }

    fn prose(&mut self, words: &str) {
        self.text += words;
        self.text += match self.form {
            Form::Terminal(_) => "\n",
            Form::Markdown => "\n\n",
        };
    }

    fn equations(&mut self, lines: &[String]) {
        match self.form {
            Form::Terminal(_) => {
                for line in lines {
                    self.text += &broken(line);
                }
            }
            Form::Markdown => self.text += &format!("```\n{}\n```\n\n", lines.join("\n")),
        }
    }

    fn table(&mut self, table: Table) {
        self.text += &match self.form {
            Form::Terminal(style) => table.render(*style),
            Form::Markdown => table.markdown() + "\n",
        };
    }

    fn protons(&mut self, derivation: &Derivation, protons: &Protons) {
        self.heading("Reference level");
        let mut table = Table::new(&[("", Side::Left), ("", Side::Left)]);
        for reference in &protons.references {
            let why = reference.why(derivation.problem);
            table.row([reference.form.as_str().into(), why.into()]);
        }
        self.table(table);
        self.heading("Proton condition");
        let lambdas: Vec<String> = protons
            .lambdas()
            .map(|(name, lambda)| format!("λ({name}) = {}", minus(lambda)))
            .collect();
        if !lambdas.is_empty() {
            self.prose("The charge λ of the reference level, for one of each component:");
            let others = lambdas.len() < derivation.masses.len();
            let lambdas = lambdas.join(", ");
            self.equations(&[if others { lambdas + ", all others 0" } else { lambdas }]);
        }
        self.prose("Charge balance less λ times each mass balance:");
        self.equations(&[
            protons.combination("−", |name| name.to_owned()),
            protons.sheet.equation(),
        ]);
        for other in &protons.alternatives {
            let amount = concentration(other.amount, derivation.problem.scale);
            self.prose(&format!(
                "{} was put in too ({amount}). With it in the place of {}, the same condition is",
                other.form, other.instead_of,
            ));
            self.equations(&[other.sheet.equation()]);
        }
    }
}

fn minus(value: Rational64) -> String {
    if value.is_negative() { format!("−{}", -value) } else { value.to_string() }
}

/// An equation set in by two, broken before a sign where it is too long for a line.
fn broken(equation: &str) -> String {
    const WIDTH: usize = 96;
    let mut pieces: Vec<String> = Vec::new();
    for word in equation.split(' ') {
        match pieces.last_mut() {
            Some(piece) if !matches!(word, "+" | "−" | "=") => *piece += &format!(" {word}"),
            _ => pieces.push(word.to_owned()),
        }
    }
    let mut text = String::from(" ");
    let mut at = 1;
    for piece in pieces {
        let length = piece.chars().count();
        if at > 1 && at + 1 + length > WIDTH {
            text += "\n     ";
            at = 5;
        }
        text += &format!(" {piece}");
        at += 1 + length;
    }
    text + "\n"
}
