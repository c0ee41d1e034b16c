//! Columns of text that line up.

use super::style::{Paint, Style};

#[derive(Clone, Debug, Default)]
pub struct Cell {
    text: String,
    paint: Paint,
}

impl Cell {
    pub fn painted(paint: Paint, text: impl Into<String>) -> Cell {
        Cell { text: text.into(), paint }
    }

    fn width(&self) -> usize {
        self.text.chars().count()
    }
}

impl<T: Into<String>> From<T> for Cell {
    fn from(text: T) -> Cell {
        Cell { text: text.into(), paint: Paint::Plain }
    }
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Side {
    Left,
    Right,
}

#[derive(Debug, Default)]
pub struct Table {
    heads: Vec<(Cell, Side)>,
    rows: Vec<Vec<Cell>>,
}

impl Table {
    /// A table with these columns; a head may be empty.
    pub fn new(heads: &[(&str, Side)]) -> Table {
        let cell = |text: &str| Cell::painted(Paint::Faint, text);
        Table {
            heads: heads.iter().map(|&(head, side)| (cell(head), side)).collect(),
            rows: Vec::new(),
        }
    }

    pub fn row<const N: usize>(&mut self, cells: [Cell; N]) {
        self.rows.push(cells.into());
    }

    /// A row of as many cells as there happen to be columns.
    pub fn cells(&mut self, cells: Vec<Cell>) {
        self.rows.push(cells);
    }

    pub fn is_empty(&self) -> bool {
        self.rows.is_empty()
    }

    /// Each line indented by two, columns two apart, nothing after the last character.
    /// Columns without a single entry are left out.
    pub fn render(&self, style: Style) -> String {
        let widths: Vec<usize> = (0..self.heads.len())
            .map(|column| {
                let entries = self.rows.iter().filter_map(|row| row.get(column));
                match entries.map(Cell::width).max() {
                    None | Some(0) => 0,
                    Some(widest) => widest.max(self.heads[column].0.width()),
                }
            })
            .collect();
        let mut lines = Vec::with_capacity(self.rows.len() + 1);
        let heads: Vec<Cell> = self.heads.iter().map(|(head, _)| head.clone()).collect();
        if heads.iter().any(|head| !head.text.is_empty()) {
            lines.push(self.line(&heads, &widths, style));
        }
        lines.extend(self.rows.iter().map(|row| self.line(row, &widths, style)));
        lines.concat()
    }

    /// The same as a Markdown table.
    pub fn markdown(&self) -> String {
        let line = |cells: &[Cell]| {
            let cells: Vec<String> =
                cells.iter().map(|cell| cell.text.replace('|', "\\|")).collect();
            format!("| {} |\n", cells.join(" | "))
        };
        let heads: Vec<Cell> = self.heads.iter().map(|(head, _)| head.clone()).collect();
        let sides = self.heads.iter().map(|(_, side)| match side {
            Side::Left => "---",
            Side::Right => "---:",
        });
        let mut text = line(&heads);
        text += &format!("| {} |\n", sides.collect::<Vec<_>>().join(" | "));
        text.extend(self.rows.iter().map(|row| line(row)));
        text
    }

    fn line(&self, cells: &[Cell], widths: &[usize], style: Style) -> String {
        let mut line = String::from("  ");
        let mut owed = 0;
        let mut first = true;
        for ((cell, &width), (_, side)) in cells.iter().zip(widths).zip(&self.heads) {
            if width == 0 {
                continue;
            }
            owed += if first { 0 } else { 2 };
            first = false;
            let gap = width.saturating_sub(cell.width());
            if *side == Side::Right {
                owed += gap;
            }
            // Space is written only before something, so that no line ends in it.
            if !cell.text.is_empty() {
                line.extend(std::iter::repeat_n(' ', owed));
                line += &style.paint(cell.paint, &cell.text);
                owed = 0;
            } else {
                owed += cell.width();
            }
            if *side == Side::Left {
                owed += gap;
            }
        }
        line.push('\n');
        line
    }
}
