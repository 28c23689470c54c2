//! What is counted over all fits of a procedure: certificates, and the proof against leaks.

use crate::numeric::path::Path;
use crate::numeric::proof::Proof;

/// Counts over all fits of a procedure. Sums and maxima only, so that the order of fits and the
/// number of threads do not matter.
#[derive(Clone, Debug, Default)]
pub struct Tally {
    /// The run-time proof that nothing was learnt from a held-out sample.
    pub proof: Proof,
    /// How many solutions were computed.
    pub solutions: usize,
    /// How many of them did not reach the solver's tolerance.
    pub unsettled: usize,
    /// The largest relative duality gap among them.
    pub worst_gap: f64,
}

impl Tally {
    /// Counts the solutions of a path.
    pub fn count(&mut self, path: &Path) {
        for at in 0..path.n_points() {
            let (gap, settled) = path.gap(at);
            self.solutions += 1;
            self.unsettled += usize::from(!settled);
            self.worst_gap = self.worst_gap.max(gap);
        }
    }

    /// Adds the counts of other fits.
    pub fn merge(&mut self, other: &Self) {
        self.proof.merge(other.proof.clone());
        self.solutions += other.solutions;
        self.unsettled += other.unsettled;
        self.worst_gap = self.worst_gap.max(other.worst_gap);
    }
}
