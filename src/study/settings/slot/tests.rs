//! The door to the settings: what it takes, what it fills in, and what it says.

use crate::base::real::Real;
use crate::study::cell::CellId;
use crate::study::settings::Settings;
use crate::study::settings::data::Sealed;
use crate::study::settings::fit::{Fit, Judge, Penalty, Rule, Strength};
use crate::study::settings::prepare::{Prepare, Step};
use crate::study::settings::slot::data::DataSlot;
use crate::study::settings::slot::fit::FitSlot;
use crate::study::settings::slot::prepare::{PrepareSlot, StepSlot};
use crate::study::settings::slot::prose::ProseSlot;
use crate::study::settings::slot::table::TableSlot;
use crate::study::settings::slot::{Bounds, Slot, Value};
use crate::study::settings::spread;
use crate::study::source::SourceId;

fn fit(slot: FitSlot, value: Value) -> Result<Fit, String> {
    match Settings::Fit(Fit::default()).with(&Slot::Fit(slot), value) {
        Ok(Settings::Fit(fit)) => Ok(fit),
        Ok(_) => Err("the kind of cell changed".to_owned()),
        Err(problem) => Err(problem.found),
    }
}

fn typed(slot: FitSlot, text: &str) -> Result<Fit, String> {
    fit(slot, Value::Text(text.to_owned()))
}

#[test]
fn every_place_takes_back_what_stands_there_and_nothing_changes() {
    for settings in spread::all() {
        for slot in settings.slots() {
            let value = settings
                .value(&slot)
                .unwrap_or_else(|| panic!("{slot:?} has no value in {settings:?}"));
            assert_eq!(
                settings.with(&slot, value).as_ref(),
                Ok(&settings),
                "{slot:?}"
            );
        }
    }
}

#[test]
fn a_place_is_listed_exactly_when_something_stands_there() {
    let all = spread::all();
    let mut every: Vec<Slot> = all.iter().flat_map(Settings::slots).collect();
    every.sort();
    every.dedup();
    for settings in &all {
        let listed = settings.slots();
        for slot in &every {
            let stands = settings.value(slot).is_some();
            // The unit and the reference error are kept, unseen, while the kind of outcome has
            // none; so are the readings of a text while the file is a workbook, and its sheet.
            let kept = matches!(
                slot,
                Slot::Data(
                    DataSlot::OutcomeUnit
                        | DataSlot::ReferenceError
                        | DataSlot::Table(
                            _,
                            TableSlot::Sheet
                                | TableSlot::Encoding
                                | TableSlot::Delimiter
                                | TableSlot::Decimal
                        )
                ) | Slot::Score(_)
            );
            assert!(
                listed.contains(slot) == stands || (kept && stands),
                "{slot:?} in {settings:?}"
            );
        }
    }
}

#[test]
fn every_choice_by_its_name_is_taken_and_stands_afterwards() {
    for settings in spread::all() {
        for slot in settings.slots() {
            for name in slot.choices() {
                let value = Value::choice(name);
                match settings.with(&slot, value.clone()) {
                    Ok(changed) => assert_eq!(changed.value(&slot), Some(value), "{slot:?}"),
                    // A derivative may be too high for the polynomial.
                    Err(problem) => assert!(
                        matches!(
                            slot,
                            Slot::Prepare(PrepareSlot::Step(_, StepSlot::Derivative))
                        ),
                        "{problem}"
                    ),
                }
            }
        }
    }
}

#[test]
fn a_choice_that_needs_more_settings_fills_in_the_usual_ones() {
    let net = fit(FitSlot::Penalty, Value::choice("elastic-net")).unwrap();
    assert_eq!(
        net.penalty,
        Penalty::ElasticNet {
            shares: vec![Real::constant(0.5)]
        }
    );
    let by_hand = fit(FitSlot::Choice, Value::choice("by-hand")).unwrap();
    assert!(by_hand.strength.is_by_hand());
    let back = Settings::Fit(by_hand)
        .with(&Slot::Fit(FitSlot::Choice), Value::choice("lowest-error"))
        .unwrap();
    assert_eq!(back, Settings::Fit(Fit::default()));
}

#[test]
fn settings_that_two_choices_share_are_kept() {
    let one_se = fit(FitSlot::InnerParts, Value::Whole(7))
        .map(Settings::Fit)
        .unwrap()
        .with(&Slot::Fit(FitSlot::Choice), Value::choice("one-se"))
        .unwrap();
    assert_eq!(
        one_se.value(&Slot::Fit(FitSlot::InnerParts)),
        Some(Value::Whole(7))
    );
    // A rule without parts keeps the plan for the way back.
    let back = one_se
        .with(&Slot::Fit(FitSlot::Choice), Value::choice("gcv"))
        .unwrap()
        .with(&Slot::Fit(FitSlot::Choice), Value::choice("one-se"))
        .unwrap();
    assert_eq!(back, one_se);
}

#[test]
fn a_strength_that_is_set_is_set_by_hand() {
    let fit = typed(FitSlot::Strength, "0,0312").unwrap();
    let by_rule = Fit::default().strength;
    assert_eq!(fit.strength, by_rule.set_by_hand(Real::constant(0.0312)));
    assert!(
        matches!(fit.strength, Strength::Chosen { .. }),
        "the comparison stays"
    );
}

#[test]
fn a_refusal_says_what_may_stand_there_and_what_was_typed() {
    for (slot, text, said) in [
        (
            FitSlot::Strength,
            "−2",
            "The penalty strength must be 0 or more; “−2” was typed.",
        ),
        (
            FitSlot::Strength,
            "weak",
            "The penalty strength must be 0 or more; “weak” was typed.",
        ),
        (
            FitSlot::InnerParts,
            "1",
            "The number of inner parts must be a whole number from 2 to 1000; “1” was typed.",
        ),
        (
            FitSlot::OuterRepeats,
            "2.5",
            "The number of outer repeats must be a whole number from 1 to 1000; “2.5” was typed.",
        ),
        (
            FitSlot::Penalty,
            "bridge",
            "The penalty must be one of ridge, lasso, elastic-net; “bridge” was typed.",
        ),
        (
            FitSlot::Shares,
            "0.5",
            "There is no lasso share to set, because the penalty is no elastic net.",
        ),
        (
            FitSlot::Strength,
            "20,000",
            "The penalty strength must be 0 or more; “20,000” was typed.",
        ),
    ] {
        assert_eq!(typed(slot, text), Err(said.to_owned()));
    }
}

#[test]
fn shares_are_read_from_a_list_sorted_and_told_once() {
    let net = fit(FitSlot::Penalty, Value::choice("elastic-net")).unwrap();
    let shares = |text: &str| {
        Settings::Fit(net.clone()).with(&Slot::Fit(FitSlot::Shares), Value::Text(text.to_owned()))
    };
    let read = shares("0.8, 0.2; 0,5 0.2").unwrap();
    assert_eq!(
        read.value(&Slot::Fit(FitSlot::Shares)),
        Some(Value::Numbers([0.2, 0.5, 0.8].map(Real::constant).to_vec()))
    );
    assert!(shares("0.5 1").unwrap_err().found.contains("“1”"));
    assert!(shares("").is_err());
}

#[test]
fn the_largest_seed_survives_and_a_larger_one_is_refused() {
    let largest = 9_007_199_254_740_992;
    assert_eq!(
        typed(FitSlot::Seed, "9007199254740992").unwrap().seed,
        largest
    );
    assert!(typed(FitSlot::Seed, "9007199254740993").is_err());
}

#[test]
fn a_window_stays_odd_and_wider_than_the_degree() {
    let prepare = Settings::Prepare(Prepare {
        steps: vec![Step::SavitzkyGolay {
            window: 5,
            degree: 2,
            derivative: 1,
        }],
        ..Prepare::default()
    });
    let set = |slot: StepSlot, number: u64| {
        prepare.with(
            &Slot::Prepare(PrepareSlot::Step(0, slot)),
            Value::Whole(number),
        )
    };
    assert!(set(StepSlot::Window, 7).is_ok());
    let even = set(StepSlot::Window, 8).unwrap_err();
    assert_eq!(
        even.found,
        "The window must be an odd number; “8” was typed."
    );
    assert_eq!(even.mend, ["Take 7 or 9."]);
    assert!(set(StepSlot::Degree, 5).is_err());
    assert!(set(StepSlot::Degree, 0).is_err());
}

#[test]
fn tables_are_added_and_taken_away_by_their_file() {
    let data = Settings::Data(spread::cellar());
    let file = Value::File {
        source: SourceId::of(b"probe"),
        name: "probe.csv".to_owned(),
    };
    let more = data.with(&Slot::Data(DataSlot::NextTable), file).unwrap();
    let join = Slot::Data(DataSlot::Table(2, TableSlot::JoinLeft));
    assert_eq!(
        more.value(&join),
        Some(Value::Column(Some("wheel".to_owned())))
    );
    let first = Slot::Data(DataSlot::Table(0, TableSlot::File));
    let fewer = more.with(&first, Value::Nothing).unwrap();
    let Settings::Data(fewer) = fewer else {
        panic!("the kind of cell changed")
    };
    assert_eq!(fewer.tables.len(), 2);
    assert_eq!(fewer.tables[0].join, None);
}

#[test]
fn columns_that_are_joined_by_one_name_keep_having_one() {
    let data = Settings::Data(spread::cellar());
    let left = Slot::Data(DataSlot::Table(1, TableSlot::JoinLeft));
    let right = Slot::Data(DataSlot::Table(1, TableSlot::JoinRight));
    let column = Value::Column(Some("scan".to_owned()));
    let joined = data.with(&left, column.clone()).unwrap();
    assert_eq!(joined.value(&right), Some(column));
}

#[test]
fn another_outcome_loses_the_unit_of_the_first() {
    let data = Settings::Data(spread::cellar());
    let other = data
        .with(
            &Slot::Data(DataSlot::Outcome),
            Value::Column(Some("fat".to_owned())),
        )
        .unwrap();
    assert_eq!(
        other.value(&Slot::Data(DataSlot::OutcomeUnit)),
        Some(Value::Nothing)
    );
}

#[test]
fn an_act_without_a_reason_is_refused() {
    let data = &spread::data()[2];
    let mut exclusions = data.exclusions.as_ref().clone();
    exclusions[1].reason = "  ".to_owned();
    let refused = Settings::Data(data.clone())
        .with(
            &Slot::Data(DataSlot::Exclusions),
            Value::Exclusions(exclusions.into()),
        )
        .unwrap_err();
    assert_eq!(refused.code.0, "act-without-reason");
}

#[test]
fn sealing_by_a_rule_starts_from_a_rule_that_can_be_read() {
    let data = Settings::Data(spread::data()[0].clone());
    let sealed = data
        .with(&Slot::Data(DataSlot::Sealed), Value::choice("where"))
        .unwrap();
    let Settings::Data(sealed) = sealed else {
        panic!("the kind of cell changed")
    };
    assert_eq!(
        sealed.sealed,
        Sealed::Where {
            column: "sealed".to_owned(),
            values: vec!["yes".to_owned()]
        }
    );
}

#[test]
fn a_place_of_another_kind_of_cell_is_refused() {
    let refused = Settings::Fit(Fit::default())
        .with(&Slot::Prose(ProseSlot::Text), Value::Nothing)
        .unwrap_err();
    assert_eq!(refused.found, "A Fit cell has no setting “text”.");
    let cell = Value::Cell(Some(CellId::new(4)));
    assert!(fit(FitSlot::Seed, cell).is_err());
}

#[test]
fn the_usual_settings_lie_within_their_bounds() {
    for settings in spread::all() {
        for slot in settings.slots() {
            let Some(bounds) = slot.bounds() else {
                continue;
            };
            match (settings.value(&slot), bounds) {
                (Some(Value::Whole(whole)), Bounds::Whole { least, most }) => {
                    assert!((least..=most).contains(&whole), "{slot:?}");
                }
                (Some(Value::Number(number)), Bounds::Any { least, most }) => {
                    assert!((least..=most).contains(&number.get()), "{slot:?}");
                }
                (Some(Value::Nothing | Value::Numbers(_)), _) => {}
                (value, bounds) => panic!("{slot:?}: {value:?} under {bounds:?}"),
            }
        }
    }
    assert!(matches!(Fit::default().judge, Judge::Nested(_)));
    assert!(Rule::LowestError.needs_parts());
}
