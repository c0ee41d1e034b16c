//! A derivation as LaTeX, to paste into a report.

use num_rational::Rational64;
use num_traits::Signed;

use super::{Derivation, simplified};
use crate::balance::Part;
use crate::balance::written::TermOf;
use crate::report::figures::{celsius, decimals};
use crate::report::sheet::{Entry, Sheet};

/// Derivations as sections with displayed equations. They need the packages amsmath and
/// mhchem.
pub fn latex(title: &str, derivations: &[Derivation]) -> String {
    let mut text =
        String::from("% Needs \\usepackage{amsmath} and \\usepackage[version=4]{mhchem}.\n");
    for derivation in derivations {
        let title = match derivation.case {
            Some(case) => format!("{title}, {case}"),
            None => title.to_owned(),
        };
        text += &format!("\n\\section*{{{}}}\n", escaped(&title));
        text += &one(derivation);
    }
    text
}

fn one(derivation: &Derivation) -> String {
    let mut text = String::new();
    let mut display = |heading: &str, equations: &[String]| {
        if !equations.is_empty() {
            text += &format!(
                "\n\\paragraph{{{heading}}}\n\\begin{{align*}}\n{}\n\\end{{align*}}\n",
                equations.join(" \\\\\n"),
            );
        }
    };
    let masses: Vec<String> = derivation
        .masses
        .iter()
        .flat_map(|mass| {
            let sources = mass.sources.as_ref().map(|sources| {
                let total = mass.sheet.right.first().map(symbol).unwrap_or_default();
                format!("  {total} &= {}", sum(sources))
            });
            [Some(equation(&mass.sheet)), sources].into_iter().flatten()
        })
        .collect();
    display("Mass balances", &masses);
    display("Charge balance", &[equation(&derivation.charge)]);
    if let Some(protons) = &derivation.protons {
        let mut lines: Vec<String> = protons
            .lambdas()
            .map(|(name, lambda)| format!("  \\lambda_{{{}}} &= {}", ce(name), number(lambda)))
            .collect();
        display("Multipliers", &lines);
        lines = vec![
            format!("  &\\text{{{}}}", protons.combination("$-$", ce)),
            equation(&protons.sheet),
        ];
        display("Proton condition", &lines);
        if let (Some(ph), Some((left, right))) = (derivation.ph, simplified(&protons.sheet)) {
            let heading = format!(
                "Simplified at {}, pH {}",
                celsius(derivation.problem.kelvin).replace(" °C", "~\\textdegree C"),
                decimals(ph, 3),
            );
            display(&heading, &[format!("  {} &\\approx {}", sum(&left), sum(&right))]);
        }
    }
    text
}

fn equation(sheet: &Sheet) -> String {
    format!("  {} &= {}", sum(&sheet.left), sum(&sheet.right))
}

fn sum(entries: &[Entry]) -> String {
    if entries.is_empty() {
        return "0".into();
    }
    let mut sum = String::new();
    for entry in entries {
        let sign = match (sum.is_empty(), entry.coefficient.is_negative()) {
            (true, false) => "",
            (true, true) => "-",
            (false, false) => " + ",
            (false, true) => " - ",
        };
        let size = entry.coefficient.abs();
        let size = if size == Rational64::from(1) { String::new() } else { number(size) + "\\," };
        sum += &format!("{sign}{size}{}", symbol(entry));
    }
    sum
}

/// `[\ce{NH4+}]`, `T_{\ce{NH3}}`, `C_{\ce{NaOH}}`, `S_{\ce{CaCO3(s)}}`.
fn symbol(entry: &Entry) -> String {
    let name = entry
        .words
        .trim_start_matches("total ")
        .trim_start_matches("added ")
        .trim_start_matches("precipitated ");
    match entry.what {
        TermOf::Species(_) => {
            let name = name.strip_prefix('[').and_then(|name| name.strip_suffix(']'));
            format!("[{}]", ce(name.unwrap_or_default()))
        }
        TermOf::Constant(Part::Total(_)) => format!("T_{{{}}}", ce(name)),
        TermOf::Constant(Part::Added(_)) => format!("C_{{{}}}", ce(name)),
        TermOf::Constant(Part::Precipitated(_)) => format!("S_{{{}}}", ce(name)),
        TermOf::Constant(Part::Held(_)) => {
            let name = name.trim_start_matches("brought by ").trim_end_matches(" held");
            format!("X_{{{}}}", ce(name.trim_matches(['[', ']', '{', '}'])))
        }
    }
}

/// A formula for mhchem: a dot of hydrates is a full stop there.
fn ce(name: &str) -> String {
    format!("\\ce{{{}}}", name.replace('·', "."))
}

fn number(value: Rational64) -> String {
    if value.is_integer() {
        return value.to_integer().to_string();
    }
    let sign = if value.is_negative() { "-" } else { "" };
    format!("{sign}\\tfrac{{{}}}{{{}}}", value.numer().abs(), value.denom())
}

fn escaped(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    for character in text.chars() {
        match character {
            '&' | '%' | '$' | '#' | '_' | '{' | '}' => escaped.extend(['\\', character]),
            '\\' => escaped += "\\textbackslash{}",
            '~' => escaped += "\\textasciitilde{}",
            '^' => escaped += "\\textasciicircum{}",
            other => escaped.push(other),
        }
    }
    escaped
}
