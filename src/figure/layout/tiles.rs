//! Coloured tiles with names along both sides, and a key to the colours.

use crate::figure::Tiles;
use crate::figure::font::Face;
use crate::figure::ink::Ink;
use crate::figure::layout::sheet::{self, Sheet};
use crate::figure::layout::{Shown, style};
use crate::figure::metrics;
use crate::figure::picture::{Anchor, Mark, Point, Rect, Region, Turn, Word};

/// The height of a tile on a page.
const TALL: f64 = 26.0;
/// The widest tile.
const WIDEST: f64 = 72.0;
/// The smallest side of a tile; more tiles than have room are merged by their mean.
const SMALLEST: f64 = 2.0;
/// Between tiles that are large enough for a gap.
const GAP: f64 = 1.0;
/// The gap above a block.
const BREAK: f64 = 8.0;
/// The most of the width that row names take.
const NAMES: f64 = 0.34;
/// The most height that turned column names take.
const TURNED: f64 = 110.0;
/// The height of the key below.
const KEY: f64 = 30.0;
/// The least height of a row that can be named.
const NAMED: f64 = 13.0;

pub(super) fn natural_height(tiles: &Tiles, width: f64) -> f64 {
    let rows = tiles.rows.len().clamp(1, 40) as f64;
    let plan = columns(tiles, width);
    plan.head + rows * TALL + breaks(tiles) + key_height(tiles) + 4.0
}

fn key_height(tiles: &Tiles) -> f64 {
    if tiles.key.is_empty() { 0.0 } else { KEY }
}

fn breaks(tiles: &Tiles) -> f64 {
    BREAK
        * tiles
            .breaks
            .iter()
            .filter(|at| **at > 0 && **at < tiles.rows.len())
            .count() as f64
}

/// How the columns are set.
struct Columns {
    names: f64,
    width: f64,
    head: f64,
    turn: Turn,
    /// How many tiles are merged into one.
    merged: usize,
}

fn columns(tiles: &Tiles, width: f64) -> Columns {
    let small = |text: &str| metrics::width(text, Face::Sans, style::SMALL);
    let text = |text: &str| metrics::width(text, Face::Sans, style::TEXT);
    let names = tiles
        .rows
        .iter()
        .map(|name| text(name))
        .chain([small(&tiles.row_label)])
        .fold(0.0, f64::max)
        .min(width * NAMES)
        .ceil();
    let left = if names > 0.0 {
        names + style::GAP + 4.0
    } else {
        0.0
    };
    let room = (width - left).max(1.0);
    let count = tiles.columns.len().max(1);
    let merged = ((count as f64 * SMALLEST) / room).ceil().max(1.0) as usize;
    let tile = (room / count.div_ceil(merged) as f64).min(WIDEST);
    let widest = tiles
        .columns
        .iter()
        .map(|name| small(name))
        .fold(0.0, f64::max);
    let turn = if widest + style::GAP <= tile {
        Turn::Level
    } else {
        Turn::Up
    };
    let own = match turn {
        _ if widest == 0.0 => 0.0,
        Turn::Level => style::SMALL_LINE + 2.0,
        Turn::Up if tile < NAMED => 0.0,
        Turn::Up => widest.min(TURNED) + style::GAP,
    };
    let label = if tiles.column_label.is_empty() && tiles.row_label.is_empty() {
        0.0
    } else {
        style::SMALL_LINE + 2.0
    };
    Columns {
        names,
        width: tile,
        head: own + label + 2.0,
        turn,
        merged,
    }
}

pub(super) fn lay(tiles: &Tiles, room: Rect, sheet: &mut Sheet) -> Shown {
    let (n_rows, n_columns) = (tiles.rows.len(), tiles.columns.len());
    if n_rows == 0 || n_columns == 0 || tiles.values.len() != n_rows * n_columns {
        return Shown::Nothing;
    }
    let plan = columns(tiles, room.width);
    let top = room.y + plan.head;
    let space = (room.height - plan.head - breaks(tiles) - key_height(tiles)).max(1.0);
    let merged = ((n_rows as f64 * SMALLEST) / space).ceil().max(1.0) as usize;
    let height = (space / n_rows.div_ceil(merged) as f64).min(TALL + 8.0);
    let left = if plan.names > 0.0 {
        plan.names + style::GAP + 4.0
    } else {
        0.0
    };
    let grid = Grid {
        tiles,
        left,
        top,
        width: plan.width,
        height,
        across: plan.merged,
        down: merged,
    };
    names(&grid, &plan, room, sheet);
    let has_texts = merged == 1
        && plan.merged == 1
        && height >= style::SMALL_LINE
        && !tiles.texts.is_empty()
        && tiles
            .texts
            .iter()
            .all(|text| metrics::width(text, Face::Sans, style::SMALL) + 6.0 <= plan.width);
    let texts: &[String] = if has_texts { &tiles.texts } else { &[] };
    for row in 0..n_rows.div_ceil(merged) {
        for column in 0..n_columns.div_ceil(plan.merged) {
            tile(&grid, row, column, texts, sheet);
        }
    }
    key(&grid, room, sheet);
    Shown::Something
}

/// Where the tiles are.
struct Grid<'a> {
    tiles: &'a Tiles,
    left: f64,
    top: f64,
    width: f64,
    height: f64,
    /// How many columns, and rows, are merged into one tile.
    across: usize,
    down: usize,
}

impl Grid<'_> {
    fn rect(&self, row: usize, column: usize) -> Rect {
        Rect::new(
            self.left + column as f64 * self.width,
            self.row_top(row),
            self.width,
            self.height,
        )
    }

    fn row_top(&self, row: usize) -> f64 {
        let gaps = self
            .tiles
            .breaks
            .iter()
            .filter(|at| **at > 0 && **at <= row * self.down && **at < self.tiles.rows.len())
            .count() as f64;
        self.top + row as f64 * self.height + gaps * BREAK
    }

    /// The mean of the finite values under a tile.
    fn value(&self, row: usize, column: usize) -> Option<f64> {
        let (n_rows, n_columns) = (self.tiles.rows.len(), self.tiles.columns.len());
        let mut sum = 0.0;
        let mut count = 0.0;
        for r in row * self.down..((row + 1) * self.down).min(n_rows) {
            for c in column * self.across..((column + 1) * self.across).min(n_columns) {
                let value = self.tiles.values[r * n_columns + c];
                if value.is_finite() {
                    sum += value.clamp(-self.full(), self.full());
                    count += 1.0;
                }
            }
        }
        (count > 0.0).then(|| sum / count)
    }

    fn full(&self) -> f64 {
        if self.tiles.full.is_finite() && self.tiles.full > 0.0 {
            self.tiles.full
        } else {
            1.0
        }
    }

    fn level(&self, value: f64) -> i8 {
        (value / self.full() * 100.0).round().clamp(-100.0, 100.0) as i8
    }
}

fn tile(grid: &Grid<'_>, row: usize, column: usize, texts: &[String], sheet: &mut Sheet) {
    let whole = grid.rect(row, column);
    let at = row * grid.down * grid.tiles.columns.len() + column * grid.across;
    if grid.across == 1
        && grid.down == 1
        && let Some(tip) = grid.tiles.tips.get(at)
    {
        sheet.spot(Region::Rect(whole), tip);
    }
    let Some(value) = grid.value(row, column) else {
        return;
    };
    let gap = if grid.width >= 6.0 && grid.height >= 6.0 {
        GAP
    } else {
        0.0
    };
    let level = grid.level(value);
    let rect = Rect::new(whole.x, whole.y, whole.width - gap, whole.height - gap);
    sheet.mark(Mark::Rect {
        rect,
        radius: if gap > 0.0 { 2.0 } else { 0.0 },
        fill: Some(Ink::Heat(level)),
        stroke: None,
    });
    if let Some(text) = texts.get(at) {
        let middle = Point::new(
            rect.x + rect.width / 2.0,
            rect.y + rect.height / 2.0 + style::BASELINE,
        );
        let _ = sheet.text(
            text,
            middle,
            Anchor::Middle,
            Ink::HeatText(level),
            Face::Sans,
        );
    }
}

fn names(grid: &Grid<'_>, plan: &Columns, room: Rect, sheet: &mut Sheet) {
    let tiles = grid.tiles;
    let quiet = (Ink::QuietText, Face::Sans);
    let label_y = room.y + 12.0;
    let _ = sheet.fitted(
        &tiles.row_label,
        Point::new(room.x, grid.top - 6.0),
        Anchor::Start,
        style::SMALL,
        quiet,
        plan.names,
    );
    let _ = sheet.fitted(
        &tiles.column_label,
        Point::new(grid.left, label_y),
        Anchor::Start,
        style::SMALL,
        quiet,
        room.right() - grid.left,
    );
    let every = (NAMED / grid.height).ceil().max(1.0) as usize;
    for row in (0..tiles.rows.len().div_ceil(grid.down)).step_by(every) {
        let rect = grid.rect(row, 0);
        let y = rect.y + rect.height / 2.0 + style::BASELINE;
        let _ = sheet.fitted(
            &tiles.rows[row * grid.down],
            Point::new(room.x, y),
            Anchor::Start,
            style::TEXT,
            (Ink::Text, Face::Sans),
            plan.names,
        );
    }
    let across = tiles.columns.len().div_ceil(grid.across);
    for column in 0..across {
        let rect = grid.rect(0, column);
        let name = &tiles.columns[column * grid.across];
        let middle = rect.x + rect.width / 2.0;
        match plan.turn {
            Turn::Level => {
                let at = Point::new(middle, grid.top - 6.0);
                let room = rect.width;
                let _ = sheet.fitted(name, at, Anchor::Middle, style::SMALL, quiet, room);
            }
            Turn::Up => {
                let shown = metrics::fitted(name, Face::Sans, style::SMALL, TURNED);
                let full = (shown != *name).then(|| name.clone());
                let at = Point::new(middle + style::BASELINE, grid.top - 6.0);
                let level = sheet::word(
                    &shown,
                    at,
                    Anchor::Start,
                    style::SMALL,
                    Ink::QuietText,
                    Face::Sans,
                );
                let _ = sheet.word(Word {
                    full,
                    turn: Turn::Up,
                    ..level
                });
            }
        }
    }
}

/// A strip of the colours with a word at each end, and at the middle where there are three.
fn key(grid: &Grid<'_>, room: Rect, sheet: &mut Sheet) {
    let words = &grid.tiles.key;
    if words.is_empty() {
        return;
    }
    let y = room.bottom() - 18.0;
    let is_one_sided = grid
        .tiles
        .values
        .iter()
        .all(|value| value.is_nan() || *value >= 0.0);
    let lowest = if is_one_sided { 0.0 } else { -100.0 };
    let (steps, step) = (21_u8, 6.0);
    let first = words.first().map_or(0.0, |word| {
        metrics::width(word, Face::Sans, style::SMALL) + style::GAP
    });
    let length = f64::from(steps) * step;
    if grid.left + first + length > room.right() {
        return;
    }
    let left = grid.left + first;
    for at in 0..steps {
        let share = f64::from(at) / f64::from(steps - 1);
        let level = (lowest + share * (100.0 - lowest)).round() as i8;
        sheet.mark(Mark::Rect {
            rect: Rect::new(left + f64::from(at) * step, y, step, 8.0),
            radius: 0.0,
            fill: Some(Ink::Heat(level)),
            stroke: None,
        });
    }
    let baseline = y + 8.0;
    let mut say = |word: &str, x: f64, anchor: Anchor| {
        let _ = sheet.text(
            word,
            Point::new(x, baseline),
            anchor,
            Ink::QuietText,
            Face::Sans,
        );
    };
    match words.as_slice() {
        [] => {}
        [only] => say(only, left - style::GAP, Anchor::End),
        [low, .., high] => {
            say(low, left - style::GAP, Anchor::End);
            say(high, left + length + style::GAP, Anchor::Start);
        }
    }
}
