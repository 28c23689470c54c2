//! Studies without a window.

use std::sync::{Arc, Mutex};
use widefold::base::thread::Threads;
use widefold::base::work::{CancelToken, Work};
use widefold::eval::desk::{Snapshot, evaluate};
use widefold::eval::memo::Memo;
use widefold::eval::standing::{Event, Standings};
use widefold::eval::start::{Started, Wishes, start};
use widefold::study::Study;
use widefold::study::settings::fit::{Fit, Judge, Plan, Scheme, Strength};
use widefold::study::source::Shelf;

/// A fit with a small plan: 5 inner parts once, 4 outer parts once.
pub fn small_fit() -> Fit {
    let mut fit = Fit::default();
    if let Strength::Chosen { range, inner, .. } = &mut fit.strength {
        range.count = 30;
        *inner = Plan {
            scheme: Scheme::Units,
            parts: 5,
            repeats: 1,
        };
    }
    fit.judge = Judge::Nested(Plan {
        scheme: Scheme::Units,
        parts: 4,
        repeats: 1,
    });
    fit
}

/// A ready study from texts, with the small plan.
pub fn started(tables: &[(&str, String)], wishes: Wishes) -> Started {
    let tables: Vec<(String, Arc<[u8]>)> = tables
        .iter()
        .map(|(name, text)| ((*name).to_owned(), Arc::from(text.as_bytes())))
        .collect();
    let wishes = Wishes {
        fit: small_fit(),
        ..wishes
    };
    start(&tables, &wishes, Threads::new(1), &Work::unattended())
        .unwrap()
        .unwrap()
}

/// Brings a study up to date with a memo; returns how cells stand and how many were really run.
pub fn update(study: &Study, shelf: &Shelf, memo: &mut Memo, threads: usize) -> (Standings, usize) {
    let standings = Mutex::new((Standings::default(), 0));
    let snapshot = Snapshot {
        study: study.clone(),
        shelf: shelf.clone(),
        recorded: Default::default(),
        threads: Threads::new(threads),
    };
    let tell = |event: Event| {
        let mut told = standings.lock().unwrap();
        told.0.absorb(&event);
        if let Event::Finished {
            remembered: false, ..
        } = event
        {
            told.1 += 1;
        }
    };
    evaluate(&snapshot, memo, &CancelToken::default(), &tell).unwrap();
    standings.into_inner().unwrap()
}

/// A memo that forgets nothing in a test.
pub fn memo() -> Memo {
    Memo::new(1 << 30)
}

/// Uniform numbers from SplitMix64 (Steele, Lea & Flood 2014), summed to nearly normal ones.
pub struct Dice(pub u64);

impl Dice {
    pub fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.uniform()).sum::<f64>() - 6.0
    }

    pub fn uniform(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        ((z ^ (z >> 31)) >> 11) as f64 / (1_u64 << 53) as f64
    }
}

/// A spectrum-like table of `n` samples in units of two: neighbouring predictors are alike, the
/// outcome hangs on two of them with `signal` and on nothing with 0.
pub fn spectra(n: usize, p: usize, signal: f64, seed: u64) -> String {
    let mut dice = Dice(seed);
    let mut text = String::from("sample,vat,yield_g");
    (0..p).for_each(|j| text.push_str(&format!(",{} nm", 1000 + 2 * j)));
    text.push('\n');
    let mut unit = (Vec::new(), 0.0);
    for i in 0..n {
        if i % 2 == 0 {
            let mut level = 2.0;
            let row: Vec<f64> = (0..p)
                .map(|_| {
                    level += 0.1 * dice.normal();
                    level
                })
                .collect();
            let noise = dice.normal();
            let y = 20.0 + signal * (row[p / 3] - row[p / 2]) + 0.5 * noise;
            unit = (row, y);
        }
        text.push_str(&format!("S-{i:03},vat {},{:.4}", i / 2, unit.1));
        for value in &unit.0 {
            text.push_str(&format!(",{:.5}", value + 0.01 * dice.normal()));
        }
        text.push('\n');
    }
    text
}
