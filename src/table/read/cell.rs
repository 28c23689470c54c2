//! What the text of one value is: a number, a limit, a word for missing, a date, ...

use crate::base::layout::{DecimalMark, Grouping};
use crate::table::read::number;

/// What a text is, when numbers are expected.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Sort {
    /// Nothing, or blanks.
    Blank,
    /// A plain number.
    Number(f64),
    /// Digits that begin with a zero, such as 007.
    LeadingZeros(f64),
    /// A whole number with more digits than a number can keep.
    LongDigits(f64),
    /// Smaller than a limit.
    Below(f64),
    /// Larger than a limit.
    Above(f64),
    /// A word that says the value is missing.
    MissingWord,
    /// An error value of a workbook.
    Error,
    /// A number with the other decimal mark.
    OtherMark,
    /// A number with marks between groups of three digits.
    Grouped(f64),
    /// A number followed by a unit.
    WithUnit,
    /// A date.
    Date,
    /// A number too large to hold.
    TooLarge,
    /// Any other text.
    Text,
}

impl Sort {
    /// Whether the text speaks of a quantity, if perhaps in an unclear way.
    pub fn is_quantity(self) -> bool {
        match self {
            Self::Number(_)
            | Self::LongDigits(_)
            | Self::Below(_)
            | Self::Above(_)
            | Self::OtherMark
            | Self::Grouped(_)
            | Self::WithUnit
            | Self::TooLarge => true,
            Self::Blank
            | Self::LeadingZeros(_)
            | Self::MissingWord
            | Self::Error
            | Self::Date
            | Self::Text => false,
        }
    }

    /// The number, of a plain one.
    pub fn plain(self) -> Option<f64> {
        match self {
            Self::Number(number) => Some(number),
            Self::Blank
            | Self::LeadingZeros(_)
            | Self::LongDigits(_)
            | Self::Below(_)
            | Self::Above(_)
            | Self::MissingWord
            | Self::Error
            | Self::OtherMark
            | Self::Grouped(_)
            | Self::WithUnit
            | Self::Date
            | Self::TooLarge
            | Self::Text => None,
        }
    }

    /// Whether the text says that there is no value.
    pub fn is_nothing(self) -> bool {
        match self {
            Self::Blank | Self::MissingWord | Self::Error => true,
            Self::Number(_)
            | Self::LeadingZeros(_)
            | Self::LongDigits(_)
            | Self::Below(_)
            | Self::Above(_)
            | Self::OtherMark
            | Self::Grouped(_)
            | Self::WithUnit
            | Self::Date
            | Self::TooLarge
            | Self::Text => false,
        }
    }
}

/// Takes off blanks of every sort, the fixed blank included.
pub fn trimmed(text: &str) -> &str {
    let bytes = text.as_bytes();
    match (bytes.first(), bytes.last()) {
        (Some(first), Some(last)) if first.is_ascii_graphic() && last.is_ascii_graphic() => text,
        (None, _) | (_, None) => text,
        _ => text.trim_matches(|letter: char| {
            letter.is_whitespace() || matches!(letter, '\u{feff}' | '\u{200b}')
        }),
    }
}

/// Says what a text is.
pub fn sort(text: &str, mark: DecimalMark, grouping: Grouping) -> Sort {
    let text = trimmed(text);
    if text.is_empty() {
        return Sort::Blank;
    }
    let minus;
    let text = if let Some(rest) = text.strip_prefix('\u{2212}') {
        minus = format!("-{rest}");
        minus.as_str()
    } else {
        text
    };
    if let Some(number) = number::whole(text.as_bytes(), mark) {
        return plain(text, number);
    }
    if let Some(limit) = limit(text, mark) {
        return limit;
    }
    if is_missing_word(text) {
        return Sort::MissingWord;
    }
    if is_error(text) {
        return Sort::Error;
    }
    if let Some(value) = grouped(text, mark) {
        return match grouping {
            Grouping::Absent => Sort::Grouped(value),
            Grouping::Read => Sort::Number(value),
        };
    }
    let other = match mark {
        DecimalMark::Point => DecimalMark::Comma,
        DecimalMark::Comma => DecimalMark::Point,
    };
    let bare = without_limit(text).map_or(text, |(_, rest)| rest);
    if number::whole(bare.as_bytes(), other).is_some() {
        return Sort::OtherMark;
    }
    if is_date(text) {
        return Sort::Date;
    }
    if is_infinite(text) {
        return Sort::TooLarge;
    }
    if has_unit(text, mark) || has_unit(text, other) {
        return Sort::WithUnit;
    }
    Sort::Text
}

fn plain(text: &str, number: f64) -> Sort {
    if number.is_infinite() {
        return Sort::TooLarge;
    }
    let bytes = text.as_bytes();
    if bytes.len() > 1 && bytes.iter().all(u8::is_ascii_digit) {
        if bytes[0] == b'0' {
            return Sort::LeadingZeros(number);
        }
        if bytes.len() > 15 && format!("{number:.0}") != text {
            return Sort::LongDigits(number);
        }
    }
    Sort::Number(number)
}

enum Side {
    Below,
    Above,
}

fn without_limit(text: &str) -> Option<(Side, &str)> {
    const BELOW: [&str; 4] = ["<=", "=<", "<", "≤"];
    const ABOVE: [&str; 4] = [">=", "=>", ">", "≥"];
    let strip = |marks: &[&str]| marks.iter().find_map(|mark| text.strip_prefix(mark));
    strip(&BELOW)
        .map(|rest| (Side::Below, trimmed(rest)))
        .or_else(|| strip(&ABOVE).map(|rest| (Side::Above, trimmed(rest))))
}

fn limit(text: &str, mark: DecimalMark) -> Option<Sort> {
    let (side, rest) = without_limit(text)?;
    let number = number::whole(rest.as_bytes(), mark).filter(|number| number.is_finite())?;
    Some(match side {
        Side::Below => Sort::Below(number),
        Side::Above => Sort::Above(number),
    })
}

/// Whether a text says that a measured value is missing.
pub fn is_missing_word(text: &str) -> bool {
    const WORDS: [&str; 27] = [
        "na", "n/a", "n.a.", "n.a", "#n/a", "#na", "<na>", "nan", "null", "none", "nil", "nd",
        "n.d.", "n.d", "n/d", "missing", "-", "--", "–", "—", ".", "?", "bdl", "lod", "<lod",
        "<loq", "loq",
    ];
    text.len() <= 8 && {
        let small = text.to_lowercase();
        WORDS.contains(&small.as_str())
    }
}

/// Whether a text says that a label is missing. Fewer words do: “none” may be a label, and “Na”.
pub fn is_missing_label(text: &str) -> bool {
    matches!(
        text,
        "NA" | "N/A" | "n/a" | "#N/A" | "<NA>" | "NaN" | "nan" | "NULL" | "null"
    )
}

fn is_error(text: &str) -> bool {
    text.starts_with('#')
        && matches!(
            text.to_ascii_uppercase().as_str(),
            "#VALUE!" | "#REF!" | "#DIV/0!" | "#NAME?" | "#NUM!" | "#NULL!" | "#GETTING_DATA"
        )
}

fn is_infinite(text: &str) -> bool {
    let small = text.to_lowercase();
    let bare = small.trim_start_matches(['-', '+']);
    matches!(bare, "inf" | "infinity" | "∞")
}

/// The number in a text with well-formed groups of three digits.
fn grouped(text: &str, mark: DecimalMark) -> Option<f64> {
    let point = match mark {
        DecimalMark::Point => '.',
        DecimalMark::Comma => ',',
    };
    let (sign, bare) = match text.strip_prefix(['-', '+']) {
        Some(rest) => (&text[..1], rest),
        None => ("", text),
    };
    let (whole, decimals) = bare
        .split_once(point)
        .map_or((bare, None), |(whole, decimals)| (whole, Some(decimals)));
    let separator = whole.chars().find(|letter| !letter.is_ascii_digit())?;
    if separator == point
        || !matches!(
            separator,
            ',' | '.' | ' ' | '\'' | '’' | '\u{a0}' | '\u{202f}'
        )
    {
        return None;
    }
    let mut groups = whole.split(separator);
    let first = groups.next()?;
    let is_number = |group: &str| group.bytes().all(|byte| byte.is_ascii_digit());
    let begins_well = (1..=3).contains(&first.len()) && is_number(first) && !first.starts_with('0');
    if !begins_well
        || !groups
            .clone()
            .all(|group| group.len() == 3 && is_number(group))
        || !decimals.is_none_or(is_number)
    {
        return None;
    }
    let mut digits = String::from(sign);
    digits.push_str(first);
    groups.for_each(|group| digits.push_str(group));
    if let Some(decimals) = decimals.filter(|decimals| !decimals.is_empty()) {
        digits.push('.');
        digits.push_str(decimals);
    }
    digits.parse().ok()
}

fn has_unit(text: &str, mark: DecimalMark) -> bool {
    let bare = without_limit(text).map_or(text, |(_, rest)| rest);
    let Some((_, length)) = number::leading(bare.as_bytes(), mark) else {
        return false;
    };
    let Some(rest) = bare.get(length..) else {
        return false;
    };
    let rest = trimmed(rest);
    !rest.is_empty() && is_unit(rest)
}

/// Whether a text is written like a unit of measurement.
pub fn is_unit(text: &str) -> bool {
    const WHOLE: [&str; 74] = [
        "%", "‰", "°C", "°F", "°", "K", "nm", "µm", "μm", "um", "mm", "cm", "m", "km", "cm-1",
        "cm⁻¹", "1/cm", "g", "mg", "µg", "μg", "ug", "ng", "pg", "kg", "t", "l", "L", "ml", "mL",
        "µl", "μl", "ul", "s", "min", "h", "d", "ms", "Hz", "kHz", "MHz", "V", "mV", "A", "mA",
        "W", "Pa", "hPa", "kPa", "bar", "mbar", "mol", "mmol", "µmol", "ppm", "ppb", "ppt", "m/z",
        "Da", "a.u.", "au", "AU", "counts", "cps", "score", "days", "years", "lx", "pH", "dB", "J",
        "kJ", "N", "Ohm",
    ];
    let bare = text
        .strip_prefix('[')
        .and_then(|rest| rest.strip_suffix(']'))
        .or_else(|| {
            text.strip_prefix('(')
                .and_then(|rest| rest.strip_suffix(')'))
        });
    let is_wrapped = bare.is_some();
    let bare = trimmed(bare.unwrap_or(text));
    if bare.is_empty() || bare.chars().count() > 16 {
        return false;
    }
    let known = |part: &str| {
        let part = trimmed(part);
        let part = part.trim_start_matches(|letter: char| letter.is_ascii_digit() || letter == ' ');
        let part = part.trim_end_matches(['²', '³', '⁻', '¹', '2', '3', '-', '1', '^']);
        WHOLE.contains(&part)
    };
    is_wrapped
        || WHOLE.contains(&bare)
        || bare.split('/').all(&known) && bare.contains('/')
        || bare.split([' ', '·', '*']).all(known) && bare.contains([' ', '·', '*'])
}

const MONTHS: [&str; 15] = [
    "jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec", "mai",
    "okt", "dez",
];

/// Whether a text is, or could be taken for, a date.
pub fn is_date(text: &str) -> bool {
    if text.len() > 25 || !text.bytes().any(|byte| byte.is_ascii_digit()) {
        return false;
    }
    // A time of day may follow a date.
    let date = text.split([' ', 'T']).next().unwrap_or(text);
    is_numeric_date(date) || is_month_date(text)
}

fn is_numeric_date(text: &str) -> bool {
    let Some(separator) = text.chars().find(|letter| !letter.is_ascii_digit()) else {
        return false;
    };
    if !matches!(separator, '-' | '/' | '.') {
        return false;
    }
    let parts: Vec<&str> = text.split(separator).collect();
    if parts.len() != 3
        || !parts
            .iter()
            .all(|part| part.bytes().all(|b| b.is_ascii_digit()))
    {
        return false;
    }
    let number = |at: usize| parts[at].parse::<u32>().unwrap_or(0);
    let is_day = |at: usize| parts[at].len() <= 2 && (1..=31).contains(&number(at));
    let year_first = parts[0].len() == 4 && is_day(1) && is_day(2);
    let year_last = is_day(0) && is_day(1) && matches!(parts[2].len(), 2 | 4);
    (year_first || year_last)
        && (1..=12).contains(&if year_first {
            number(1).min(number(2))
        } else {
            number(0).min(number(1))
        })
}

fn is_month_date(text: &str) -> bool {
    let parts: Vec<&str> = text
        .split(['-', '/', '.', ' '])
        .filter(|part| !part.is_empty())
        .collect();
    let is_month = |part: &&str| {
        let small = part.to_lowercase();
        MONTHS.iter().any(|month| {
            small == *month || (small.len() > 3 && small.len() <= 9 && is_long_month(&small))
        })
    };
    let is_number = |part: &&str| part.len() <= 4 && part.bytes().all(|byte| byte.is_ascii_digit());
    (2..=3).contains(&parts.len())
        && parts.iter().filter(|part| is_month(part)).count() == 1
        && parts.iter().filter(|part| is_number(part)).count() == parts.len() - 1
}

fn is_long_month(small: &str) -> bool {
    matches!(
        small,
        "january"
            | "february"
            | "march"
            | "april"
            | "june"
            | "july"
            | "august"
            | "sept"
            | "september"
            | "october"
            | "november"
            | "december"
    )
}

/// Whether a text would be read as a number with an exponent, such as 1E-05.
pub fn is_exponent(text: &str) -> bool {
    text.bytes().any(|byte| matches!(byte, b'e' | b'E'))
        && (number::whole(text.as_bytes(), DecimalMark::Point).is_some()
            || number::whole(text.as_bytes(), DecimalMark::Comma).is_some())
}

/// Whether a text is digits that begin with a zero.
pub fn has_leading_zeros(text: &str) -> bool {
    text.len() > 1 && text.starts_with('0') && text.bytes().all(|byte| byte.is_ascii_digit())
}

#[cfg(test)]
mod tests {
    use super::*;
    use DecimalMark::{Comma, Point};

    fn point(text: &str) -> Sort {
        sort(text, Point, Grouping::Absent)
    }

    fn comma(text: &str) -> Sort {
        sort(text, Comma, Grouping::Absent)
    }

    #[test]
    fn limits_are_read_with_and_without_blanks_in_the_file_s_own_decimal_mark() {
        assert_eq!(point("<0.05"), Sort::Below(0.05));
        assert_eq!(point("≤ 0.05"), Sort::Below(0.05));
        assert_eq!(comma("< 0,05"), Sort::Below(0.05));
        assert_eq!(point(">12"), Sort::Above(12.0));
        assert_eq!(point("< 0,05"), Sort::OtherMark);
        assert_eq!(point("<LOD"), Sort::MissingWord);
    }

    #[test]
    fn groups_of_digits_are_told_from_decimal_marks() {
        assert_eq!(point("1,234.5"), Sort::Grouped(1234.5));
        assert_eq!(point("1,234"), Sort::Grouped(1234.0));
        assert_eq!(point("0,234"), Sort::OtherMark);
        assert_eq!(point("12,34"), Sort::OtherMark);
        assert_eq!(comma("1.234,5"), Sort::Grouped(1234.5));
        assert_eq!(comma("1 234 567"), Sort::Grouped(1_234_567.0));
        assert_eq!(comma("3.14"), Sort::OtherMark);
        assert_eq!(sort("1,234.5", Point, Grouping::Read), Sort::Number(1234.5));
    }

    #[test]
    fn words_dates_and_units_are_named_as_such() {
        for word in ["NA", "n.d.", "ND", "#N/A", "-", "nan", " na "] {
            assert_eq!(point(word), Sort::MissingWord, "{word}");
        }
        for error in ["#DIV/0!", "#value!", "#REF!"] {
            assert_eq!(point(error), Sort::Error, "{error}");
        }
        for date in [
            "2026-03-02",
            "2/3/2026",
            "02.03.26",
            "MAR-2",
            "SEP-9",
            "2-Mar",
            "Sep 09",
            "3 March 2026",
            "2026-03-02 14:00",
        ] {
            assert_eq!(point(date), Sort::Date, "{date}");
        }
        for unit in ["12 mg", "5%", "3.5 g/100 g", "< 2 ppm"] {
            assert_eq!(point(unit), Sort::WithUnit, "{unit}");
        }
        for text in ["yes", "B07", "A-12", "12b", "2-3", "1.2.3", "K-014"] {
            assert_eq!(point(text), Sort::Text, "{text}");
        }
    }

    #[test]
    fn digits_that_a_number_would_lose_are_noticed() {
        assert_eq!(point("007"), Sort::LeadingZeros(7.0));
        assert_eq!(point("0"), Sort::Number(0.0));
        assert_eq!(point("0.5"), Sort::Number(0.5));
        assert_eq!(
            point("9007199254740993"),
            Sort::LongDigits(9_007_199_254_740_992.0)
        );
        assert_eq!(point("1e400"), Sort::TooLarge);
        assert_eq!(point("inf"), Sort::TooLarge);
        assert_eq!(point("\u{2212}2.5"), Sort::Number(-2.5));
        assert_eq!(point("\u{a0}3.5 "), Sort::Number(3.5));
        assert!(is_exponent("1E-05") && is_exponent("2E3") && !is_exponent("E3"));
    }
}
