//! The day: asked here, at the rim, and handed down as text.

/// Today in UTC, as year-month-day.
#[must_use]
pub fn today() -> String {
    chrono::Utc::now().format("%Y-%m-%d").to_string()
}
