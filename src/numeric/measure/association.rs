//! How strongly two facts about samples go together: for designs before any fit.

use std::collections::BTreeMap;

/// Cramér's V of two classifications: √(χ²/(n·(min(rows, columns) − 1))), from 0 (unrelated in
/// this table) to 1 (one determines the other). Not corrected for its bias in small tables.
/// `None` when either has fewer than two classes.
#[must_use]
pub fn cramers_v(a: &[usize], b: &[usize]) -> Option<f64> {
    let mut cells: BTreeMap<(usize, usize), f64> = BTreeMap::new();
    let mut rows: BTreeMap<usize, f64> = BTreeMap::new();
    let mut columns: BTreeMap<usize, f64> = BTreeMap::new();
    for (&a, &b) in a.iter().zip(b) {
        *cells.entry((a, b)).or_insert(0.0) += 1.0;
        *rows.entry(a).or_insert(0.0) += 1.0;
        *columns.entry(b).or_insert(0.0) += 1.0;
    }
    let n: f64 = rows.values().sum();
    let least = rows.len().min(columns.len());
    if least < 2 {
        return None;
    }
    // χ²/n = Σ n_ij²/(n_i. n_.j) − 1, where empty cells add nothing.
    let share: f64 = cells
        .iter()
        .map(|((a, b), count)| count * count / (rows[a] * columns[b]))
        .sum::<f64>()
        - 1.0;
    debug_assert!(n > 0.0);
    Some((share.max(0.0) / (least - 1) as f64).sqrt().min(1.0))
}

/// The correlation ratio η²: the share of the squared deviations of a quantity that lies
/// between classes. `None` when the quantity does not vary or there are fewer than two classes.
#[must_use]
pub fn correlation_ratio(class: &[usize], value: &[f64]) -> Option<f64> {
    let mut sums: BTreeMap<usize, (f64, f64)> = BTreeMap::new();
    for (&class, value) in class.iter().zip(value) {
        let (sum, count) = sums.entry(class).or_insert((0.0, 0.0));
        *sum += value;
        *count += 1.0;
    }
    if sums.len() < 2 || value.iter().all(|v| *v == value[0]) {
        return None;
    }
    let mean = value.iter().sum::<f64>() / value.len() as f64;
    let total: f64 = value.iter().map(|v| (v - mean).powi(2)).sum();
    let between: f64 = sums
        .values()
        .map(|(sum, count)| count * (sum / count - mean).powi(2))
        .sum();
    Some((between / total).min(1.0))
}
