//! The problems of a file that a command was asked for.

use std::path::PathBuf;

use super::files::Checker;
use super::reply::Complaint;
use crate::report::source::{FileReport, Reading, Stated};

/// One file, and which of its problems.
#[derive(clap::Args)]
pub struct Asked {
    /// The problem file
    file: PathBuf,
    /// Only the case of this title
    #[arg(long, value_name = "NAME")]
    case: Option<String>,
    /// The folder that imports may not leave
    #[arg(long, value_name = "FOLDER")]
    root: Option<PathBuf>,
}

impl Asked {
    /// The file, checked.
    ///
    /// # Errors
    /// What kept it from being read.
    pub fn check(&self) -> Result<FileReport, Complaint> {
        let file = Checker::new(self.root.as_ref())?.check(&self.file);
        match (&file.reading, file.findings.first()) {
            (Reading::Checked(_), _) | (_, None) => Ok(file),
            (_, Some(finding)) => {
                Err(Complaint(format!("{}: {}", file.source.name, finding.message)))
            }
        }
    }

    /// The base and every case, or the case that is asked for alone.
    ///
    /// # Errors
    /// Where there is no such case; the nearest is named.
    pub fn problems<'a>(&self, file: &'a FileReport) -> Result<Vec<Stated<'a>>, Complaint> {
        let problems = file.problems();
        let Some(case) = self.case.as_deref() else { return Ok(problems) };
        let found: Vec<Stated> =
            problems.iter().copied().filter(|stated| stated.case == Some(case)).collect();
        if !found.is_empty() {
            return Ok(found);
        }
        let titles: Vec<&str> = problems.iter().filter_map(|stated| stated.case).collect();
        let name = &file.source.name;
        Err(Complaint(match (nearest(case, titles.iter().copied()), titles.is_empty()) {
            (Some(nearest), _) => {
                format!("{name} has no case \"{case}\"; did you mean \"{nearest}\"?")
            }
            (None, true) => format!("{name} has no cases"),
            (None, false) => {
                format!(
                    "{name} has no case \"{case}\"; its cases are \"{}\"",
                    titles.join("\", \"")
                )
            }
        }))
    }
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
