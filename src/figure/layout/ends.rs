//! Names at the ends of lines: spread so that none overlaps, as near to its line as can be.

use crate::figure::layout::style;

/// A name that wants to stand at a height.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Wish {
    /// Which name it is; smaller is more important.
    pub(super) at: usize,
    /// Where it wants its middle, in pixels.
    pub(super) y: f64,
}

/// Heights for as many of the names as fit between two heights, the most important first.
///
/// Names that would overlap are pushed apart by as little as possible in the sense of least
/// squares: neighbours in conflict are pooled and centred on their mean wish (the pool-adjacent-
/// violators algorithm of isotonic regression; Barlow et al. 1972).
pub(super) fn spread(mut wishes: Vec<Wish>, low: f64, high: f64) -> Vec<Wish> {
    let pitch = style::LABEL_PITCH;
    let most = ((high - low) / pitch).floor().max(0.0) as usize + 1;
    wishes.sort_by_key(|wish| wish.at);
    wishes.truncate(most);
    wishes.sort_by(|a, b| a.y.total_cmp(&b.y).then(a.at.cmp(&b.at)));
    // Blocks of names that touch: (sum of wishes less their offsets, count).
    let mut blocks: Vec<(f64, usize)> = Vec::new();
    for (nth, wish) in wishes.iter().enumerate() {
        let y = wish.y.clamp(low, high);
        blocks.push((y - nth as f64 * pitch, 1));
        while let [.., (before, n), (last, m)] = blocks[..]
            && before / n as f64 > last / m as f64
        {
            blocks.truncate(blocks.len() - 2);
            blocks.push((before + last, n + m));
        }
    }
    let last = wishes.len().saturating_sub(1) as f64 * pitch;
    let mut nth = 0;
    for (sum, count) in blocks {
        let start = (sum / count as f64).clamp(low, (high - last).max(low));
        for _ in 0..count {
            wishes[nth].y = start + nth as f64 * pitch;
            nth += 1;
        }
    }
    wishes
}

#[cfg(test)]
mod tests {
    use super::*;

    fn wishes(heights: &[f64]) -> Vec<Wish> {
        let wish = |(at, y): (usize, &f64)| Wish { at, y: *y };
        heights.iter().enumerate().map(wish).collect()
    }

    #[test]
    fn names_with_room_stay_where_they_want_to_be() {
        let wanted = wishes(&[10.0, 50.0, 90.0]);
        assert_eq!(spread(wanted.clone(), 0.0, 100.0), wanted);
    }

    #[test]
    fn names_in_conflict_move_apart_around_their_middle() {
        let set = spread(wishes(&[50.0, 50.0]), 0.0, 100.0);
        assert_eq!(set[0].y, 43.0);
        assert_eq!(set[1].y, 57.0);
    }

    #[test]
    fn names_stay_between_the_heights_and_apart() {
        let crowd: Vec<f64> = (0..40).map(|k| f64::from(k * 37 % 23)).collect();
        let set = spread(wishes(&crowd), 10.0, 120.0);
        assert_eq!(set.len(), 8);
        assert!(set.iter().all(|wish| wish.at < 8), "the first are kept");
        assert!(set.windows(2).all(|pair| pair[1].y - pair[0].y > 13.99));
        assert!(set.iter().all(|wish| wish.y >= 9.99 && wish.y <= 120.01));
    }
}
