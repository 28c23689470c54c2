//! Names of columns: every column gets its own.

use crate::base::problem::Place;
use crate::table::finding::{Finding, FindingKind, Treatment};
use std::collections::{HashMap, HashSet};

/// Names for columns from what stands in the header, and which had to be changed because another
/// column has them. `place` says where a column's name stands; `first` is the number of the first column in the file.
pub fn unlike(
    heads: &[String],
    first: usize,
    place: impl Fn(usize) -> Place,
) -> (Vec<String>, Option<Finding>) {
    // The usual case, without a copy of every name.
    let mut seen: HashSet<&str> = HashSet::with_capacity(heads.len());
    if heads
        .iter()
        .all(|head| !head.is_empty() && seen.insert(head))
    {
        return (heads.to_vec(), None);
    }
    drop(seen);
    let mut repeated = Finding::new(FindingKind::RepeatedNames, Treatment::Renamed);
    let mut taken: HashMap<&str, usize> = HashMap::with_capacity(heads.len());
    for head in heads {
        *taken.entry(head).or_default() += 1;
    }
    let mut given: HashMap<String, usize> = HashMap::new();
    let mut names = Vec::with_capacity(heads.len());
    for (at, head) in heads.iter().enumerate() {
        let is_blank = head.is_empty();
        let times = given.get(head).copied().unwrap_or(0);
        if !is_blank && times == 0 && !given.contains_key(head) {
            let _ = given.insert(head.clone(), 1);
            names.push(head.clone());
            continue;
        }
        let mut count = times;
        let name = loop {
            count += 1;
            let name = if is_blank {
                let number = first + at + 1;
                if count == 1 {
                    format!("column {number}")
                } else {
                    format!("column {number} ({count})")
                }
            } else {
                format!("{head} ({count})")
            };
            if !given.contains_key(&name) && !taken.contains_key(name.as_str()) {
                break name;
            }
        };
        if !is_blank {
            let _ = given.insert(head.clone(), count);
            repeated.add(|| place(at), head);
            repeated.add_column(&name);
        }
        let _ = given.insert(name.clone(), 1);
        names.push(name);
    }
    (names, (repeated.count > 0).then_some(repeated))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_column_gets_its_own_name_and_it_is_said() {
        let heads = ["id", "", "fat", "fat", "fat (2)", "fat", ""].map(String::from);
        let (names, findings) = unlike(&heads, 0, |_| Place::nowhere());
        assert_eq!(
            names,
            [
                "id", "column 2", "fat", "fat (3)", "fat (2)", "fat (4)", "column 7"
            ]
        );
        assert_eq!(findings.map(|finding| finding.count), Some(2));
    }
}
