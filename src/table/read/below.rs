//! What stands below the last sample: notes that belong to no sample.

/// How many rows at the end are looked at.
pub const ROWS: usize = 60;

/// A row near the end of a file.
#[derive(Clone, Debug, Default)]
pub struct TailRow {
    /// How many values are filled.
    pub n_filled: usize,
    /// The first filled value.
    pub text: String,
    /// Whether that stands in the first column.
    pub is_at_left: bool,
}

impl TailRow {
    /// Whether the single text of a row reads like a remark and not like a sample's name.
    fn reads_like_a_note(&self) -> bool {
        let has_sign = self.text.starts_with(['*', '#', '†', '('])
            || self.text.contains([':', '='])
            || self.text.trim_end().ends_with('.');
        let words = self.text.split_whitespace().count();
        self.n_filled == 1 && (has_sign || words > 3)
    }
}

/// How many of the last rows are notes. `width` is how many values a sample has.
pub fn notes(rows: &[TailRow], width: usize) -> usize {
    // Behind a blank row, everything that is far narrower than a sample.
    let few = (width / 3).max(1);
    let mut behind_blank = 0;
    for (at, row) in rows.iter().enumerate().rev() {
        if row.n_filled == 0 {
            behind_blank = rows.len() - at;
        } else if row.n_filled > few {
            break;
        }
    }
    if behind_blank > 0 {
        return behind_blank;
    }
    if width < 3 {
        return 0;
    }
    rows.iter()
        .rev()
        .take_while(|row| row.reads_like_a_note())
        .count()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rows(texts: &[(usize, &str)]) -> Vec<TailRow> {
        texts
            .iter()
            .map(|(n_filled, text)| TailRow {
                n_filled: *n_filled,
                text: (*text).to_owned(),
                is_at_left: true,
            })
            .collect()
    }

    #[test]
    fn notes_stand_behind_a_blank_row_or_read_like_notes() {
        let blank_between = rows(&[(5, "K-1"), (5, "K-2"), (0, ""), (1, "checked"), (2, "by")]);
        assert_eq!(notes(&blank_between, 6), 3);
        let directly = rows(&[(5, "K-1"), (1, "* second probe"), (1, "Note: cave B only")]);
        assert_eq!(notes(&directly, 5), 2);
    }

    #[test]
    fn a_sample_without_any_value_is_no_note() {
        assert_eq!(notes(&rows(&[(5, "K-1"), (1, "K-2")]), 5), 0);
        assert_eq!(notes(&rows(&[(2, "K-1"), (1, "K-2")]), 2), 0);
        let gap = rows(&[(5, "K-1"), (0, ""), (5, "K-2")]);
        assert_eq!(notes(&gap, 5), 0);
    }
}
