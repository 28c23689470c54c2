//! Numeric axes among column names (“900 nm”, “x_001”, “mz 204.12”), and ranges of columns.

use crate::table::Table;

/// Names that share a beginning and an end around a number.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// What stands before the number, such as “mz ” or “x_”.
    pub prefix: String,
    /// What stands behind it, such as “ nm”.
    pub suffix: String,
    /// The numbers, in the order of the names.
    pub positions: Vec<f64>,
    /// The unit that prefix or suffix name.
    pub unit: Option<String>,
}

impl Axis {
    /// Whether the numbers rise from name to name, or fall.
    #[must_use]
    pub fn is_monotone(&self) -> bool {
        let pairs = || self.positions.windows(2);
        pairs().all(|pair| pair[0] < pair[1]) || pairs().all(|pair| pair[0] > pair[1])
    }

    /// Whether the numbers are quantities and not a mere count: they have a unit, or decimals, or
    /// do not begin at 0 or 1.
    #[must_use]
    pub fn is_physical(&self) -> bool {
        let is_count = self.positions.first().is_some_and(|&first| {
            (first == 0.0 || first == 1.0)
                && self
                    .positions
                    .windows(2)
                    .all(|pair| pair[1] - pair[0] == 1.0)
        });
        self.is_monotone()
            && !is_count
            && (self.unit.is_some()
                || (self.prefix.is_empty() && self.suffix.is_empty() && self.positions.len() >= 4))
    }
}

/// Splits a name around the number it holds: the last one, or the first if a unit follows.
#[must_use]
pub fn parts(name: &str) -> Option<(&str, f64, &str)> {
    let bytes = name.as_bytes();
    let is_part = |byte: u8| byte.is_ascii_digit() || byte == b'.';
    // A unit such as cm-1 ends in a digit that does not belong to the number.
    let unit_at = ["cm-1", "cm⁻¹", "1/cm", "m2", "m3"]
        .iter()
        .find(|unit| name.ends_with(**unit))
        .map_or(name.len(), |unit| name.len() - unit.len());
    let end = bytes[..unit_at]
        .iter()
        .rposition(|byte| byte.is_ascii_digit())?
        + 1;
    let mut start = bytes[..end]
        .iter()
        .rposition(|&byte| !is_part(byte))
        .map_or(0, |before| before + 1);
    while bytes[start] == b'.' && start + 1 < end && bytes[start + 1..end].contains(&b'.') {
        start += 1;
    }
    let is_negative =
        start > 0 && bytes[start - 1] == b'-' && (start == 1 || bytes[start - 2] == b' ');
    let start = start - usize::from(is_negative);
    let number: f64 = name.get(start..end)?.parse().ok()?;
    Some((&name[..start], number, &name[end..]))
}

/// What stands before and behind the number in a name, if it holds one.
#[must_use]
pub fn surroundings(name: &str) -> Option<(String, String)> {
    parts(name).map(|(prefix, _, suffix)| (prefix.to_owned(), suffix.to_owned()))
}

/// The unit that stands before or behind the number of a name.
#[must_use]
pub fn unit_of(prefix: &str, suffix: &str) -> Option<String> {
    const UNITS: [(&str, &str); 17] = [
        ("nm", "nm"),
        ("µm", "µm"),
        ("um", "µm"),
        ("cm-1", "cm⁻¹"),
        ("cm⁻¹", "cm⁻¹"),
        ("1/cm", "cm⁻¹"),
        ("m/z", "m/z"),
        ("mz", "m/z"),
        ("ppm", "ppm"),
        ("min", "min"),
        ("s", "s"),
        ("h", "h"),
        ("hz", "Hz"),
        ("khz", "kHz"),
        ("ev", "eV"),
        ("kev", "keV"),
        ("da", "Da"),
    ];
    let bare = |text: &str| {
        text.trim_matches(|letter: char| {
            !letter.is_alphanumeric() && letter != '⁻' && letter != '¹'
        })
        .to_lowercase()
    };
    let of = |text: &str| {
        let bare = bare(text);
        UNITS
            .iter()
            .find(|(written, _)| *written == bare)
            .map(|(_, unit)| (*unit).to_owned())
    };
    of(suffix).or_else(|| of(prefix))
}

/// The axis that these names form, if every one has the same beginning and end around a number
/// and there are at least three, all unlike.
#[must_use]
pub fn of_names(names: &[&str]) -> Option<Axis> {
    let (prefix, _, suffix) = parts(names.first()?)?;
    let mut positions = Vec::with_capacity(names.len());
    for name in names {
        let (before, number, behind) = parts(name)?;
        if before != prefix || behind != suffix {
            return None;
        }
        positions.push(number);
    }
    let mut sorted = positions.clone();
    sorted.sort_by(f64::total_cmp);
    let are_unlike = sorted.windows(2).all(|pair| pair[0] < pair[1]);
    (positions.len() >= 3 && are_unlike).then(|| Axis {
        unit: unit_of(prefix, suffix),
        prefix: prefix.to_owned(),
        suffix: suffix.to_owned(),
        positions,
    })
}

/// Columns from one to another, in the order of the table.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Range {
    /// The first column.
    pub first: String,
    /// The last.
    pub last: String,
    /// How many there are, both included.
    pub count: usize,
}

impl std::fmt::Display for Range {
    /// `900 nm … 1700 nm (700)`
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        if self.count == 1 {
            f.write_str(&self.first)
        } else {
            write!(f, "{} … {} ({})", self.first, self.last, self.count)
        }
    }
}

/// The ranges of neighbouring columns in which the given columns stand. `columns` are positions
/// in the table, in any order.
#[must_use]
pub fn ranges(table: &Table, columns: &[usize]) -> Vec<Range> {
    let mut sorted = columns.to_vec();
    sorted.sort_unstable();
    sorted.dedup();
    sorted
        .chunk_by(|before, next| before + 1 == *next)
        .map(|run| Range {
            first: table.columns()[run[0]].name.clone(),
            last: table.columns()[run[run.len() - 1]].name.clone(),
            count: run.len(),
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_around_a_number_are_an_axis_with_its_unit() {
        for (names, unit, positions) in [
            (
                ["900 nm", "902 nm", "904 nm"],
                Some("nm"),
                [900.0, 902.0, 904.0],
            ),
            (
                ["mz 204.12", "mz 204.9", "mz 310"],
                Some("m/z"),
                [204.12, 204.9, 310.0],
            ),
            (["x_001", "x_002", "x_010"], None, [1.0, 2.0, 10.0]),
            (
                ["1150.5", "1148.5", "1146.5"],
                None,
                [1150.5, 1148.5, 1146.5],
            ),
            (
                ["400 cm-1", "402 cm-1", "404 cm-1"],
                Some("cm⁻¹"),
                [400.0, 402.0, 404.0],
            ),
            (["S2_T1", "S2_T2", "S2_T3"], None, [1.0, 2.0, 3.0]),
        ] {
            let axis = of_names(&names).unwrap();
            assert_eq!(
                (axis.unit.as_deref(), &axis.positions[..]),
                (unit, &positions[..])
            );
        }
        assert_eq!(of_names(&["salt", "fat", "pH"]), None);
        assert_eq!(of_names(&["a1", "b2", "c3"]), None);
        assert_eq!(of_names(&["x1", "x1", "x2"]), None);
    }

    #[test]
    fn a_count_is_no_physical_axis() {
        assert!(
            of_names(&["900", "902", "904", "906"])
                .unwrap()
                .is_physical()
        );
        assert!(!of_names(&["x1", "x2", "x3"]).unwrap().is_physical());
        assert!(!of_names(&["1", "2", "3", "4"]).unwrap().is_physical());
    }
}
