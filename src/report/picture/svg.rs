//! A layout as SVG, for a page, a browser or print.
//!
//! Written out element by element: a plotting library would choose places and styles that
//! this picture has reasons of its own for, and none keeps classes that a style sheet can
//! turn from light to dark.

use std::fmt::Write as _;

use quick_xml::Writer;
use quick_xml::events::{BytesDecl, BytesEnd, BytesStart, BytesText, Event};

use super::chart::{Chart, MarkKind};
use super::geometry::Point;
use super::layout::{Kind, Layout, Text};
use super::theme::{Colours, DARK, HEAVY_WEIGHT, LIGHT, Look, Theme, WEIGHT};
use super::words::{Level, Piece};

/// Faces of one measure; [`super::words`] reckons with it.
const FACES: &str = "Helvetica, Arial, 'Liberation Sans', 'Nimbus Sans', Arimo, sans-serif";
/// From the top of a line to its base, over its size.
const ASCENT: f64 = 0.76;
/// How far a superscript stands above the line and a subscript below, over its size.
const RAISED: f64 = 0.36;
const LOWERED: f64 = 0.2;

/// The picture as a complete SVG document.
///
/// # Errors
/// None that memory does not give: the writer's own type has them.
pub fn svg(chart: &Chart, layout: &Layout, theme: Theme) -> std::io::Result<String> {
    let mut page = Page { writer: Writer::new_with_indent(Vec::new(), b' ', 1) };
    page.event(Event::Decl(BytesDecl::new("1.0", Some("UTF-8"), None)))?;
    let (width, height) = (number(layout.width), number(layout.height));
    let view = format!("0 0 {width} {height}");
    page.open(
        "svg",
        &[
            ("xmlns", "http://www.w3.org/2000/svg"),
            ("width", &width),
            ("height", &height),
            ("viewBox", &view),
            ("role", "img"),
            ("font-family", FACES),
        ],
    )?;
    page.element("title", &format!("{}: {}", chart.title, chart.subtitle))?;
    page.element("desc", &description(chart))?;
    page.element("style", &style(theme))?;
    page.empty("rect", &[("class", "paper"), ("width", &width), ("height", &height)])?;
    page.path("grid", &layout.grid)?;
    let plot = layout.plot;
    page.empty(
        "rect",
        &[
            ("class", "frame"),
            ("x", &number(plot.left)),
            ("y", &number(plot.top)),
            ("width", &number(plot.width())),
            ("height", &number(plot.height())),
        ],
    )?;
    page.path("rule", &layout.rules)?;
    // The heavy lines lie below, so that what runs along them is seen.
    for heavy in [true, false] {
        for stroke in layout.strokes.iter().filter(|stroke| stroke.look.heavy == heavy) {
            page.stroke(&stroke.pieces, stroke.look, &stroke.name)?;
        }
    }
    for &(from, to, look) in &layout.samples {
        page.stroke(&[vec![from, to]], look, "")?;
    }
    page.path("leader", &layout.leaders)?;
    for &(at, radius, kind) in &layout.marks {
        let class = match kind {
            MarkKind::Answer => "answer",
            MarkKind::Point => "point",
        };
        let (x, y, radius) = (number(at.x), number(at.y), number(radius));
        page.empty("circle", &[("class", class), ("cx", &x), ("cy", &y), ("r", &radius)])?;
    }
    for text in &layout.texts {
        page.text(text)?;
    }
    page.event(Event::End(BytesEnd::new("svg")))?;
    let bytes = page.writer.into_inner();
    Ok(String::from_utf8_lossy(&bytes).into_owned() + "\n")
}

struct Page {
    writer: Writer<Vec<u8>>,
}

impl Page {
    fn event(&mut self, event: Event) -> std::io::Result<()> {
        self.writer.write_event(event)
    }

    fn start<'a>(name: &'a str, attributes: &[(&'a str, &'a str)]) -> BytesStart<'a> {
        BytesStart::new(name).with_attributes(attributes.iter().copied())
    }

    fn open(&mut self, name: &str, attributes: &[(&str, &str)]) -> std::io::Result<()> {
        self.event(Event::Start(Self::start(name, attributes)))
    }

    fn empty(&mut self, name: &str, attributes: &[(&str, &str)]) -> std::io::Result<()> {
        self.event(Event::Empty(Self::start(name, attributes)))
    }

    fn element(&mut self, name: &str, text: &str) -> std::io::Result<()> {
        self.open(name, &[])?;
        self.event(Event::Text(BytesText::new(&allowed(text))))?;
        self.event(Event::End(BytesEnd::new(name)))
    }

    /// Straight strokes of one class.
    fn path(&mut self, class: &str, strokes: &[(Point, Point)]) -> std::io::Result<()> {
        if strokes.is_empty() {
            return Ok(());
        }
        let pieces: Vec<Vec<Point>> = strokes.iter().map(|&(from, to)| vec![from, to]).collect();
        self.empty("path", &[("class", class), ("d", &path(&pieces))])
    }

    fn stroke(&mut self, pieces: &[Vec<Point>], look: Look, name: &str) -> std::io::Result<()> {
        let class = match look.hue {
            Some(hue) => format!("line hue-{}", hue + 1),
            None => "line main".to_owned(),
        };
        let dash: Vec<String> = look.dash.iter().map(|length| number(*length)).collect();
        let (dash, d) = (dash.join(" "), path(pieces));
        let mut attributes = vec![("class", class.as_str()), ("d", d.as_str())];
        if !dash.is_empty() {
            attributes.push(("stroke-dasharray", &dash));
        }
        if name.is_empty() {
            return self.empty("path", &attributes);
        }
        self.open("path", &attributes)?;
        self.element("title", name)?;
        self.event(Event::End(BytesEnd::new("path")))
    }

    fn text(&mut self, text: &Text) -> std::io::Result<()> {
        let class = match text.kind {
            Kind::Title => "title",
            Kind::Subtitle => "subtitle",
            Kind::AxisTitle => "axis",
            Kind::Tick => "tick",
            Kind::Label => "label",
            Kind::MarkLabel => "label small",
            Kind::Note => "note",
        };
        let size = text.kind.size();
        let middle = text.frame.middle();
        let high = if text.turned { text.frame.width() } else { text.frame.height() };
        // The letters stand in the middle of their frame.
        let down = 0.5 * high - 0.5 * size + ASCENT * size + 0.08 * size;
        let left_bound = matches!(text.kind, Kind::Title | Kind::Subtitle | Kind::Note);
        let (x, anchor) =
            if left_bound { (text.frame.left, "start") } else { (middle.x, "middle") };
        let y = if text.turned { middle.y } else { text.frame.top + down };
        let turn;
        let (x, y, size) = (number(x), number(y), number(size));
        let mut attributes =
            vec![("class", class), ("font-size", size.as_str()), ("text-anchor", anchor)];
        let (turned_x, turned_y);
        if text.turned {
            turned_x = number(text.frame.left + down);
            turned_y = number(middle.y);
            turn = format!("translate({turned_x} {turned_y}) rotate(-90)");
            attributes.push(("transform", &turn));
        } else {
            attributes.extend([("x", x.as_str()), ("y", y.as_str())]);
        }
        // White space inside counts, so that it is written on one line.
        let mut inside = String::new();
        let mut offset = 0.0;
        for piece in &text.words.0 {
            write_piece(&mut inside, piece, text.kind.size(), &mut offset);
        }
        self.open("text", &attributes)?;
        self.event(Event::Text(BytesText::from_escaped(inside)))?;
        self.event(Event::End(BytesEnd::new("text")))
    }
}

/// A piece as a `tspan` that moves up or down from where the last one stood.
fn write_piece(inside: &mut String, piece: &Piece, line: f64, offset: &mut f64) {
    let wanted = match piece.level {
        Level::Line => 0.0,
        Level::Sub => LOWERED * line,
        Level::Super => -RAISED * line,
    };
    let move_by = wanted - *offset;
    *offset = wanted;
    let text = allowed(&piece.text);
    let text = quick_xml::escape::escape(&text);
    // Writing to a string cannot fail.
    let _ = if move_by == 0.0 && piece.level == Level::Line {
        write!(inside, "{text}")
    } else {
        let size = number(piece.size(line));
        write!(inside, "<tspan dy=\"{}\" font-size=\"{size}\">{text}</tspan>", number(move_by))
    };
}

/// Text without the control characters that XML forbids.
fn allowed(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            '\t' | '\n' | '\r' => ' ',
            '\u{fffe}' | '\u{ffff}' => '\u{fffd}',
            c if c.is_control() => '\u{fffd}',
            c => c,
        })
        .collect()
}

fn path(pieces: &[Vec<Point>]) -> String {
    let mut path = String::new();
    for piece in pieces {
        for (index, at) in piece.iter().enumerate() {
            let letter = if index == 0 { 'M' } else { 'L' };
            let _ = write!(path, "{letter}{} {}", number(at.x), number(at.y));
        }
    }
    path
}

/// To a hundredth of a pixel.
fn number(value: f64) -> String {
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

/// What the picture shows, for who cannot see it.
fn description(chart: &Chart) -> String {
    let lines: Vec<String> = chart.lines.iter().map(|line| line.label.text()).collect();
    let mut words = format!("{} against {}: ", chart.y.title.text(), chart.x.title.text());
    words += &lines.join("; ");
    for rule in &chart.rules {
        words += &format!(". {}", rule.label.text());
    }
    for note in &chart.notes {
        words += &format!(". {}", note.text());
    }
    words
}

fn style(theme: Theme) -> String {
    let mut style = format!(
        "path{{fill:none;stroke-linejoin:round}}\
         .title{{font-weight:bold}}\
         .grid{{stroke-width:.8}}.frame{{fill:none;stroke-width:1}}\
         .rule{{stroke-width:1;stroke-dasharray:3 3}}.leader{{stroke-width:.8}}\
         .line{{stroke-width:{WEIGHT}}}.main{{stroke-width:{HEAVY_WEIGHT}}}\
         .point{{stroke-width:1.4}}.answer{{stroke-width:1.6}}\
         .label{{stroke-width:3;paint-order:stroke;stroke-linejoin:round}}"
    );
    match theme {
        Theme::Light => style += &colours(&LIGHT),
        Theme::Dark => style += &colours(&DARK),
        Theme::Auto => {
            style += &colours(&LIGHT);
            // On paper it stays light.
            let dark = colours(&DARK);
            style += &format!("@media screen and (prefers-color-scheme:dark){{{dark}}}");
        }
    }
    style
}

fn colours(colours: &Colours) -> String {
    let Colours { paper, ink, faint, grid, frame, hues } = colours;
    let mut style = format!(
        ".paper{{fill:{paper}}}text{{fill:{ink}}}.subtitle,.note,.tick,.small{{fill:{faint}}}\
         .grid{{stroke:{grid}}}.frame{{stroke:{frame}}}.rule,.leader{{stroke:{faint}}}\
         .main{{stroke:{ink}}}.label{{stroke:{paper}}}\
         .point{{fill:{paper};stroke:{ink}}}.answer{{fill:{ink};stroke:{paper}}}"
    );
    for (index, hue) in hues.iter().enumerate() {
        style += &format!(".hue-{}{{stroke:{hue}}}", index + 1);
    }
    style
}
