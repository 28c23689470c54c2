//! Painter one: a picture as SVG text.

use std::fmt::Write as _;

use crate::figure::font::Face;
use crate::figure::ink::{Color, Ink, Palette};
use crate::figure::metrics;
use crate::figure::picture::{
    Anchor, Dash, Mark, Picture, Point, REACH, Rect, Region, Spot, Stroke, Telling, Turn, Word,
};

/// Writes a picture as SVG text, in the colours of a palette.
///
/// Marks of one look that follow each other share a group, words come after all marks, and the
/// regions with a meaning lie on top, unseen, with a title for the pointer. Fonts are named, not
/// embedded.
#[must_use]
pub fn svg(picture: &Picture, palette: &Palette) -> String {
    let mut out = Writer {
        text: String::new(),
        palette,
        clips: 0,
        look: String::new(),
    };
    out.picture(picture);
    out.text
}

struct Writer<'a> {
    text: String,
    palette: &'a Palette,
    clips: usize,
    /// The look of the group that is open; empty for none.
    look: String,
}

impl Writer<'_> {
    fn line(&mut self, line: &str) {
        self.text.push_str(line);
        self.text.push('\n');
    }

    fn picture(&mut self, picture: &Picture) {
        let (width, height) = (num(picture.size.width), num(picture.size.height));
        self.line(&format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{width}\" height=\"{height}\" \
             viewBox=\"0 0 {width} {height}\" role=\"img\">"
        ));
        self.element("title", &picture.title);
        self.element("desc", &picture.description);
        let ground = self.palette.color(Ink::Ground).hex();
        self.line(&format!(
            "<rect width=\"{width}\" height=\"{height}\" fill=\"{ground}\"/>"
        ));
        for mark in &picture.marks {
            self.mark(mark);
        }
        self.close_look();
        for word in &picture.words {
            self.word(word);
        }
        let told: Vec<&Spot> = picture
            .spots
            .iter()
            .filter(|spot| spot.telling == Telling::Everyone && !spot.text.is_empty())
            .collect();
        if !told.is_empty() {
            self.line("<g fill=\"none\" stroke=\"none\" pointer-events=\"all\">");
            for spot in told {
                self.spot(spot);
            }
            self.line("</g>");
        }
        self.line("</svg>");
    }

    fn element(&mut self, name: &str, text: &str) {
        if !text.is_empty() {
            self.line(&format!("<{name}>{}</{name}>", escaped(text)));
        }
    }

    /// Opens a group of the given look, unless it is the one that is open.
    fn with_look(&mut self, look: String) {
        if self.look != look {
            self.close_look();
            self.line(&format!("<g {look}>"));
            self.look = look;
        }
    }

    fn close_look(&mut self) {
        if !self.look.is_empty() {
            self.line("</g>");
            self.look.clear();
        }
    }

    fn mark(&mut self, mark: &Mark) {
        match mark {
            Mark::Line { points, stroke } => {
                self.with_look(self.look_of(None, Some(*stroke)));
                self.line(&format!("<path d=\"{}\"/>", path(points)));
            }
            Mark::Area { points, ink } => {
                self.with_look(self.look_of(Some(*ink), None));
                self.line(&format!("<path d=\"{}Z\"/>", path(points)));
            }
            Mark::Disc {
                center,
                radius,
                fill,
                stroke,
            } => {
                self.with_look(self.look_of(*fill, *stroke));
                self.line(&format!("<circle {}/>", circle(*center, *radius)));
            }
            Mark::Rect {
                rect,
                radius,
                fill,
                stroke,
            } => {
                self.with_look(self.look_of(*fill, *stroke));
                let corner = if *radius > 0.0 {
                    format!(" rx=\"{}\"", num(*radius))
                } else {
                    String::new()
                };
                self.line(&format!("<rect {}{corner}/>", sides(*rect)));
            }
            Mark::Clip { rect, marks } => {
                self.close_look();
                self.clips += 1;
                let id = self.clips;
                self.line(&format!(
                    "<clipPath id=\"clip{id}\"><rect {}/></clipPath>",
                    sides(*rect)
                ));
                self.line(&format!("<g clip-path=\"url(#clip{id})\">"));
                for mark in marks {
                    self.mark(mark);
                }
                self.close_look();
                self.line("</g>");
            }
        }
    }

    fn look_of(&self, fill: Option<Ink>, stroke: Option<Stroke>) -> String {
        let mut look = match fill {
            Some(ink) => self.paint("fill", ink),
            None => "fill=\"none\"".to_owned(),
        };
        if let Some(stroke) = stroke {
            let _ = write!(
                look,
                " {} stroke-width=\"{}\" stroke-linecap=\"round\" stroke-linejoin=\"round\"",
                self.paint("stroke", stroke.ink),
                num(stroke.width)
            );
            match stroke.dash {
                Dash::Solid => {}
                Dash::Dashed => look.push_str(" stroke-dasharray=\"3 3\""),
            }
        }
        look
    }

    fn paint(&self, what: &str, ink: Ink) -> String {
        let color: Color = self.palette.color(ink);
        let opacity = if color.opacity < 1.0 {
            format!(" {what}-opacity=\"{}\"", num(f64::from(color.opacity)))
        } else {
            String::new()
        };
        format!("{what}=\"{}\"{opacity}", color.hex())
    }

    fn word(&mut self, word: &Word) {
        let anchor = match word.anchor {
            Anchor::Start => "",
            Anchor::Middle => " text-anchor=\"middle\"",
            Anchor::End => " text-anchor=\"end\"",
        };
        let (x, y) = (num(word.at.x), num(word.at.y));
        let turn = match word.turn {
            Turn::Level => String::new(),
            Turn::Up => format!(" transform=\"rotate(-90 {x} {y})\""),
        };
        let title = word
            .full
            .as_ref()
            .map(|full| format!("<title>{}</title>", escaped(full)))
            .unwrap_or_default();
        self.line(&format!(
            "<text x=\"{x}\" y=\"{y}\" {} font-size=\"{}\" {}{anchor}{turn}>{}{title}</text>",
            font(word.face),
            num(word.size),
            self.paint("fill", word.ink),
            letters(word),
        ));
    }

    fn spot(&mut self, spot: &Spot) {
        let title = format!("<title>{}</title>", escaped(&spot.text));
        match &spot.region {
            Region::Rect(rect) => self.line(&format!("<rect {}>{title}</rect>", sides(*rect))),
            Region::Disc { center, radius } => self.line(&format!(
                "<circle {}>{title}</circle>",
                circle(*center, *radius)
            )),
            Region::Line(points) => self.line(&format!(
                "<path stroke-width=\"{}\" pointer-events=\"stroke\" d=\"{}\">{title}</path>",
                num(2.0 * REACH),
                path(points)
            )),
        }
    }
}

/// The text of a word, with signs that its font lacks set in the one for symbols.
fn letters(word: &Word) -> String {
    let mut out = String::new();
    for (face, run) in metrics::runs(&word.text, word.face) {
        if face == word.face {
            out.push_str(&escaped(run));
        } else {
            let _ = write!(
                out,
                "<tspan font-family=\"{}\">{}</tspan>",
                face.family(),
                escaped(run)
            );
        }
    }
    out
}

fn font(face: Face) -> String {
    // The generic family is for readers' programs on machines that lack the font.
    let generic = match face {
        Face::Sans | Face::SansStrong | Face::Symbols => "sans-serif",
        Face::Serif | Face::SerifItalic | Face::SerifStrong => "serif",
    };
    let mut font = format!("font-family=\"{}, {generic}\"", face.family());
    if face.weight() != 400 {
        let _ = write!(font, " font-weight=\"{}\"", face.weight());
    }
    if face.is_italic() {
        font.push_str(" font-style=\"italic\"");
    }
    font
}

fn path(points: &[Point]) -> String {
    let mut path = String::new();
    for (at, point) in points.iter().enumerate() {
        path.push(if at == 0 { 'M' } else { 'L' });
        let _ = write!(path, "{} {}", num(point.x), num(point.y));
    }
    path
}

fn circle(center: Point, radius: f64) -> String {
    format!(
        "cx=\"{}\" cy=\"{}\" r=\"{}\"",
        num(center.x),
        num(center.y),
        num(radius)
    )
}

fn sides(rect: Rect) -> String {
    format!(
        "x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\"",
        num(rect.x),
        num(rect.y),
        num(rect.width),
        num(rect.height)
    )
}

/// A length as it is written in SVG: hundredths at most. Coordinates are no text for people, so
/// they do not come from `base::number`.
fn num(length: f64) -> String {
    let hundredths = (length * 100.0).round() / 100.0 + 0.0;
    format!("{hundredths}")
}

/// Text as it may stand in XML. Control characters have no place there and become spaces.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for letter in text.chars() {
        match letter {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\u{FFFE}' | '\u{FFFF}' => out.push(' '),
            control if control.is_control() => out.push(' '),
            plain => out.push(plain),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_with_markup_in_them_stay_text() {
        assert_eq!(escaped("a<b & \"c\"\u{7}"), "a&lt;b &amp; &quot;c&quot; ");
    }

    #[test]
    fn lengths_are_short_and_never_minus_zero() {
        assert_eq!(num(-0.0004), "0");
        assert_eq!(num(12.0), "12");
        assert_eq!(num(0.15_f32.into()), "0.15");
    }
}
