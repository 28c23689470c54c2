//! Outcomes remembered by recipe.

use crate::base::hash::ContentHash;
use crate::eval::outcome::{Gives, Verdict};
use std::collections::BTreeMap;
use std::sync::Arc;

/// A map from recipes to verdicts with a budget in bytes.
///
/// Failures are remembered like successes, since they are as deterministic; what was called off
/// is never remembered. Because the old recipe is still there, undo is instant as far back as
/// the budget reaches.
#[derive(Debug)]
pub struct Memo {
    entries: BTreeMap<ContentHash, Entry>,
    budget: usize,
    run: u64,
}

#[derive(Debug)]
struct Entry {
    verdict: Arc<Verdict>,
    bytes: usize,
    /// The run in which it was last asked for.
    used: u64,
}

impl Memo {
    /// An empty memo that holds about `budget` bytes.
    #[must_use]
    pub fn new(budget: usize) -> Self {
        Self {
            entries: BTreeMap::new(),
            budget,
            run: 0,
        }
    }

    /// Notes that a new run begins; entries age by it.
    pub fn begin_run(&mut self) {
        self.run += 1;
    }

    /// The verdict for a recipe, which makes it young again.
    pub fn get(&mut self, recipe: ContentHash) -> Option<Arc<Verdict>> {
        let run = self.run;
        let entry = self.entries.get_mut(&recipe)?;
        entry.used = run;
        Some(Arc::clone(&entry.verdict))
    }

    /// Remembers a verdict. The oldest others go first once the memo is over its budget; what
    /// the present run has used stays.
    pub fn put(&mut self, recipe: ContentHash, verdict: Arc<Verdict>) {
        let bytes = weight(&verdict);
        let _ = self.entries.insert(
            recipe,
            Entry {
                verdict,
                bytes,
                used: self.run,
            },
        );
        let mut total: usize = self.entries.values().map(|entry| entry.bytes).sum();
        while total > self.budget {
            let oldest = self.entries.iter().min_by_key(|(_, entry)| entry.used);
            let Some((&key, entry)) = oldest else { return };
            if entry.used == self.run {
                return;
            }
            total -= entry.bytes;
            let _ = self.entries.remove(&key);
        }
    }
}

/// About how many bytes a verdict holds on to, not counting what it shares with others.
fn weight(verdict: &Verdict) -> usize {
    const FACTS: usize = 64 * 1024;
    match verdict {
        Err(_) => 1024,
        Ok(outcome) => match &outcome.gives {
            Gives::Facts | Gives::OnRecord => FACTS,
            Gives::Data(data) => FACTS + data.bytes(),
            Gives::Prepared(prepared) => FACTS + prepared.bytes(),
            Gives::Fit(fitted) => FACTS + fitted.bytes(),
        },
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::base::problem::Problem;

    fn failure(words: &str) -> Arc<Verdict> {
        Arc::new(Err(Problem::new("test", words).into()))
    }

    #[test]
    fn failures_are_remembered_and_the_oldest_go_first() {
        let mut memo = Memo::new(2048);
        for run in 0..3_u8 {
            memo.begin_run();
            let _ = memo.get(ContentHash::of(&0_u8));
            memo.put(ContentHash::of(&run), failure("It cannot be done."));
        }
        assert!(
            memo.get(ContentHash::of(&0_u8)).is_some(),
            "asked for in every run"
        );
        assert!(memo.get(ContentHash::of(&1_u8)).is_none(), "the oldest");
        assert!(memo.get(ContentHash::of(&2_u8)).is_some(), "the newest");
    }
}
