//! The only place where a number becomes text.

/// How many digits a number is shown with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Precision {
    /// A count: no decimals, groups of three digits from 10,000 on.
    Whole,
    /// A fixed number of decimals.
    Decimals(u8),
    /// A number of significant digits; very small and very large numbers as powers of ten.
    Significant(u8),
    /// A share shown as a percentage with a number of decimals: 0.8 is “80 %”.
    Percent(u8),
    /// Every digit that is needed to read the same number back: for data files, not for prose.
    Full,
}

/// The minus sign of typeset text.
const MINUS: char = '−';

/// Writes a number for people.
///
/// The decimal mark is a point and the minus sign is the typographic one. What is not a number
/// is “not known”, an infinity “without limit”.
#[must_use]
pub fn text(value: f64, precision: Precision) -> String {
    if value.is_nan() {
        return "not known".to_owned();
    }
    if value.is_infinite() {
        return if value > 0.0 {
            "without limit"
        } else {
            "without lower limit"
        }
        .to_owned();
    }
    let plain = match precision {
        Precision::Whole => grouped(&format!("{value:.0}")),
        Precision::Decimals(decimals) => grouped(&format!("{value:.*}", usize::from(decimals))),
        Precision::Significant(digits) => significant(value, usize::from(digits.max(1))),
        Precision::Percent(decimals) => {
            format!("{:.*} %", usize::from(decimals), value * 100.0)
        }
        Precision::Full => format!("{value}"),
    };
    signed(plain)
}

/// The number of decimals that shows `digits` significant digits of a number of this size.
#[must_use]
pub fn decimals_for(size: f64, digits: u8) -> u8 {
    if !size.is_finite() || size == 0.0 {
        return digits;
    }
    let exponent = size.abs().log10().floor();
    (f64::from(digits) - 1.0 - exponent).clamp(0.0, 12.0) as u8
}

/// The pattern with which a workbook shows a number as [`text`] would. Workbooks have no pattern
/// for significant digits, so that it depends on the number's size.
#[must_use]
pub fn workbook_format(value: f64, precision: Precision) -> String {
    let decimals = |count: u8| {
        if count == 0 {
            String::new()
        } else {
            format!(".{}", "0".repeat(usize::from(count)))
        }
    };
    match precision {
        Precision::Whole => "#,##0".to_owned(),
        Precision::Decimals(count) => format!("0{}", decimals(count)),
        Precision::Significant(digits) => {
            let is_plain = value == 0.0 || (1e-5..1e7).contains(&value.abs());
            if is_plain {
                format!("0{}", decimals(decimals_for(value, digits.max(1))))
            } else {
                format!("0{}E+00", decimals(digits.saturating_sub(1)))
            }
        }
        Precision::Full => "General".to_owned(),
        Precision::Percent(count) => format!("0{} %", decimals(count)),
    }
}

fn significant(value: f64, digits: usize) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let scientific = format!("{value:.*e}", digits - 1);
    let (mantissa, exponent) = scientific
        .split_once('e')
        .expect("the scientific form has an exponent");
    let exponent: i32 = exponent.parse().expect("the exponent is a whole number");
    if (-5..7).contains(&exponent) {
        let decimals = (digits as i32 - 1 - exponent).max(0) as usize;
        // Rounded through the scientific form, so that 0.09996 at three digits is 0.100.
        let rounded: f64 = scientific.parse().expect("a formatted number is a number");
        grouped(&format!("{rounded:.decimals$}"))
    } else {
        format!("{mantissa} × 10{}", superscript(exponent))
    }
}

fn superscript(exponent: i32) -> String {
    exponent
        .to_string()
        .chars()
        .map(|letter| match letter {
            '-' => '⁻',
            '1' => '¹',
            '2' => '²',
            '3' => '³',
            digit => char::from_u32(digit as u32 - '0' as u32 + '⁰' as u32)
                .expect("superscript digits follow each other"),
        })
        .collect()
}

/// A power of ten as it stands at the decades of an axis: “10⁻³”.
#[must_use]
pub fn power_of_ten(exponent: i32) -> String {
    format!("10{}", superscript(exponent))
}

/// Puts commas between groups of three digits before the decimal point, from 10,000 on.
fn grouped(plain: &str) -> String {
    let (sign, plain) = plain
        .strip_prefix('-')
        .map_or(("", plain), |rest| ("-", rest));
    let (whole, decimals) = plain
        .split_once('.')
        .map_or((plain, None), |(w, d)| (w, Some(d)));
    let mut text = String::from(sign);
    for (at, digit) in whole.chars().enumerate() {
        let left = whole.len() - at;
        if at > 0 && left % 3 == 0 && whole.len() > 4 {
            text.push(',');
        }
        text.push(digit);
    }
    if let Some(decimals) = decimals {
        text.push('.');
        text.push_str(decimals);
    }
    text
}

fn signed(plain: String) -> String {
    match plain.strip_prefix('-') {
        // A number that rounds to nothing has no sign.
        Some(rest) if rest.chars().all(|c| !c.is_ascii_digit() || c == '0') => rest.to_owned(),
        Some(rest) => format!("{MINUS}{rest}"),
        None => plain,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn counts_have_groups_from_ten_thousand_on() {
        assert_eq!(text(1440.0, Precision::Whole), "1440");
        assert_eq!(text(20_000.0, Precision::Whole), "20,000");
        assert_eq!(text(1_234_567.0, Precision::Whole), "1,234,567");
    }

    #[test]
    fn significant_digits_survive_rounding_up() {
        assert_eq!(text(0.09996, Precision::Significant(3)), "0.100");
        assert_eq!(text(0.031_24, Precision::Significant(3)), "0.0312");
        assert_eq!(text(123_456.0, Precision::Significant(3)), "123,000");
        assert_eq!(text(1.5e-9, Precision::Significant(2)), "1.5 × 10⁻⁹");
        assert_eq!(text(0.0, Precision::Significant(3)), "0");
    }

    #[test]
    fn the_minus_sign_is_typographic_and_zero_has_none() {
        assert_eq!(text(-2.0, Precision::Decimals(1)), "−2.0");
        assert_eq!(text(-0.001, Precision::Decimals(1)), "0.0");
        assert_eq!(text(-3e-8, Precision::Significant(1)), "−3 × 10⁻⁸");
    }

    #[test]
    fn shares_are_percentages() {
        assert_eq!(text(0.804, Precision::Percent(0)), "80 %");
        assert_eq!(text(0.804, Precision::Percent(1)), "80.4 %");
    }

    #[test]
    fn what_is_no_number_is_said_in_words() {
        assert_eq!(text(f64::NAN, Precision::Whole), "not known");
        assert_eq!(text(f64::INFINITY, Precision::Whole), "without limit");
    }

    #[test]
    fn powers_of_ten_have_raised_exponents() {
        assert_eq!(power_of_ten(-12), "10⁻¹²");
        assert_eq!(power_of_ten(3), "10³");
    }

    #[test]
    fn a_workbook_shows_significant_digits_by_the_size_of_the_number() {
        let three = Precision::Significant(3);
        assert_eq!(workbook_format(0.005_658, three), "0.00000");
        assert_eq!(workbook_format(41.2, three), "0.0");
        assert_eq!(workbook_format(1.3e-14, three), "0.00E+00");
        assert_eq!(workbook_format(0.8, Precision::Percent(1)), "0.0 %");
    }

    #[test]
    fn decimals_follow_the_size() {
        assert_eq!(decimals_for(0.253, 3), 3);
        assert_eq!(decimals_for(25.3, 3), 1);
        assert_eq!(decimals_for(2530.0, 3), 0);
    }
}
