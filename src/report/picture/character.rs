//! A chart in the letters of a terminal: each line a letter, with a key below.

use super::chart::{Chart, MarkKind, Role};
use super::ticks::ticks;
use crate::report::wrap::wrapped;

/// Columns that a picture needs, and rows of its plot.
const LEAST: usize = 40;
const MOST: usize = 240;
const ROWS: (usize, usize) = (14, 40);
const RULE: char = '┊';
const LEVEL: char = '┄';

/// The chart, no wider than so many columns where there are at least 40.
pub fn character(chart: &Chart, columns: usize) -> String {
    let columns = columns.clamp(LEAST, MOST);
    let rows = (columns / 4).clamp(ROWS.0, ROWS.1);
    let numbers = ticks(&chart.y, rows / 2);
    let margin = numbers.iter().map(|(_, words)| words.chars().count()).max().unwrap_or(0);
    let width = columns - margin - 3;
    let mut field = Field { cells: vec![vec![Vec::new(); width]; rows], width, rows };
    for rule in &chart.rules {
        if let Some(column) = field.column(chart, rule.x) {
            field.cells.iter_mut().for_each(|row| row[column].push(RULE));
        }
    }
    for &level in &chart.levels {
        if let Some(row) = field.row(chart, level) {
            field.cells[row].iter_mut().for_each(|cell| cell.push(LEVEL));
        }
    }
    let letters = letters(chart);
    for (line, letter) in chart.lines.iter().zip(&letters) {
        field.line(chart, line, *letter);
    }
    for mark in &chart.marks {
        if let (Some(column), Some(row)) =
            (field.column(chart, mark.at.0), field.row(chart, mark.at.1))
        {
            field.cells[row][column] = match mark.kind {
                MarkKind::Answer => vec!['●'],
                MarkKind::Point => vec!['○'],
            };
        }
    }
    let mut text = String::new();
    for words in [&chart.title, &chart.subtitle, &chart.y.title.text()] {
        text += &wrapped(words, 0, 0, columns);
        text.push('\n');
    }
    let mut at_rows: Vec<String> = vec![String::new(); rows];
    for (value, words) in numbers {
        if let Some(row) = field.row(chart, value) {
            at_rows[row] = words;
        }
    }
    for (row, number) in field.cells.iter().zip(at_rows) {
        let edge = if number.is_empty() { '│' } else { '┤' };
        let cells: String =
            row.iter().enumerate().map(|(column, met)| shown(met, column)).collect();
        text += &format!("{number:>margin$} {edge}{}\n", cells.trim_end());
    }
    text += &field.foot(chart, margin);
    text += &key(chart, &letters, columns);
    for note in &chart.notes {
        text += &wrapped(&note.text(), 0, 0, columns);
        text.push('\n');
    }
    text
}

/// Capitals for what the picture is about, small letters for the rest, then digits.
fn letters(chart: &Chart) -> Vec<char> {
    let mut plain = ('a'..='z').chain('0'..='9').chain('α'..='ω').cycle();
    let mut main = ('A'..='Z').cycle();
    let next = |line: &super::chart::Line| match line.role {
        Role::Main(_) => main.next(),
        Role::Plain => plain.next(),
    };
    chart.lines.iter().map(next).map(|letter| letter.unwrap_or('?')).collect()
}

/// What is seen where letters meet: what the picture is about before the rest, and lines that
/// run together take turns.
fn shown(met: &[char], column: usize) -> char {
    let main: Vec<char> = met.iter().copied().filter(char::is_ascii_uppercase).collect();
    let plain: Vec<char> = met.iter().copied().filter(|c| ![RULE, LEVEL].contains(c)).collect();
    let first = [main, plain, met.to_vec()].into_iter().find(|letters| !letters.is_empty());
    first.map_or(' ', |letters| letters[column % letters.len()])
}

struct Field {
    /// The letters that meet in each cell.
    cells: Vec<Vec<Vec<char>>>,
    width: usize,
    rows: usize,
}

impl Field {
    fn column(&self, chart: &Chart, x: f64) -> Option<usize> {
        let share = chart.x.share(x);
        (0.0..=1.0).contains(&share).then(|| (share * (self.width - 1) as f64).round() as usize)
    }

    fn row(&self, chart: &Chart, y: f64) -> Option<usize> {
        let share = chart.y.share(y);
        (0.0..=1.0)
            .contains(&share)
            .then(|| ((1.0 - share) * (self.rows - 1) as f64).round() as usize)
    }

    /// One letter in each column that the line passes, and the rows between where it is steep.
    fn line(&mut self, chart: &Chart, line: &super::chart::Line, letter: char) {
        let mut last: Option<(usize, usize)> = None;
        for column in 0..self.width {
            let share = column as f64 / (self.width - 1) as f64;
            let x = chart.x.from + share * (chart.x.to - chart.x.from);
            let Some(row) = line.at(x).and_then(|y| self.row(chart, y)) else {
                last = None;
                continue;
            };
            if let Some((before, from)) = last {
                let (low, high) = (from.min(row), from.max(row));
                for between in low + 1..high {
                    // The nearer half goes to the column that it is nearer to.
                    let nearer_before = between.abs_diff(from) < between.abs_diff(row);
                    self.put(between, if nearer_before { before } else { column }, letter);
                }
            }
            self.put(row, column, letter);
            last = Some((column, row));
        }
    }

    fn put(&mut self, row: usize, column: usize, letter: char) {
        let cell = &mut self.cells[row][column];
        if !cell.contains(&letter) {
            cell.push(letter);
        }
    }

    /// The lower edge with its numbers, and the title of the axis.
    fn foot(&self, chart: &Chart, margin: usize) -> String {
        let mut edge = vec!['─'; self.width];
        let mut numbers = vec![' '; self.width + 8];
        let mut free = 0;
        for (value, words) in ticks(&chart.x, (self.width / 6).max(3)) {
            let Some(column) = self.column(chart, value) else { continue };
            edge[column] = '┬';
            let wide = words.chars().count();
            // The last may stand one column further out than the edge.
            let most = (self.width + 1).saturating_sub(wide);
            let start = column.saturating_sub(wide / 2).min(most);
            if start >= free {
                for (offset, character) in words.chars().enumerate() {
                    numbers[start + offset] = character;
                }
                free = start + wide + 1;
            }
        }
        let edge: String = edge.into_iter().collect();
        let numbers: String = numbers.into_iter().collect();
        let title = chart.x.title.text();
        let room = self.width.saturating_sub(title.chars().count()) / 2;
        let pad = " ".repeat(margin);
        let indent = " ".repeat(room);
        format!("{pad} └{edge}\n{pad}  {}\n{pad}  {indent}{title}\n", numbers.trim_end())
    }
}

fn key(chart: &Chart, letters: &[char], columns: usize) -> String {
    let mut entries: Vec<String> = chart
        .lines
        .iter()
        .zip(letters)
        .map(|(line, letter)| format!("{letter} {}", line.label.text()))
        .collect();
    entries.extend(chart.rules.iter().map(|rule| format!("{RULE} {}", rule.label.text())));
    let has = |kind| chart.marks.iter().any(|mark| mark.kind == kind);
    if has(MarkKind::Answer) {
        entries.push("● the answer".into());
    }
    for mark in chart.marks.iter().filter(|mark| mark.kind == MarkKind::Point) {
        if let Some(label) = &mark.label {
            entries.push(format!("○ {}", label.text()));
        }
    }
    let mut text = String::new();
    let mut line = String::new();
    for entry in entries {
        if !line.is_empty() && line.chars().count() + 3 + entry.chars().count() > columns {
            text += &format!("{line}\n");
            line.clear();
        }
        line += if line.is_empty() { "" } else { "   " };
        line += &entry;
    }
    format!("{text}{line}\n")
}
