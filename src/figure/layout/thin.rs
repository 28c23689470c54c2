//! Thinning: detail that cannot be seen is left out, so that large figures stay fast.

use crate::figure::picture::Point;

/// Points of a line nearer than this to the straight way past them are not seen, in pixels.
const UNSEEN: f64 = 0.12;

/// The golden ratio's fraction: its multiples are spread evenly over the unit interval.
const GOLDEN: f64 = 0.618_033_988_749_894_9;

/// From −0.5 to 0.5, by a rule instead of by chance, so that it is the same every time: how far
/// the nth dot is moved aside so that equal ones can be seen.
pub(super) fn strewn(nth: usize) -> f64 {
    (nth as f64 * GOLDEN).fract() - 0.5
}

/// Splits a line where a place is missing, and thins each piece.
pub(super) fn pieces(points: impl Iterator<Item = Option<Point>>) -> Vec<Vec<Point>> {
    let mut pieces = vec![Vec::new()];
    for point in points {
        match (point, pieces.last_mut()) {
            (Some(point), Some(piece)) => piece.push(point),
            (Some(point), None) => pieces.push(vec![point]),
            (None, _) => pieces.push(Vec::new()),
        }
    }
    pieces
        .into_iter()
        .filter(|piece| !piece.is_empty())
        .map(line)
        .collect()
}

/// A line with as few points as look the same.
pub(super) fn line(points: Vec<Point>) -> Vec<Point> {
    simplified(&columns(points))
}

/// Of a line with many points to a pixel, the first, lowest, highest and last of each column.
fn columns(points: Vec<Point>) -> Vec<Point> {
    let width = points
        .last()
        .map_or(0.0, |last| (last.x - points[0].x).abs());
    if (points.len() as f64) < 4.0 * width.max(100.0) {
        return points;
    }
    let mut kept = Vec::new();
    let mut start = 0;
    while start < points.len() {
        let column = points[start].x.floor();
        let length = points[start..]
            .iter()
            .take_while(|point| point.x.floor() == column)
            .count()
            .max(1);
        let run = &points[start..start + length];
        let by_height = |a: &&Point, b: &&Point| a.y.total_cmp(&b.y);
        let mut chosen = vec![run[0], run[length - 1]];
        chosen.extend(run.iter().min_by(by_height));
        chosen.extend(run.iter().max_by(by_height));
        chosen.sort_by(|a, b| a.x.total_cmp(&b.x));
        chosen.dedup();
        kept.extend(chosen);
        start += length;
    }
    kept
}

/// Douglas and Peucker (1973), "Algorithms for the reduction of the number of points required
/// to represent a digitized line or its caricature".
fn simplified(points: &[Point]) -> Vec<Point> {
    if points.len() < 3 {
        return points.to_vec();
    }
    let mut keep = vec![false; points.len()];
    keep[0] = true;
    keep[points.len() - 1] = true;
    let mut spans = vec![(0, points.len() - 1)];
    while let Some((from, to)) = spans.pop() {
        let farthest = (from + 1..to)
            .map(|at| (at, distance(points[at], points[from], points[to])))
            .max_by(|a, b| a.1.total_cmp(&b.1));
        if let Some((at, distance)) = farthest
            && distance > UNSEEN
        {
            keep[at] = true;
            spans.push((from, at));
            spans.push((at, to));
        }
    }
    points
        .iter()
        .zip(keep)
        .filter(|(_, keep)| *keep)
        .map(|(point, _)| *point)
        .collect()
}

fn distance(at: Point, from: Point, to: Point) -> f64 {
    let (dx, dy) = (to.x - from.x, to.y - from.y);
    let length = dx.hypot(dy);
    if length == 0.0 {
        return (at.x - from.x).hypot(at.y - from.y);
    }
    ((at.x - from.x) * dy - (at.y - from.y) * dx).abs() / length
}

/// Of dots that would lie on each other, those that are seen: one for each cell of a grid as
/// fine as `cell` pixels. Gives the indices, in order.
pub(super) fn dots(points: &[Option<Point>], cell: f64) -> Vec<usize> {
    let mut cells: Vec<(i64, i64, usize)> = points
        .iter()
        .enumerate()
        .filter_map(|(at, point)| {
            let point = (*point)?;
            Some((
                (point.x / cell).floor() as i64,
                (point.y / cell).floor() as i64,
                at,
            ))
        })
        .collect();
    cells.sort_unstable();
    cells.dedup_by_key(|(x, y, _)| (*x, *y));
    let mut kept: Vec<usize> = cells.into_iter().map(|(_, _, at)| at).collect();
    kept.sort_unstable();
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_straight_line_keeps_its_ends_only() {
        let points = (0..500)
            .map(|x| Point::new(f64::from(x), 2.0 * f64::from(x)))
            .collect();
        assert_eq!(
            line(points),
            [Point::new(0.0, 0.0), Point::new(499.0, 998.0)]
        );
    }

    #[test]
    fn a_crowded_line_keeps_the_extremes_of_every_pixel() {
        let height = |at: u32| {
            if at == 77_777 {
                500.0
            } else {
                f64::from(at % 7)
            }
        };
        let points: Vec<Point> = (0..100_000)
            .map(|at| Point::new(f64::from(at) / 200.0, height(at)))
            .collect();
        let thin = line(points);
        assert!(thin.len() < 5_000, "{}", thin.len());
        assert!(thin.iter().any(|point| point.y == 500.0));
        assert!(thin.windows(2).all(|pair| pair[0].x <= pair[1].x));
    }

    #[test]
    fn a_missing_place_breaks_a_line() {
        let places = [Some(0.0), Some(1.0), None, None, Some(4.0)];
        let pieces = pieces(places.into_iter().map(|x| Some(Point::new(x?, 0.0))));
        assert_eq!(pieces.len(), 2);
        assert_eq!(pieces[1], [Point::new(4.0, 0.0)]);
    }

    #[test]
    fn dots_on_each_other_are_merged_and_keep_their_order() {
        let places = [(0.1, 0.1), (5.0, 5.0), (0.3, 0.2)].map(|(x, y)| Some(Point::new(x, y)));
        assert_eq!(dots(&places, 1.0), [0, 1]);
        assert!(dots(&[None, None], 1.0).is_empty());
    }
}
