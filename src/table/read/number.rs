//! Plain numbers from letters, exactly rounded.

use crate::base::layout::DecimalMark;

/// The longest number written with a decimal comma that is read without asking for memory.
const STACK: usize = 64;

/// The number at the start of `bytes` and how many bytes it takes.
///
/// Grammar: an optional sign, digits with at most one decimal mark among or around them, and an
/// optional exponent. Numbers too large to hold come back as infinite; the words for infinity
/// and for “not a number” are no numbers.
#[inline]
pub fn leading(bytes: &[u8], mark: DecimalMark) -> Option<(f64, usize)> {
    let first = *bytes.first()?;
    let digit = if first == b'-' || first == b'+' {
        *bytes.get(1)?
    } else {
        first
    };
    match mark {
        DecimalMark::Point => {
            if !digit.is_ascii_digit() && digit != b'.' {
                return None;
            }
            fast_float2::parse_partial::<f64, _>(bytes).ok()
        }
        DecimalMark::Comma => {
            if !digit.is_ascii_digit() && digit != b',' {
                return None;
            }
            leading_with_comma(bytes)
        }
    }
}

fn leading_with_comma(bytes: &[u8]) -> Option<(f64, usize)> {
    let length = bytes
        .iter()
        .position(|b| !matches!(b, b'0'..=b'9' | b',' | b'+' | b'-' | b'e' | b'E'))
        .unwrap_or(bytes.len());
    let with_point = |from: &[u8], into: &mut [u8]| {
        for (to, &byte) in into.iter_mut().zip(from) {
            *to = if byte == b',' { b'.' } else { byte };
        }
    };
    if length <= STACK {
        let mut copy = [0_u8; STACK];
        with_point(&bytes[..length], &mut copy[..length]);
        fast_float2::parse_partial::<f64, _>(&copy[..length]).ok()
    } else {
        let mut copy = vec![0_u8; length];
        with_point(&bytes[..length], &mut copy);
        fast_float2::parse_partial::<f64, _>(&copy).ok()
    }
}

/// The number that `bytes` are, from the first to the last.
#[inline]
pub fn whole(bytes: &[u8], mark: DecimalMark) -> Option<f64> {
    match leading(bytes, mark) {
        Some((number, length)) if length == bytes.len() => Some(number),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use DecimalMark::{Comma, Point};

    #[test]
    fn numbers_are_read_to_the_last_bit() {
        for text in [
            "0",
            "-0.1",
            "3.14",
            "1e-5",
            "2E+3",
            ".5",
            "5.",
            "+7",
            "123456789.123456789",
            "0.1000000000000000055511151231257827",
            "9007199254740993",
            "1.7976931348623157e308",
        ] {
            let expected: f64 = text.parse().unwrap();
            assert_eq!(whole(text.as_bytes(), Point), Some(expected), "{text}");
            let comma = text.replace('.', ",");
            assert_eq!(whole(comma.as_bytes(), Comma), Some(expected), "{comma}");
        }
    }

    #[test]
    fn other_marks_words_and_rests_are_no_numbers() {
        for text in [
            "", "-", ".", "1,5", "inf", "-inf", "nan", "NaN", "1.5 ", "1e", "0x1", "1.2.3",
        ] {
            assert_eq!(whole(text.as_bytes(), Point), None, "{text}");
        }
        for text in ["1.5", "1,2,3", ",", "infinity"] {
            assert_eq!(whole(text.as_bytes(), Comma), None, "{text}");
        }
    }

    #[test]
    fn long_numbers_with_a_comma_are_read_too() {
        let text = format!("0,{}1", "0".repeat(100));
        assert_eq!(whole(text.as_bytes(), Comma), Some(1e-101));
    }
}
