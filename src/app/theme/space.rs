//! Distances and sizes; the grid is 4.

/// Between parts of one thing.
pub const TIGHT: f32 = 4.0;
/// Between things that belong together.
pub const SMALL: f32 = 8.0;
/// Between things.
pub const GAP: f32 = 16.0;
/// Between cells.
pub const WIDE: f32 = 32.0;

/// The width of the thread.
pub const THREAD: f32 = 212.0;
/// The width of the page's text: about seventy letters of the serif.
pub const PAGE: f32 = 704.0;
/// The width of the margin's notes, and the least width of the margin.
pub const MARGIN: f32 = 264.0;
/// The widest a note gets.
pub const NOTE: f32 = 320.0;
/// Below this window width the margin folds into the page.
pub const FOLD: f32 = 1100.0;
/// The height of the head line, and of the strip.
pub const HEAD: f32 = 48.0;
/// The width of a rule.
pub const HAIR: f32 = 1.0;
/// The width of the bar beside a caveat, and of the focus outline.
pub const BAR: f32 = 2.0;
/// The air between a thing and its focus outline.
pub const AIR: f32 = 2.0;
/// The height of a progress bar.
pub const PROGRESS: f32 = 4.0;
/// The length of a progress bar in the strip.
pub const PROGRESS_LENGTH: f32 = 300.0;
/// The height of a grid inside a cell: what can be redrawn well within a frame.
pub const GRID: f32 = 400.0;
/// The height of a grid's row.
pub const ROW: f32 = 24.0;
/// The height of a figure.
pub const FIGURE: f32 = 320.0;
/// The width of a short editor: a number, a choice.
pub const FIELD: f32 = 200.0;
/// The width of a dialog.
pub const DIALOG: f32 = 560.0;
/// The greatest height of a list that opens in place.
pub const LIST: f32 = 260.0;
/// The radius of corners.
pub const CORNER: f32 = 3.0;
/// The radius of a cell's dot on the thread.
pub const DOT: f32 = 4.0;
