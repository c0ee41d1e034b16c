//! The problems of a file that a command was asked for.

use super::reply::Complaint;
use crate::report::source::{FileReport, Reading, Stated};

/// # Errors
/// What kept the file from being read.
pub fn readable(file: &FileReport) -> Result<(), Complaint> {
    match (&file.reading, file.findings.first()) {
        (Reading::Checked(_), _) | (_, None) => Ok(()),
        (_, Some(finding)) => Err(Complaint(format!("{}: {}", file.source.name, finding.message))),
    }
}

/// The base and every case, or the case of this title alone.
///
/// # Errors
/// Where there is no such case; the nearest is named.
pub fn chosen<'a>(file: &'a FileReport, case: Option<&str>) -> Result<Vec<Stated<'a>>, Complaint> {
    let problems = file.problems();
    let Some(case) = case else { return Ok(problems) };
    let found: Vec<Stated> =
        problems.iter().copied().filter(|stated| stated.case == Some(case)).collect();
    if !found.is_empty() {
        return Ok(found);
    }
    let titles: Vec<&str> = problems.iter().filter_map(|stated| stated.case).collect();
    let name = &file.source.name;
    let words = match (nearest(case, titles.iter().copied()), titles.is_empty()) {
        (Some(nearest), _) => {
            format!("{name} has no case \"{case}\"; did you mean \"{nearest}\"?")
        }
        (None, true) => format!("{name} has no cases"),
        (None, false) => {
            format!("{name} has no case \"{case}\"; its cases are \"{}\"", titles.join("\", \""))
        }
    };
    Err(Complaint(words))
}

/// The name that was most likely meant, where one is near enough to tell.
pub fn nearest<'a>(wanted: &str, names: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    // The distance takes time with the product of the lengths.
    if wanted.len() > 200 {
        return None;
    }
    let wanted = wanted.to_lowercase();
    names
        .filter(|name| name.len() <= 200)
        .map(|name| (strsim::damerau_levenshtein(&name.to_lowercase(), &wanted), name))
        .filter(|(far, name)| far * 3 <= name.chars().count().max(3))
        .min_by_key(|(far, _)| *far)
        .map(|(_, name)| name)
}
