//! Widths of the bundled fonts' letters, so that layout needs no font library.

mod table;

use crate::figure::font::Face;

/// The width of a letter that no bundled font has, in thousandths of an em.
const UNKNOWN: u16 = 600;

/// From here on scripts have letters that fill a square.
const FIRST_SQUARE: u32 = 0x1100;

/// What marks a text that was cut short.
const ELLIPSIS: char = '…';

/// The width of a text in pixels, `size` being the em. Kerning is not counted; it makes Latin
/// text narrower by a percent or two.
#[must_use]
pub fn width(text: &str, face: Face, size: f64) -> f64 {
    text.chars()
        .map(|letter| advance(letter, face))
        .sum::<f64>()
        * size
}

/// The text itself if it is no wider than `room` pixels; otherwise as much of its beginning as
/// fits with an ellipsis. An empty text where not even that fits.
#[must_use]
pub fn fitted(text: &str, face: Face, size: f64, room: f64) -> String {
    if width(text, face, size) <= room {
        return text.to_owned();
    }
    let mut left = room / size - advance(ELLIPSIS, face);
    if left < 0.0 {
        return String::new();
    }
    let mut cut = String::new();
    for letter in text.chars() {
        left -= advance(letter, face);
        if left < 0.0 {
            break;
        }
        cut.push(letter);
    }
    cut.truncate(cut.trim_end().len());
    cut.push(ELLIPSIS);
    cut
}

/// A text broken between words into at most `most` lines of `room` pixels; what does not fit
/// stays on the last line, to be cut short there.
#[must_use]
pub fn lines(text: &str, face: Face, size: f64, room: f64, most: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        let count = lines.len();
        match lines.last_mut() {
            Some(line) if count >= most || width(&format!("{line} {word}"), face, size) <= room => {
                line.push(' ');
                line.push_str(word);
            }
            Some(_) | None => lines.push(word.to_owned()),
        }
    }
    lines
}

/// The width of a letter in em: in the face itself, else in the font for symbols.
fn advance(letter: char, face: Face) -> f64 {
    let code = u32::from(letter);
    let width = look_up(code, face)
        .or_else(|| look_up(code, Face::Symbols))
        .unwrap_or(if code >= FIRST_SQUARE { 1000 } else { UNKNOWN });
    f64::from(width) / 1000.0
}

/// Whether the bundled font itself has a letter.
#[must_use]
pub fn has(letter: char, face: Face) -> bool {
    look_up(u32::from(letter), face).is_some()
}

/// A text in pieces that each need one font: the face itself, or the one for symbols where that
/// has the letters and the face has not. Left to themselves, programs that set text choose the
/// font for symbols for the whole text.
#[must_use]
pub fn runs(text: &str, face: Face) -> Vec<(Face, &str)> {
    let font = |letter: char| {
        if !has(letter, face) && has(letter, Face::Symbols) {
            Face::Symbols
        } else {
            face
        }
    };
    let mut runs = Vec::new();
    let mut start = 0;
    let mut current = None;
    for (at, letter) in text.char_indices() {
        let next = font(letter);
        match current {
            Some(before) if before != next => {
                runs.push((before, &text[start..at]));
                start = at;
            }
            Some(_) | None => {}
        }
        current = Some(next);
    }
    runs.extend(current.map(|last| (last, &text[start..])));
    runs
}

fn look_up(code: u32, face: Face) -> Option<u16> {
    let runs = match face {
        Face::Sans => table::SANS,
        Face::SansStrong => table::SANS_STRONG,
        Face::Serif => table::SERIF,
        Face::SerifItalic => table::SERIF_ITALIC,
        Face::SerifStrong => table::SERIF_STRONG,
        Face::Symbols => table::SYMBOLS,
    };
    let after = runs.partition_point(|(first, _)| *first <= code);
    let (first, widths) = runs.get(after.checked_sub(1)?)?;
    widths.get((code - first) as usize).copied()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits_and_the_minus_sign_are_equally_wide() {
        for face in Face::ALL {
            let widths: Vec<u64> = "0123456789"
                .chars()
                .map(|digit| advance(digit, face).to_bits())
                .collect();
            assert!(widths.windows(2).all(|pair| pair[0] == pair[1]), "{face:?}");
        }
        for face in [Face::Sans, Face::SansStrong, Face::Serif, Face::SerifItalic] {
            assert_eq!(advance('−', face).to_bits(), advance('0', face).to_bits());
        }
    }

    #[test]
    fn a_text_that_does_not_fit_ends_in_an_ellipsis() {
        let name = "salt in moisture of the rind";
        let cut = fitted(name, Face::Sans, 12.0, 80.0);
        assert!(cut.ends_with('…') && cut.len() < name.len());
        assert!(width(&cut, Face::Sans, 12.0) <= 80.0);
        assert_eq!(fitted(name, Face::Sans, 12.0, 800.0), name);
        assert_eq!(fitted(name, Face::Sans, 12.0, 3.0), "");
    }

    #[test]
    fn a_long_text_is_broken_between_words() {
        let text = "observed against predicted salt in moisture";
        let broken = lines(text, Face::Sans, 12.0, 150.0, 5);
        assert!(broken.len() == 2 && broken.join(" ") == text);
        assert!(
            broken
                .iter()
                .all(|line| width(line, Face::Sans, 12.0) <= 150.0)
        );
        assert_eq!(lines(text, Face::Sans, 12.0, 10.0, 2).len(), 2);
        assert!(lines("", Face::Sans, 12.0, 10.0, 2).is_empty());
    }

    #[test]
    fn a_text_is_cut_where_it_needs_another_font() {
        let runs = runs("R² ≤ 0.8", Face::SansStrong);
        let expected = [
            (Face::SansStrong, "R² "),
            (Face::Symbols, "≤"),
            (Face::SansStrong, " 0.8"),
        ];
        assert_eq!(runs, expected);
        assert!(super::runs("", Face::Sans).is_empty());
    }

    #[test]
    fn signs_that_the_text_fonts_lack_are_measured_in_the_font_for_symbols() {
        assert!(!has('≤', Face::Sans) && has('≤', Face::Symbols));
        assert_eq!(
            width("≤", Face::Sans, 1000.0),
            width("≤", Face::Symbols, 1000.0)
        );
    }
}
