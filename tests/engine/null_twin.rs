//! An outcome without signal is not predicted, however steps are stacked.

use crate::support::{memo, spectra, started, update};
use widefold::base::real::Real;
use widefold::eval::start::Wishes;
use widefold::study::edit::Edit;
use widefold::study::settings::Settings;
use widefold::study::settings::prepare::Step;

/// The steps that are stacked, in every order of every three of them.
fn steps() -> Vec<Step> {
    vec![
        Step::StandardNormalVariate,
        Step::SavitzkyGolay {
            window: 7,
            degree: 2,
            derivative: 1,
        },
        Step::ScatterCorrection,
        Step::NearConstantFilter {
            least: Real::constant(0.05),
        },
        Step::Center,
        Step::UnitVariance,
    ]
}

#[test]
fn without_signal_the_nested_r2_is_about_zero_for_every_order_of_steps() {
    let wishes = Wishes {
        outcome: "yield_g".to_owned(),
        unit: Some("vat".to_owned()),
        samples: Some("sample".to_owned()),
        ..Wishes::default()
    };
    let started = started(&[("vats.csv", spectra(60, 40, 0.0, 5))], wishes);
    let catalogue = steps();
    let mut memo = memo();
    let mut tried = 0;
    let mut highest = f64::NEG_INFINITY;
    for a in 0..catalogue.len() {
        for b in 0..catalogue.len() {
            for c in 0..catalogue.len() {
                if a == b || b == c || a == c {
                    continue;
                }
                let mut study = started.study.clone();
                // Only Data, Prepare and Fit matter here.
                let questions: Vec<_> = study
                    .cells()
                    .iter()
                    .filter(|cell| {
                        matches!(cell.settings, Settings::Question(_) | Settings::Prose(_))
                    })
                    .map(|cell| cell.id)
                    .collect();
                for id in questions {
                    let _ = study.apply(Edit::Remove { id }).unwrap();
                }
                let prepare = study
                    .cells()
                    .iter()
                    .find_map(|cell| match &cell.settings {
                        Settings::Prepare(prepare) => Some((cell.id, prepare.clone())),
                        _ => None,
                    })
                    .unwrap();
                let (id, mut settings) = prepare;
                settings.steps = vec![
                    catalogue[a].clone(),
                    catalogue[b].clone(),
                    catalogue[c].clone(),
                ];
                let settings = Settings::Prepare(settings);
                let _ = study.apply(Edit::Configure { id, settings }).unwrap();
                let (standings, _) = update(&study, &started.shelf, &mut memo, 2);
                let fit = study
                    .cells()
                    .iter()
                    .find(|cell| matches!(cell.settings, Settings::Fit(_)))
                    .unwrap();
                let standing = standings.get(fit.id);
                let Some(outcome) = standing.outcome else {
                    // Scatter correction of derivatives can be impossible, and says so.
                    continue;
                };
                tried += 1;
                highest = highest.max(outcome.facts.value("nested r²").unwrap());
                assert_eq!(outcome.facts.value("proof violations"), Some(0.0));
            }
        }
    }
    assert!(tried >= 60, "only {tried} orders could be carried out");
    // 30 units: an R² above this would be a leak; row by row the same twins give far more.
    assert!(highest < 0.15, "the highest nested R² was {highest}");
}
