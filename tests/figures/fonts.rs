//! The table of widths against the fonts themselves, as resvg sets them.

use resvg::usvg::{Group, Node, Tree};
use widefold::export::picture::options;
use widefold::figure::font::Face;
use widefold::figure::ink::{Ink, Palette};
use widefold::figure::metrics;
use widefold::figure::picture::{Anchor, Picture, Point, Rect, Size, Turn, Word};
use widefold::figure::svg::svg;

/// The boxes of the outlines of all texts in an SVG, in order.
pub fn text_boxes(text: &str) -> Vec<Rect> {
    let tree = Tree::from_str(text, &options()).unwrap();
    let mut boxes = Vec::new();
    collect(tree.root(), &mut boxes);
    boxes
}

fn collect(group: &Group, boxes: &mut Vec<Rect>) {
    for node in group.children() {
        match node {
            Node::Text(text) => {
                let outline = text.flattened().abs_bounding_box();
                boxes.push(Rect::new(
                    f64::from(outline.x()),
                    f64::from(outline.y()),
                    f64::from(outline.width()),
                    f64::from(outline.height()),
                ));
            }
            Node::Group(group) => collect(group, boxes),
            Node::Path(_) | Node::Image(_) => {}
        }
    }
}

/// The box of one word's outlines.
fn painted(text: &str, face: Face) -> Rect {
    let picture = Picture {
        title: String::new(),
        description: String::new(),
        size: Size::new(2000.0, 200.0),
        marks: Vec::new(),
        words: vec![Word {
            text: text.to_owned(),
            full: None,
            at: Point::new(100.0, 100.0),
            anchor: Anchor::Start,
            size: 40.0,
            turn: Turn::Level,
            face,
            ink: Ink::Text,
        }],
        spots: Vec::new(),
        rulers: Vec::new(),
    };
    text_boxes(&svg(&picture, &Palette::paper())).remove(0)
}

#[test]
fn widths_agree_with_the_fonts_as_they_are_painted() {
    let texts = [
        "salt in moisture, g/100 g",
        "−0.0312",
        "1.5 × 10⁻⁹",
        "größte Fläche, R² ≤ 0.80",
        "λ → ∞ und Σᵢ wᵢ",
        "Häm, ÀÉÎ, Łódź, Ψυχή, Живот",
    ];
    for face in Face::ALL {
        // The font for symbols need not have all letters: no text is set in it as a whole.
        let has_all = |text: &&str| text.chars().all(|letter| metrics::has(letter, face));
        let whole = texts
            .iter()
            .filter(|text| face != Face::Symbols || has_all(text));
        for text in whole {
            let (told, seen) = (metrics::width(text, face, 40.0), painted(text, face).width);
            // Outlines lack the air at both ends of a text; kerning draws letters together.
            assert!(
                seen <= told + 2.0 && seen >= 0.93 * told - 8.0,
                "{face:?} “{text}”: table {told:.1}, painted {seen:.1}"
            );
        }
    }
}

#[test]
fn letters_reach_no_further_than_their_line() {
    for face in Face::ALL {
        let outline = painted("ÅÉŠgjpqy(Q|", face);
        let (top, bottom) = (100.0 - face.ascent() * 40.0, 100.0 + face.descent() * 40.0);
        assert!(
            outline.y >= top - 0.6,
            "{face:?}: {} above {top}",
            outline.y
        );
        assert!(
            outline.bottom() <= bottom + 0.6,
            "{face:?}: {} below {bottom}",
            outline.bottom()
        );
    }
}

#[test]
fn every_sign_that_the_program_writes_has_a_glyph() {
    for sign in "−×–—…“”‘’λα²³⁰¹⁴⁵⁶⁷⁸⁹⁻≤≥≈√∑∞→←↑↓▶✓·°µ%‰ᵀᵢ".chars()
    {
        assert!(
            metrics::has(sign, Face::Sans) || metrics::has(sign, Face::Symbols),
            "{sign} has no glyph"
        );
    }
}
