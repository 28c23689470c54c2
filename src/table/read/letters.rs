//! From bytes to letters: which encoding, and whether there are letters at all.

use crate::base::layout::Encoding;
use crate::base::work::{Cancelled, Work};
use std::borrow::Cow;

/// How many bytes are looked at to tell text from other files.
const LOOK: usize = 1 << 16;

/// How many bytes are decoded between two questions whether to go on.
const PIECE: usize = 1 << 22;

/// Letters, and how they were found.
pub struct Letters<'a> {
    /// The text without a byte-order mark.
    pub text: Cow<'a, str>,
    /// The encoding.
    pub encoding: Encoding,
}

/// Decodes bytes whose encoding nobody named. UTF-8 is tried by reading it, so that a large file
/// is gone through once.
pub fn decode_as_found<'a>(bytes: &'a [u8], work: &Work<'_>) -> Result<Letters<'a>, Cancelled> {
    match guess(bytes) {
        Some(encoding) => decode(bytes, encoding, work),
        None => match std::str::from_utf8(bytes) {
            Ok(text) => Ok(Letters {
                text: Cow::Borrowed(text),
                encoding: Encoding::Utf8,
            }),
            Err(_) => decode(bytes, Encoding::Windows1252, work),
        },
    }
}

/// The encoding that the bytes show by their first ones or by their zeros.
fn guess(bytes: &[u8]) -> Option<Encoding> {
    if bytes.starts_with(&[0xef, 0xbb, 0xbf]) {
        return Some(Encoding::Utf8);
    }
    if bytes.starts_with(&[0xff, 0xfe]) {
        return Some(Encoding::Utf16Le);
    }
    if bytes.starts_with(&[0xfe, 0xff]) {
        return Some(Encoding::Utf16Be);
    }
    // Latin letters in UTF-16 have a zero in every other byte.
    let look = &bytes[..bytes.len().min(LOOK)];
    let zeros = |odd: usize| {
        look.iter()
            .skip(odd)
            .step_by(2)
            .filter(|&&b| b == 0)
            .count()
    };
    let half = look.len() / 2;
    if half > 0 && zeros(1) * 10 > half * 7 && zeros(0) * 10 < half {
        return Some(Encoding::Utf16Le);
    }
    if half > 0 && zeros(0) * 10 > half * 7 && zeros(1) * 10 < half {
        return Some(Encoding::Utf16Be);
    }
    None
}

/// Decodes the bytes. What has no meaning in the encoding becomes U+FFFD.
pub fn decode<'a>(
    bytes: &'a [u8],
    encoding: Encoding,
    work: &Work<'_>,
) -> Result<Letters<'a>, Cancelled> {
    let bytes = match encoding {
        Encoding::Utf8 => bytes.strip_prefix(&[0xef, 0xbb, 0xbf]).unwrap_or(bytes),
        Encoding::Utf16Le => bytes.strip_prefix(&[0xff, 0xfe]).unwrap_or(bytes),
        Encoding::Utf16Be => bytes.strip_prefix(&[0xfe, 0xff]).unwrap_or(bytes),
        Encoding::Windows1252 => bytes,
    };
    let decoder = match encoding {
        Encoding::Utf8 => {
            if let Ok(text) = std::str::from_utf8(bytes) {
                let text = Cow::Borrowed(text);
                return Ok(Letters { text, encoding });
            }
            encoding_rs::UTF_8
        }
        Encoding::Utf16Le => encoding_rs::UTF_16LE,
        Encoding::Utf16Be => encoding_rs::UTF_16BE,
        Encoding::Windows1252 => encoding_rs::WINDOWS_1252,
    };
    let mut decoder = decoder.new_decoder_without_bom_handling();
    let mut text = String::new();
    let mut done = 0;
    loop {
        work.step(done, bytes.len())?;
        let piece = &bytes[done..bytes.len().min(done + PIECE)];
        let last = done + piece.len() == bytes.len();
        text.reserve(decoder.max_utf8_buffer_length(piece.len()).unwrap_or(0));
        let (_, read, _) = decoder.decode_to_string(piece, &mut text, last);
        done += read;
        if last && done == bytes.len() {
            break;
        }
    }
    let text = Cow::Owned(text);
    Ok(Letters { text, encoding })
}

/// Whether the beginning of a text has signs that no table holds.
pub fn is_binary(text: &str) -> bool {
    let mut end = text.len().min(LOOK);
    while !text.is_char_boundary(end) {
        end -= 1;
    }
    let look = &text[..end];
    let strange = look
        .bytes()
        .filter(|&byte| byte < 0x20 && !matches!(byte, b'\t' | b'\n' | b'\r' | 0x0c | 0x1a))
        .count();
    let broken = look.chars().filter(|&letter| letter == '\u{fffd}').count();
    let all = look.chars().count();
    look.contains('\0') || strange * 50 > all || broken * 5 > all
}

/// What a file is by its first bytes, when it is no table that can be read.
pub fn known_binary(bytes: &[u8]) -> Option<&'static str> {
    const KNOWN: [(&[u8], &str); 16] = [
        (b"%PDF", "a PDF document"),
        (b"\x89PNG", "a PNG picture"),
        (b"\xff\xd8\xff", "a JPEG picture"),
        (b"GIF8", "a GIF picture"),
        (b"II*\0", "a TIFF picture"),
        (b"MM\0*", "a TIFF picture"),
        (b"SQLite format 3", "an SQLite database"),
        (b"\x89HDF", "an HDF5 file"),
        (b"PAR1", "a Parquet file"),
        (b"ARROW1", "an Arrow file"),
        (b"Obj\x01", "an Avro file"),
        (b"7z\xbc\xaf\x27\x1c", "a 7z archive"),
        (b"Rar!", "a RAR archive"),
        (b"\xfd7zXZ", "an xz archive"),
        (b"BZh", "a bzip2 archive"),
        (b"\x28\xb5\x2f\xfd", "a Zstandard archive"),
    ];
    KNOWN
        .iter()
        .find(|(magic, _)| bytes.starts_with(magic))
        .map(|(_, name)| *name)
}

/// Whether letters look as if UTF-8 had been read as Latin-1 before, or could not be read.
pub fn is_broken(text: &str) -> bool {
    if text.is_ascii() {
        return false;
    }
    text.contains('\u{fffd}')
        || text
            .chars()
            .zip(text.chars().skip(1))
            .any(|(first, second)| {
                matches!(first, 'Ã' | 'Â') && ('\u{80}'..='\u{bf}').contains(&second)
                    || first == 'â' && matches!(second, '€' | '\u{80}' | '‚')
            })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(bytes: &[u8]) -> (String, Encoding) {
        let letters = decode_as_found(bytes, &Work::unattended()).unwrap();
        (letters.text.into_owned(), letters.encoding)
    }

    #[test]
    fn encodings_are_told_apart_with_and_without_a_byte_order_mark() {
        let text = "Käse;µg/l\n1;2\n";
        let utf16: Vec<u8> = text.encode_utf16().flat_map(u16::to_le_bytes).collect();
        let swapped: Vec<u8> = text.encode_utf16().flat_map(u16::to_be_bytes).collect();
        let marked = |mark: &[u8], rest: &[u8]| [mark, rest].concat();
        let latin = b"K\xe4se;\xb5g/l\n1;2\n";
        for (bytes, encoding) in [
            (text.as_bytes().to_vec(), Encoding::Utf8),
            (marked(&[0xef, 0xbb, 0xbf], text.as_bytes()), Encoding::Utf8),
            (utf16.clone(), Encoding::Utf16Le),
            (marked(&[0xff, 0xfe], &utf16), Encoding::Utf16Le),
            (swapped.clone(), Encoding::Utf16Be),
            (marked(&[0xfe, 0xff], &swapped), Encoding::Utf16Be),
            (latin.to_vec(), Encoding::Windows1252),
        ] {
            assert_eq!(read(&bytes), (text.to_owned(), encoding));
        }
    }

    #[test]
    fn tables_are_told_from_other_files() {
        assert!(!is_binary("a,b\r\n1,2\r\n\u{1a}"));
        assert!(is_binary("a\0b"));
        let noise: Vec<u8> = (0..2000_u32).map(|i| (i * 7919 % 251) as u8).collect();
        assert!(is_binary(&read(&noise).0));
    }

    #[test]
    fn letters_that_were_decoded_wrongly_before_are_noticed() {
        assert!(is_broken("KÃ¤se") && is_broken("Â°C") && is_broken("K\u{fffd}se"));
        assert!(!is_broken("Käse") && !is_broken("Ångström °C"));
    }
}
