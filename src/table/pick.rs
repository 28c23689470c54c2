//! Choosing many columns with few words: names, ranges, patterns, stretches of a numeric axis.

use crate::table::axis;

/// Why words choose no columns.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum PickError {
    /// Nothing is called so, and it is neither a range nor a pattern that fits.
    Nothing(String),
    /// The last column stands before the first.
    Backwards {
        /// The first column as given.
        first: String,
        /// The last column as given.
        last: String,
    },
    /// Names with more than one sort of axis fit a stretch: the beginnings and ends of them.
    Several {
        /// What was asked for.
        asked: String,
        /// What the names of each axis look like.
        axes: Vec<String>,
    },
}

/// The columns that a text chooses, by their positions, each once, in the order of the text.
///
/// Pieces are parted by commas or semicolons; each is, in this order of precedence,
/// - a name (`salt`), which may itself hold commas, stars or dots;
/// - a range of neighbours (`900 nm … 1700 nm (700)`; three dots may stand for `…`, and the count
///   may be left out);
/// - a pattern (`MAR-2*`, `t?_max`), in which `*` stands for any letters and `?` for one;
/// - a stretch of a numeric axis (`900 … 1250.5 nm`, `900 nm … 1250 nm`) whose ends need not be
///   names: every column of that axis between them.
///
/// `takes` says which columns a pattern or a stretch may choose, such as those of numbers.
///
/// # Errors
/// [`PickError`] when a piece chooses nothing, or runs backwards.
pub fn columns(
    names: &[&str],
    takes: &dyn Fn(usize) -> bool,
    text: &str,
) -> Result<Vec<usize>, PickError> {
    let mut found = Vec::new();
    let mut rest = text.trim();
    while !rest.is_empty() {
        // The longest piece that can be followed, so that names may hold commas.
        let ends = rest
            .char_indices()
            .filter(|(_, letter)| matches!(letter, ',' | ';'))
            .map(|(at, _)| at)
            .chain([rest.len()])
            .collect::<Vec<_>>();
        let mut refused = None;
        let piece =
            ends.iter()
                .rev()
                .find_map(|&end| match piece(names, takes, rest[..end].trim()) {
                    Ok(columns) => Some((end, columns)),
                    Err(error) => {
                        refused = Some(error);
                        None
                    }
                });
        let Some((end, columns)) = piece else {
            return Err(refused.unwrap_or_else(|| PickError::Nothing(rest.to_owned())));
        };
        found.extend(columns);
        rest = rest[end..].trim_start_matches([',', ';', ' ']);
    }
    let mut seen = vec![false; names.len()];
    found.retain(|&at| !std::mem::replace(&mut seen[at], true));
    Ok(found)
}

fn piece(
    names: &[&str],
    takes: &dyn Fn(usize) -> bool,
    text: &str,
) -> Result<Vec<usize>, PickError> {
    let position = |name: &str| names.iter().position(|known| *known == name);
    if let Some(at) = position(text) {
        return Ok(vec![at]);
    }
    if let Some((first, last)) = ends_of(text) {
        return match (position(first), position(last)) {
            (Some(from), Some(to)) if from <= to => Ok((from..=to).collect()),
            (Some(_), Some(_)) => Err(PickError::Backwards {
                first: first.to_owned(),
                last: last.to_owned(),
            }),
            (_, _) => stretch(names, takes, text, first, last),
        };
    }
    if text.contains(['*', '?']) {
        let fitting: Vec<usize> = (0..names.len())
            .filter(|&at| takes(at) && fits(text, names[at]))
            .collect();
        if !fitting.is_empty() {
            return Ok(fitting);
        }
    }
    Err(PickError::Nothing(text.to_owned()))
}

/// The two ends of a range.
fn ends_of(piece: &str) -> Option<(&str, &str)> {
    let piece = piece
        .strip_suffix(')')
        .and_then(|open| open.rsplit_once(" ("))
        .filter(|(_, count)| count.bytes().all(|b| b.is_ascii_digit() || b == b','))
        .map_or(piece, |(range, _)| range);
    let (first, last) = piece.split_once('…').or_else(|| piece.split_once("..."))?;
    Some((first.trim(), last.trim()))
}

/// The columns of an axis from one number to another. Where both ends are bare numbers, the names
/// are too, or all numbered columns have one beginning and end.
fn stretch(
    names: &[&str],
    takes: &dyn Fn(usize) -> bool,
    asked: &str,
    first: &str,
    last: &str,
) -> Result<Vec<usize>, PickError> {
    let nothing = || PickError::Nothing(asked.to_owned());
    if asked.contains([',', ';']) {
        return Err(nothing());
    }
    let (before, to, behind) = axis::parts(last).ok_or_else(nothing)?;
    let (_, from, _) = axis::parts(first).ok_or_else(nothing)?;
    let (low, high) = (from.min(to), from.max(to));
    let unit = axis::unit_of(before, behind);
    let is_bare = before.is_empty() && behind.is_empty();
    let mut found = Vec::new();
    let mut axes: Vec<(&str, &str)> = Vec::new();
    for (at, name) in names.iter().enumerate() {
        let Some((prefix, number, suffix)) = axis::parts(name).filter(|_| takes(at)) else {
            continue;
        };
        let is_meant = (prefix, suffix) == (before, behind)
            || is_bare
            || (unit.is_some() && axis::unit_of(prefix, suffix) == unit);
        if is_meant && (low..=high).contains(&number) {
            found.push(at);
            if !axes.contains(&(prefix, suffix)) {
                axes.push((prefix, suffix));
            }
        }
    }
    // A count such as “x1” beside “900 nm” is another axis, and nobody knows which is meant.
    if axes.len() > 1 {
        return Err(PickError::Several {
            asked: asked.to_owned(),
            axes: axes
                .iter()
                .take(4)
                .map(|(prefix, suffix)| format!("{prefix}…{suffix}"))
                .collect(),
        });
    }
    if found.is_empty() {
        return Err(nothing());
    }
    Ok(found)
}

/// Whether a name fits a pattern with `*` and `?`.
fn fits(pattern: &str, name: &str) -> bool {
    let (pattern, name): (Vec<char>, Vec<char>) =
        (pattern.chars().collect(), name.chars().collect());
    let (mut p, mut n) = (0, 0);
    // Where the last star stands, and how far it had taken letters.
    let mut star: Option<(usize, usize)> = None;
    while n < name.len() {
        if p < pattern.len() && pattern[p] == '*' {
            star = Some((p, n));
            p += 1;
        } else if p < pattern.len() && (pattern[p] == '?' || pattern[p] == name[n]) {
            p += 1;
            n += 1;
        } else if let Some((at, taken)) = star {
            star = Some((at, taken + 1));
            p = at + 1;
            n = taken + 1;
        } else {
            return false;
        }
    }
    pattern[p..].iter().all(|letter| *letter == '*')
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::table::Table;
    use crate::table::column::Column;

    const NAMES: [&str; 9] = [
        "id",
        "salt, g/100 g",
        "900 nm",
        "902 nm",
        "904 nm",
        "MAR-2 w01",
        "MAR-2 w02",
        "1E-05 w01",
        "note",
    ];

    fn pick(text: &str) -> Result<Vec<usize>, PickError> {
        columns(&NAMES, &|at| at > 0 && at < 8, text)
    }

    #[test]
    fn names_ranges_patterns_and_stretches_choose_columns() {
        assert_eq!(pick("note; id"), Ok(vec![8, 0]));
        assert_eq!(pick("salt, g/100 g, 900 nm"), Ok(vec![1, 2]));
        assert_eq!(pick("900 nm … 904 nm (3)"), Ok(vec![2, 3, 4]));
        assert_eq!(pick("900 nm...902 nm, 900 nm"), Ok(vec![2, 3]));
        assert_eq!(pick("MAR-2*"), Ok(vec![5, 6]));
        assert_eq!(pick("* w01; 901 … 950 nm"), Ok(vec![5, 7, 3, 4]));
        assert_eq!(pick("901 nm … 903 nm"), Ok(vec![3]));
        assert_eq!(pick("MAR-2 w0?"), Ok(vec![5, 6]));
    }

    #[test]
    fn what_chooses_nothing_or_too_much_is_said() {
        assert_eq!(pick("salt"), Err(PickError::Nothing("salt".to_owned())));
        assert_eq!(
            pick("904 nm … 900 nm"),
            Err(PickError::Backwards {
                first: "904 nm".to_owned(),
                last: "900 nm".to_owned()
            })
        );
        assert!(matches!(pick("1 … 950"), Err(PickError::Several { .. })));
        assert!(matches!(pick("zz*"), Err(PickError::Nothing(_))));
    }

    #[test]
    fn a_described_choice_of_columns_is_read_back_as_the_same_choice() {
        let columns: Vec<Column> = NAMES
            .iter()
            .map(|name| Column::numbers(name, vec![1.0]))
            .collect();
        let table = Table::new(columns);
        let chosen = [1, 2, 3, 4];
        let ranges = axis::ranges(&table, &chosen);
        assert_eq!(ranges[0].to_string(), "salt, g/100 g … 904 nm (4)");
        assert_eq!(pick(&ranges[0].to_string()), Ok(chosen.to_vec()));
    }

    #[test]
    fn twenty_thousand_columns_are_chosen_by_block_and_by_axis() {
        let mut names: Vec<String> = (0..10_000)
            .map(|at| format!("{:.1} nm", 400.0 + f64::from(at) / 10.0))
            .collect();
        names.extend((0..10_000).map(|at| format!("mz {:.2}", 50.0 + f64::from(at) / 20.0)));
        let names: Vec<&str> = names.iter().map(String::as_str).collect();
        let all = |_: usize| true;
        assert_eq!(
            super::columns(&names, &all, "* nm; mz *").map(|c| c.len()),
            Ok(20_000)
        );
        assert_eq!(
            super::columns(&names, &all, "400 … 499.9 nm").map(|c| c.len()),
            Ok(1_000)
        );
        let masses = super::columns(&names, &all, "mz 100 … mz 150").unwrap();
        assert_eq!((masses.len(), names[masses[0]]), (1_001, "mz 100.00"));
    }
}
