//! The facts of the questions, written by hand.

use crate::base::number::Precision;
use crate::eval::fact::Facts;
use crate::report::sample::{UNIT, Writer, column, error_curve, whole, words};
use crate::study::settings::question::{Ask, Seal};

/// What the evaluation of a question publishes.
pub fn question_facts(ask: &Ask) -> Facts {
    let three = Precision::Significant(3);
    let two = Precision::Decimals(2);
    let strength = Writer(Facts::new()).numbers("", three, &[("chosen strength", 0.0312)]);
    match ask {
        Ask::LeastSquares => {
            strength
                .counts(&[
                    ("samples", 356),
                    ("predictors", 700),
                    ("rank", 355),
                    ("zero eigenvalues", 345),
                ])
                .numbers(
                    "",
                    three,
                    &[
                        ("largest eigenvalue", 412.0),
                        ("smallest positive eigenvalue", 1.1e-6),
                        ("condition number", f64::INFINITY),
                        ("penalty added", 11.1),
                        ("penalised condition number", 13_200.0),
                        ("effective degrees of freedom", 31.2),
                        ("participation ratio", 2.61),
                    ],
                )
                .table(
                    "spectrum",
                    vec![
                        whole("direction", &[1.0, 2.0, 3.0]),
                        column("eigenvalue", "", three, &[412.0, 20.0, 0.0]),
                        column("penalised eigenvalue", "", three, &[412.03, 20.03, 0.0312]),
                        column("shrinkage factor", "", three, &[0.9999, 0.998, 0.0]),
                    ],
                )
                .0
        }
        Ask::ErrorCurve => {
            strength
                .counts(&[("chosen predictors", 5)])
                .numbers(
                    UNIT,
                    two,
                    &[
                        ("lowest error", 0.27),
                        ("lowest error standard error", 0.02),
                    ],
                )
                .numbers(
                    "",
                    three,
                    &[
                        ("one-standard-error strength", 0.0501),
                        ("strength log10 interquartile range", 0.204),
                        ("strength least", 0.0121),
                        ("strength most", 0.0702),
                    ],
                )
                .numbers("", Precision::Percent(0), &[("curve improvement", 0.56)])
                .table("error curve", error_curve())
                .0
        }
        Ask::CoefficientTrace => {
            strength
                .counts(&[
                    ("predictors ever chosen", 131),
                    ("chosen predictors", 5),
                    ("sign changes", 4),
                ])
                .table(
                    "trace",
                    vec![
                        words("predictor", &["1452 nm", "1452 nm", "1150 nm"]),
                        column("strength", "", three, &[0.1, 0.0312, 0.0312]),
                        column(
                            "standardised coefficient",
                            UNIT,
                            three,
                            &[-0.2, -0.31, 0.22],
                        ),
                    ],
                )
                .table(
                    "trace strengths",
                    vec![
                        column("strength", "", three, &[0.994, 0.1, 0.0312]),
                        whole("chosen predictors", &[0.0, 1.0, 2.0]),
                    ],
                )
                .0
        }
        Ask::Agreement => {
            Writer(Facts::new())
                .numbers(
                    UNIT,
                    two,
                    &[
                        ("nested rmse", 0.276),
                        ("nested mae", 0.221),
                        ("bias", -0.012),
                        ("sep", 0.275),
                        ("intercept", -0.08),
                        ("reference error", 0.12),
                    ],
                )
                .numbers(
                    "",
                    two,
                    &[
                        ("nested r²", 0.80),
                        ("slope", 1.03),
                        ("slope low", 0.95),
                        ("slope high", 1.11),
                        ("correlation", 0.90),
                    ],
                )
                .table(
                    "held-out predictions",
                    vec![
                        words("sample", &["W001-a", "W001-b", "W002-a"]),
                        words("unit", &["W001", "W001", "W002"]),
                        words("batch", &["north", "north", "south"]),
                        column("observed", UNIT, two, &[2.91, 2.91, 3.4]),
                        column("predicted", UNIT, two, &[2.8, 2.95, 3.2]),
                    ],
                )
                .0
        }
        Ask::Ladder { seal } => ladder(*seal),
        Ask::ChosenAgain { .. } => chosen_again(),
        Ask::StandIns { .. } => stand_ins(),
    }
}

fn ladder(seal: Seal) -> Facts {
    let two = Precision::Decimals(2);
    let opened = seal == Seal::Opened;
    let sealed = if opened { 0.69 } else { f64::NAN };
    let remark = if opened { "" } else { "sealed, not opened" };
    let mut writer = Writer(Facts::new())
        .numbers(
            "",
            two,
            &[
                ("apparent r²", 0.94),
                ("tuning r²", 0.86),
                ("nested r²", 0.80),
                ("ungrouped r²", 0.95),
                ("batch r²", 0.71),
            ],
        )
        .numbers(UNIT, two, &[("batch rmse", 0.33)])
        .table(
            "ladder",
            vec![
                words(
                    "step",
                    &[
                        "apparent",
                        "tuning",
                        "nested",
                        "whole batches held out",
                        "sealed set",
                    ],
                ),
                words(
                    "what is held out",
                    &["nothing", "inner parts", "outer parts", "caves", "40"],
                ),
                column("r²", "", two, &[0.94, 0.86, 0.80, 0.71, sealed]),
                column("r² low", "", two, &[f64::NAN, 0.84, 0.75, 0.62, f64::NAN]),
                column("r² high", "", two, &[f64::NAN, 0.88, 0.85, 0.79, f64::NAN]),
                column("rmse", UNIT, two, &[0.15, 0.23, 0.28, 0.33, f64::NAN]),
                words("remark", &["", "", "", "", remark]),
            ],
        );
    if opened {
        writer = writer
            .numbers("", two, &[("sealed r²", 0.69), ("sealed slope", 1.08)])
            .numbers(UNIT, two, &[("sealed rmse", 0.34), ("sealed bias", 0.09)])
            .counts(&[("sealed openings", 1)]);
    }
    writer.0
}

fn chosen_again() -> Facts {
    let two = Precision::Decimals(2);
    Writer(Facts::new())
        .counts(&[
            ("pairs", 50),
            ("resamples", 100),
            ("chosen again", 3),
            ("chosen predictors", 5),
        ])
        .numbers(
            "",
            two,
            &[
                ("threshold", 0.75),
                ("stability index", 0.61),
                ("stability low", 0.57),
                ("stability high", 0.65),
                ("expected low-selection predictors worst case", 0.14),
                ("expected low-selection predictors unimodal", 0.07),
                ("expected low-selection predictors r-concave", 0.02),
                ("null stability index", 0.01),
                ("null highest frequency", 0.18),
            ],
        )
        .numbers(
            "",
            Precision::Significant(3),
            &[
                ("strength used", 0.0312),
                ("mean chosen per half", 7.04),
                ("null chosen per half", 3.12),
            ],
        )
        .table(
            "frequencies",
            vec![
                words(
                    "predictor",
                    &["1452 nm", "1150 nm", "1384 nm", "1716 nm", "1210 nm"],
                ),
                column(
                    "frequency",
                    "",
                    Precision::Percent(0),
                    &[0.98, 0.94, 0.91, 0.42, 0.31],
                ),
                column(
                    "low",
                    "",
                    Precision::Percent(0),
                    &[0.93, 0.88, 0.84, 0.33, 0.23],
                ),
                column(
                    "high",
                    "",
                    Precision::Percent(0),
                    &[0.99, 0.97, 0.95, 0.52, 0.41],
                ),
                column(
                    "sign consistency",
                    "",
                    Precision::Percent(0),
                    &[1.0, 1.0, 1.0, 0.9, 0.8],
                ),
                words("in the final list", &["yes", "yes", "yes", "yes", "yes"]),
            ],
        )
        .0
}

fn stand_ins() -> Facts {
    Writer(Facts::new())
        .counts(&[
            ("chosen predictors", 5),
            ("predictors with stand-ins", 5),
            ("stand-ins in all", 42),
            ("largest group", 14),
        ])
        .numbers(
            "",
            Precision::Decimals(2),
            &[("correlation threshold", 0.8)],
        )
        .table(
            "stand-ins",
            vec![
                words("predictor", &["1452 nm", "1452 nm", "1150 nm"]),
                words("stand-in", &["1451 nm", "1453 nm", "1151 nm"]),
                column(
                    "correlation",
                    "",
                    Precision::Decimals(3),
                    &[0.991, 0.989, 0.96],
                ),
            ],
        )
        .table(
            "groups",
            vec![
                words("predictor", &["1452 nm", "1150 nm", "1384 nm", "1716 nm"]),
                whole("stand-ins", &[14.0, 9.0, 11.0, 2.0]),
                words(
                    "strongest stand-in",
                    &["1451 nm", "1151 nm", "1383 nm", "1715 nm"],
                ),
                column(
                    "strongest correlation",
                    "",
                    Precision::Decimals(3),
                    &[0.991, 0.96, 0.97, 0.85],
                ),
            ],
        )
        .0
}
