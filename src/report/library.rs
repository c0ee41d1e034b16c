//! The built-in sets for people: the list of them, one set's constants, and all that is
//! known of the reactions of a species.

use std::sync::Arc;

use super::constant::{Moved, Told, range, words};
use super::style::{Paint, Style};
use super::table::{Cell, Side, Table};
use super::wrap::wrapped;
use crate::problem::builtin::definitions;
use crate::problem::reaction::{Origin, Reaction};
use crate::problem::sets::{self, Set};
use crate::problem::sort::Sort;
use crate::rules::figures::{celsius, significant};
use crate::rules::words::list;

/// Lines are wrapped to this.
const WIDTH: usize = 80;

/// The sets of an edition with what each holds, and the older editions.
pub fn sets(edition: Option<u32>, style: Style) -> String {
    let newest = sets::all().map(|set| set.edition).max().unwrap_or_default();
    let shown = edition.unwrap_or(newest);
    let of = |edition: u32| sets::all().filter(move |set| set.edition == edition);
    let widest = of(shown).map(|set| set.name.len()).max().unwrap_or(0);
    let mut text = style.paint(Paint::Heading, &format!("Built-in sets, edition {shown}")) + "\n";
    let indent = widest + 4;
    for set in of(shown) {
        let summary = wrapped(set.summary(), indent, indent, WIDTH);
        let name = format!("{:widest$}", set.name);
        text += &format!("\n  {}  {summary}\n", style.paint(Paint::Heading, &name));
        let counts = wrapped(&counts(set), indent, indent, WIDTH);
        text += &format!("{:indent$}{}\n", "", style.paint(Paint::Faint, &counts));
    }
    text.push('\n');
    let others = (1..=newest).filter(|&other| other != shown);
    for other in others {
        let names: Vec<_> = of(other).map(|set| set.name.to_owned()).collect();
        let words = format!(
            "Edition {other}: {}. A file asks for it by its number, as in `use {} {other}`.",
            list(&names, "and"),
            names.first().map_or("aqueous", String::as_str),
        );
        text += &(wrapped(&words, 0, 0, WIDTH) + "\n");
    }
    text += "`lyate library SET` shows the constants of a set.\n";
    text
}

/// The reactions that a set writes itself; all that it brings where it writes none.
fn own(set: &'static Set) -> Vec<Arc<Reaction>> {
    let all = &definitions(set).reactions;
    let is_own = |reaction: &&Arc<Reaction>| reaction.origin.words() == words_of(set);
    let own: Vec<_> = all.iter().filter(is_own).cloned().collect();
    if own.is_empty() { all.clone() } else { own }
}

fn words_of(set: &Set) -> String {
    format!("{} {}", set.name, set.edition)
}

/// The sets that come with a set, by name.
fn brought(set: &'static Set) -> Vec<String> {
    let mut names = Vec::new();
    for reaction in &definitions(set).reactions {
        if let Origin::Set { name, .. } = reaction.origin
            && name != set.name
            && !names.iter().any(|known| known == name)
        {
            names.push(name.to_owned());
        }
    }
    names
}

/// How many reactions of each sort a set holds, in words.
fn counts(set: &'static Set) -> String {
    let reactions = own(set);
    let words = Sort::ALL.iter().filter_map(|&sort| {
        let count = reactions.iter().filter(|reaction| reaction.sort() == sort).count();
        let (one, many) = match sort {
            Sort::Acid => ("acid", "acids"),
            Sort::Complex => ("complex", "complexes"),
            Sort::Solid => ("solid", "solids"),
            Sort::Gas => ("gas", "gases"),
            Sort::Couple => ("couple", "couples"),
            Sort::Other => ("other reaction", "other reactions"),
        };
        (count > 0).then(|| format!("{count} {}", if count == 1 { one } else { many }))
    });
    words.collect::<Vec<_>>().join(", ")
}

fn heading(sort: Sort) -> &'static str {
    match sort {
        Sort::Acid => "Acids and bases",
        Sort::Complex => "Complexes",
        Sort::Solid => "Solids",
        Sort::Gas => "Gases",
        Sort::Couple => "Couples with electrons",
        Sort::Other => "Other reactions",
    }
}

/// A set's remarks, its constants at a temperature in kelvin, and the sources of these.
pub fn set(set: &'static Set, kelvin: f64, style: Style) -> String {
    let title = format!("{}, edition {}", set.name, set.edition);
    let mut text = format!("{}\n\n", style.paint(Paint::Heading, &title));
    text += &(wrapped(set.summary(), 0, 0, WIDTH) + "\n");
    text += &remarks(set);
    let brought = brought(set);
    if !brought.is_empty() {
        let words = format!("It brings {} with it.", list(&brought, "and"));
        text += &format!("\n{}\n", wrapped(&words, 0, 0, WIDTH));
    }
    let found = own(set);
    let mut sources: Vec<&str> = Vec::new();
    for sort in Sort::ALL {
        let at = format!("at {}", celsius(kelvin));
        let mut table = Table::new(&[
            ("", Side::Left),
            ("", Side::Right),
            (&at, Side::Right),
            ("temperature", Side::Left),
            ("source", Side::Right),
        ]);
        for reaction in found.iter().filter(|reaction| reaction.sort() == sort) {
            let source = reaction.source.as_deref().unwrap_or("no source is given");
            let number = sources.iter().position(|known| *known == source).unwrap_or_else(|| {
                sources.push(source);
                sources.len() - 1
            });
            let Some(told) = Told::new(reaction, kelvin) else { continue };
            let doubtful = told.moved != Moved::Fine;
            let paint = if doubtful { Paint::Doubtful } else { Paint::Faint };
            table.row([
                reaction.equation.as_str().into(),
                Cell::painted(Paint::Faint, told.word),
                told.figure.into(),
                Cell::painted(paint, range(reaction)),
                Cell::painted(Paint::Faint, (number + 1).to_string()),
            ]);
        }
        if !table.is_empty() {
            text += &format!("\n{}\n", style.paint(Paint::Heading, heading(sort)));
            text += &table.render(style);
        }
    }
    if sources.is_empty() {
        return text;
    }
    text += &format!("\n{}\n", style.paint(Paint::Heading, "Sources"));
    for (number, source) in sources.iter().enumerate() {
        text += &format!("  {:>2}  {}\n", number + 1, wrapped(source, 6, 6, WIDTH));
    }
    text
}

/// The opening comment as it stands in the set.
fn remarks(set: &Set) -> String {
    let lines: Vec<&str> = set.remarks().collect();
    let mut text = String::new();
    for paragraph in lines.split(|line| line.is_empty()).filter(|lines| !lines.is_empty()) {
        text.push('\n');
        if paragraph.iter().any(|line| line.starts_with("- ")) {
            text.extend(paragraph.iter().map(|line| format!("{line}\n")));
        } else {
            text += &(wrapped(&paragraph.join(" "), 0, 0, WIDTH) + "\n");
        }
    }
    text
}

/// Everything about each of these reactions: its constant at a temperature in kelvin, how
/// that moves, what is doubtful about it, and where it comes from.
pub fn reactions(set: &'static Set, reactions: &[&Reaction], kelvin: f64, style: Style) -> String {
    let blocks = reactions.iter().map(|reaction| {
        let mut text = style.paint(Paint::Heading, &reaction.equation) + "\n";
        let Some(told) = Told::new(reaction, kelvin) else { return text };
        let uncertainty = reaction.constant.as_ref().and_then(|constant| constant.uncertainty);
        let uncertainty =
            uncertainty.map_or(String::new(), |u| format!(" ± {}", significant(u, 2)));
        let (word, figure, at) = (told.word, told.figure, celsius(kelvin));
        text += &format!("  {word} {figure}{uncertainty} at {at}\n");
        text += &format!("  temperature: {}\n", words(reaction));
        if let Some(note) = told.moved.note(kelvin) {
            let note = wrapped(&format!("note: {note}"), 2, 4, WIDTH);
            text += &format!("  {}\n", style.paint(Paint::Doubtful, &note));
        }
        let source = reaction.source.as_deref().unwrap_or("no source is given");
        let source = wrapped(&format!("source: {source}"), 2, 4, WIDTH);
        let origin = reaction.origin.words();
        let own = words_of(set);
        let by = if origin == own { own } else { format!("{own}, by {origin}") };
        text + &format!("  {}\n", style.paint(Paint::Faint, &source)) + &format!("  set: {by}\n")
    });
    blocks.collect::<Vec<_>>().join("\n")
}
