//! A small writer of SVG 1.1: shapes, text and embedded images, everything as presentation
//! attributes, so that a drawing stands alone and inside a page alike.

use std::fmt::Write as _;

use super::colour::{INK, PAPER};

/// A drawing under construction. Lengths in its own units, y downward.
#[derive(Debug, Clone)]
pub struct Svg {
    name: &'static str,
    width: f64,
    height: f64,
    body: String,
}

/// How text is set.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Type {
    /// Size of the letters.
    pub size: f64,
    /// Which point of the text its place names.
    pub anchor: Anchor,
    /// Colour.
    pub fill: &'static str,
    /// Heavier letters.
    pub bold: bool,
}

/// Which point of a text its place names.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Anchor {
    /// Its beginning.
    Start,
    /// Its middle.
    Middle,
    /// Its end.
    End,
}

impl Type {
    /// Plain text of a size, placed by its beginning.
    pub fn new(size: f64) -> Type {
        Type { size, anchor: Anchor::Start, fill: INK, bold: false }
    }

    /// The same, placed by another point.
    pub fn anchored(self, anchor: Anchor) -> Type {
        Type { anchor, ..self }
    }

    /// The same in another colour.
    pub fn coloured(self, fill: &'static str) -> Type {
        Type { fill, ..self }
    }

    /// The same in heavier letters.
    pub fn bold(self) -> Type {
        Type { bold: true, ..self }
    }
}

/// A stroke: colour, width, dashes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stroke {
    /// Colour.
    pub colour: &'static str,
    /// Width.
    pub width: f64,
    /// Dash pattern; empty for a full line.
    pub dashes: &'static str,
}

impl Stroke {
    /// A full line.
    pub fn new(colour: &'static str, width: f64) -> Stroke {
        Stroke { colour, width, dashes: "" }
    }

    /// The same, dashed.
    pub fn dashed(self, dashes: &'static str) -> Stroke {
        Stroke { dashes, ..self }
    }

    fn attributes(&self) -> String {
        let dashes = match self.dashes {
            "" => String::new(),
            d => format!(" stroke-dasharray=\"{d}\""),
        };
        format!(" stroke=\"{}\" stroke-width=\"{}\"{dashes}", self.colour, short(self.width))
    }
}

/// A rectangle on the page: left, top, width, height.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Box {
    /// Left end.
    pub x: f64,
    /// Upper end.
    pub y: f64,
    /// Width.
    pub w: f64,
    /// Height.
    pub h: f64,
}

impl Box {
    /// Whether two rectangles share an area.
    pub fn overlaps(&self, other: &Box) -> bool {
        let along = |a: f64, length: f64, b: f64, other: f64| a < b + other && b < a + length;
        along(self.x, self.w, other.x, other.w) && along(self.y, self.h, other.y, other.h)
    }
}

impl Svg {
    /// An empty drawing; `name` is a word of its own for every kind of picture.
    pub fn new(name: &'static str, width: f64) -> Svg {
        Svg { name, width, height: 0.0, body: String::new() }
    }

    /// Makes the drawing reach at least so far down.
    pub fn reach(&mut self, y: f64) {
        self.height = self.height.max(y);
    }

    /// How far down the drawing reaches.
    pub fn bottom(&self) -> f64 {
        self.height
    }

    /// Anything else, as written.
    pub fn raw(&mut self, text: &str) {
        self.body.push_str(text);
        self.body.push('\n');
    }

    /// A line from a to b.
    pub fn line(&mut self, a: [f64; 2], b: [f64; 2], stroke: Stroke) {
        let [[x1, y1], [x2, y2]] = [a.map(short), b.map(short)];
        self.raw(&format!(
            "<line x1=\"{x1}\" y1=\"{y1}\" x2=\"{x2}\" y2=\"{y2}\"{}/>",
            stroke.attributes()
        ));
    }

    /// Several lines in one element, each a run of points.
    pub fn lines(&mut self, runs: &[Vec<[f64; 2]>], stroke: Stroke) {
        if runs.iter().all(Vec::is_empty) {
            return;
        }
        let d: String = runs.iter().map(|run| path(run)).collect();
        self.raw(&format!(
            "<path d=\"{d}\" fill=\"none\" stroke-linejoin=\"round\"{}/>",
            stroke.attributes()
        ));
    }

    /// A filled polygon.
    pub fn polygon(&mut self, points: &[[f64; 2]], fill: &str) {
        self.raw(&format!("<path d=\"{}Z\" fill=\"{fill}\"/>", path(points)));
    }

    /// A rectangle, filled (`none` for its edge alone) and edged.
    pub fn rect(&mut self, place: Box, fill: &str, edge: Option<Stroke>) {
        let Box { x, y, w, h } = place;
        let edge = edge.map(|e| e.attributes()).unwrap_or_default();
        self.raw(&format!(
            "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" fill=\"{fill}\"{edge}/>",
            short(x),
            short(y),
            short(w.max(0.0)),
            short(h.max(0.0))
        ));
    }

    /// A filled circle with an edge.
    pub fn circle(&mut self, at: [f64; 2], radius: f64, fill: &str, edge: Option<Stroke>) {
        let edge = edge.map(|e| e.attributes()).unwrap_or_default();
        let [x, y] = at.map(short);
        self.raw(&format!(
            "<circle cx=\"{x}\" cy=\"{y}\" r=\"{}\" fill=\"{fill}\"{edge}/>",
            short(radius)
        ));
    }

    /// A line of text; `at` is on its base line.
    pub fn text(&mut self, at: [f64; 2], text: &str, set: Type) {
        if text.is_empty() {
            return;
        }
        let anchor = match set.anchor {
            Anchor::Start => "",
            Anchor::Middle => " text-anchor=\"middle\"",
            Anchor::End => " text-anchor=\"end\"",
        };
        let weight = if set.bold { " font-weight=\"bold\"" } else { "" };
        let [x, y] = at.map(short);
        self.raw(&format!(
            "<text x=\"{x}\" y=\"{y}\" font-size=\"{}\" fill=\"{}\"{anchor}{weight}>{}</text>",
            short(set.size),
            set.fill,
            escaped(text)
        ));
    }

    /// A line of text with a rim of paper, to be read on anything.
    pub fn haloed(&mut self, at: [f64; 2], text: &str, set: Type) {
        self.raw(&format!(
            "<g paint-order=\"stroke\" stroke=\"{PAPER}\" stroke-width=\"3\" \
             stroke-linejoin=\"round\">"
        ));
        self.text(at, text, set);
        self.raw("</g>");
    }

    /// An embedded PNG, stretched over its place.
    pub fn image(&mut self, place: Box, png: &[u8]) {
        use base64::Engine as _;
        let data = base64::engine::general_purpose::STANDARD.encode(png);
        let Box { x, y, w, h } = place;
        self.raw(&format!(
            "<image x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" preserveAspectRatio=\"none\" \
             xlink:href=\"data:image/png;base64,{data}\"/>",
            short(x),
            short(y),
            short(w),
            short(h)
        ));
    }

    /// The whole drawing; `title` and `told` say in words what it shows. The stated size is half
    /// as large again as the drawing's units; what embeds it may scale it.
    pub fn finish(self, title: &str, told: &str) -> String {
        let (w, h) = (short(self.width), short(self.height));
        let mut out = String::with_capacity(self.body.len() + 800);
        let written = write!(
            out,
            "<svg xmlns=\"http://www.w3.org/2000/svg\" \
             xmlns:xlink=\"http://www.w3.org/1999/xlink\" viewBox=\"0 0 {w} {h}\" width=\"{}\" \
             height=\"{}\" font-family=\"sans-serif\" role=\"img\" aria-labelledby=\"{id}-title \
             {id}-told\">\n<title id=\"{id}-title\">{}</title>\n<desc \
             id=\"{id}-told\">{}</desc>\n<rect width=\"{w}\" height=\"{h}\" \
             fill=\"{PAPER}\"/>\n{}</svg>\n",
            short(1.5 * self.width),
            short(1.5 * self.height),
            escaped(title),
            escaped(told),
            self.body,
            id = self.name,
        );
        debug_assert!(written.is_ok());
        out
    }
}

/// Path data of a run of points.
fn path(run: &[[f64; 2]]) -> String {
    let mut d = String::new();
    for (n, point) in run.iter().enumerate() {
        let [x, y] = point.map(short);
        let written = write!(d, "{}{x} {y}", if n == 0 { 'M' } else { 'L' });
        debug_assert!(written.is_ok());
    }
    d
}

/// A coordinate with at most two decimals; what is not finite becomes 0.
fn short(value: f64) -> String {
    if !value.is_finite() {
        return "0".into();
    }
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".into() } else { text.into() }
}

/// Text as XML character data: marked characters escaped, characters that XML 1.0 cannot hold
/// replaced.
pub fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\n' | '\t' | '\r' => out.push(' '),
            c if c.is_control() || matches!(c, '\u{FFFE}' | '\u{FFFF}') => out.push('\u{FFFD}'),
            c => out.push(c),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_cannot_break_out_of_their_text() {
        assert_eq!(escaped("a<b & \"c\"\u{1}\n"), "a&lt;b &amp; &quot;c&quot;\u{FFFD} ");
    }

    #[test]
    fn coordinates_are_short_and_always_numbers() {
        let shown = [1.0, -0.001, 12.3456, f64::NAN, f64::INFINITY, 100.0].map(short);
        assert_eq!(shown, ["1", "0", "12.35", "0", "0", "100"]);
    }
}
