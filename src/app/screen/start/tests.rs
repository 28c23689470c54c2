//! Tests of starting from tables, on tables that lie in memory.

use super::*;
use crate::base::layout::Orientation;
use crate::report::kind::data;
use crate::study::settings::data::OutcomeKind;
use crate::study::settings::slot::Value;
use std::path::Path;

fn taken(name: &str, text: &str, asked: Options) -> Arc<Taken> {
    let bytes: Arc<[u8]> = Arc::from(text.as_bytes());
    take_bytes(Path::new(name), bytes, asked, &Work::unattended()).expect("the table is sound")
}

fn with(name: &str, text: &str) -> Start {
    Start::with(&[(name, text)])
}

fn add(screen: &mut Start, name: &str, text: &str) {
    let _ = screen.take(PathBuf::from(name));
    let read = Ok(taken(name, text, Options::default()));
    let _ = screen.update(Message::Read(Box::new(read)));
}

const LIGHT: &str = "scan,wheel,dose,salt,900 nm,901 nm,902 nm\n\
    w1-a,w1,1,2.1,0.1,0.2,0.3\nw1-b,w1,0,2.1,0.1,0.2,0.4\n\
    w2-a,w2,1,1.9,0.3,0.1,0.2\nw2-b,w2,1,1.9,0.3,0.1,0.3\n\
    w3-a,w3,0,2.5,0.2,0.2,0.2\nw3-b,w3,0,2.5,0.2,0.3,0.2\n";

#[test]
fn names_and_units_are_taken_from_the_first_table_and_the_outcome_never_is() {
    let screen = with("scans.csv", LIGHT);
    assert_eq!(screen.roles.first(Role::SampleName), Some("scan"));
    assert_eq!(screen.roles.first(Role::Unit), Some("wheel"));
    assert_eq!(screen.roles.first(Role::Outcome), None);
    let problem = screen.wishes().expect_err("nothing is predicted yet");
    assert_eq!(problem.code.0, "no-outcome");
}

#[test]
fn a_proposal_that_is_taken_back_stays_taken_back() {
    let mut screen = with("scans.csv", LIGHT);
    let _ = screen.set(Ask::Column(Role::Unit), Value::Column(None));
    add(&mut screen, "more.csv", "wheel,fat\nw1,3\nw2,4\nw3,5\n");
    assert_eq!(screen.roles.first(Role::Unit), None);
}

#[test]
fn every_kind_of_outcome_can_be_wished_for_and_a_time_needs_its_event() {
    for (name, _) in data::kinds() {
        let mut screen = with("scans.csv", LIGHT);
        screen.give("salt", Role::Outcome);
        let _ = screen.set(Ask::Kind, Value::choice(name));
        if *name == "time" {
            let problem = screen.wishes().expect_err("the event is not named yet");
            assert_eq!(problem.code.0, "no-event");
            screen.give("dose", Role::Event);
        }
        let wishes = screen.wishes().expect("all is said");
        let kind = wishes.kind.expect("a kind was chosen");
        let is_it = matches!(
            (*name, kind),
            ("measured", OutcomeKind::Measured)
                | ("yes-no", OutcomeKind::YesNo { .. })
                | ("classes", OutcomeKind::Classes)
                | ("count", OutcomeKind::Count { .. })
                | ("time", OutcomeKind::Time { .. })
        );
        assert!(is_it, "{name}");
    }
}

#[test]
fn a_column_that_is_said_to_be_the_event_makes_the_outcome_a_time() {
    let mut screen = with("scans.csv", LIGHT);
    screen.give("salt", Role::Outcome);
    screen.give("dose", Role::Event);
    let wishes = screen.wishes().expect("all is said");
    let event = "dose".to_owned();
    assert_eq!(wishes.kind, Some(OutcomeKind::Time { event }));
}

#[test]
fn a_table_that_lies_sideways_is_read_again_and_so_is_the_study_made() {
    let sideways = "name,s1,s2,s3\nfat,1,2,3\nsalt,4,5,6\n";
    let mut screen = with("sideways.csv", sideways);
    let asked = Options {
        orientation: Some(Orientation::SamplesInColumns),
        ..Options::default()
    };
    let Action::Run(_) = screen.set(Ask::Orientation, Value::choice("columns")) else {
        panic!("the table is read again");
    };
    let again = Ok(taken("sideways.csv", sideways, asked));
    let _ = screen.update(Message::ReadAgain(0, Box::new(again)));
    screen.give("salt", Role::Outcome);
    let wishes = screen.wishes().expect("all is said");
    assert_eq!(
        wishes.reading[0].orientation,
        Some(Orientation::SamplesInColumns)
    );
    assert_eq!(screen.shown.expect("a table is shown").table().n_rows(), 3);
}

#[test]
fn a_file_that_is_no_table_is_told_and_the_others_stay() {
    let mut screen = with("scans.csv", LIGHT);
    let _ = screen.take(PathBuf::from("picture.png"));
    let refused = take_bytes(
        Path::new("picture.png"),
        Arc::from(&b"\x89PNG\r\n\x1a\n\0\0\0\rIHDR"[..]),
        Options::default(),
        &Work::unattended(),
    );
    assert!(refused.is_err(), "a picture is no table");
    let _ = screen.update(Message::Read(Box::new(refused)));
    assert_eq!(screen.tables.len(), 1);
    let problem = screen.problem.as_ref().expect("it is told");
    assert_eq!(problem.place.file.as_deref(), Some("picture.png"));
    assert!(!problem.mend.is_empty(), "and what would mend it");
}

#[test]
fn files_that_are_dropped_at_once_are_read_one_after_the_other() {
    let (mut screen, _) = Start::new();
    let _ = screen.take(PathBuf::from("scans.csv"));
    let _ = screen.take(PathBuf::from("more.csv"));
    assert_eq!(screen.waiting.len(), 1);
    let read = Ok(taken("scans.csv", LIGHT, Options::default()));
    let Action::Run(_) = screen.update(Message::Read(Box::new(read))) else {
        panic!("the next file is read");
    };
    assert!(screen.waiting.is_empty());
    assert_eq!(screen.tables.len(), 1);
}

#[test]
fn a_table_that_is_removed_takes_the_roles_of_its_columns_along() {
    let mut screen = with("scans.csv", LIGHT);
    screen.give("salt", Role::Outcome);
    let _ = screen.update(Message::Remove(0));
    assert_eq!(screen.roles, Roles::default());
    assert!(screen.shown.is_none());
}
