//! Progress bars on long work; quiet when nobody watches.

use crate::eval::standing::Event;
use crate::study::Study;
use crate::study::cell::CellId;
use indicatif::{ProgressBar, ProgressStyle};
use std::io::IsTerminal;

/// Shows what is being evaluated, when standard error is a terminal.
#[derive(Debug)]
pub struct Progress {
    bar: Option<ProgressBar>,
    titles: Vec<(CellId, String)>,
}

/// Steps of a bar: as fine as anybody can see.
const STEPS: u64 = 1000;

impl Progress {
    /// Progress for the cells of a study.
    #[must_use]
    pub fn new(study: &Study) -> Self {
        let bar = std::io::stderr().is_terminal().then(|| {
            let bar = ProgressBar::new(STEPS);
            let style = ProgressStyle::with_template("{msg:28!} {bar:32} {percent:>3} %  {eta}")
                .expect("the template is lawful");
            bar.set_style(style);
            bar
        });
        let titles = study
            .cells()
            .iter()
            .map(|cell| (cell.id, cell.title.clone()))
            .collect();
        Self { bar, titles }
    }

    /// Takes an event in.
    pub fn tell(&self, event: &Event) {
        let Some(bar) = &self.bar else { return };
        match event {
            Event::Planned(_) => {}
            Event::Started(id) => {
                let title = self.titles.iter().find(|(known, _)| known == id);
                bar.reset();
                bar.set_message(title.map_or_else(String::new, |(_, title)| title.clone()));
            }
            Event::Progressed(_, share) => bar.set_position((share * STEPS as f32) as u64),
            Event::Finished { .. } => bar.set_position(STEPS),
            Event::Ended { .. } => bar.finish_and_clear(),
        }
    }

    /// Clears the bar.
    pub fn done(&self) {
        if let Some(bar) = &self.bar {
            bar.finish_and_clear();
        }
    }
}
