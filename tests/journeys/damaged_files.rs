//! What is on disk may be damaged in any way; nothing of it may cost work or peace.

use crate::support::{Dice, Folder, any_desk, get, put};
use std::path::Path;
use widefold::base::problem::Problem;
use widefold::store::archive::{Entry, pack, unpack};
use widefold::store::record::Record;
use widefold::store::{self, Opened, fingerprint};
use widefold::study::cell::Kind;
use widefold::study::settings::Settings;

/// A packed study with a table and a record, as bytes.
fn packed() -> Vec<u8> {
    let folder = Folder::new();
    let path = folder.file("good.widefold");
    // A study that has a table in a data cell and results.
    for seed in 0.. {
        let desk = any_desk(seed, &folder);
        let record = Record::from(&desk.study, &desk.standings);
        let has_table = desk.study.cells().iter().any(|cell| match &cell.settings {
            Settings::Data(data) => !data.tables.is_empty(),
            _ => false,
        });
        if has_table && record.written().len() > 3 {
            store::save(&path, &desk.study, &desk.shelf, &desk.ledger, &record).unwrap();
            return get(&path);
        }
    }
    unreachable!("some seed gives such a study");
}

/// The same archive with its entries changed: `None` leaves one out.
fn repacked(bytes: &[u8], change: impl Fn(&str, &[u8]) -> Option<Vec<u8>>) -> Vec<u8> {
    let all = unpack(bytes, "x", &|_| true).unwrap();
    let changed: Vec<_> = all
        .entries
        .iter()
        .filter_map(|(name, bytes)| Some((name.clone(), change(name, bytes)?)))
        .collect();
    let entries: Vec<_> = changed
        .iter()
        .map(|(name, bytes)| Entry {
            name: name.clone(),
            bytes,
        })
        .collect();
    pack(&entries).unwrap()
}

fn open(name: &str, bytes: &[u8]) -> Result<Opened, Problem> {
    store::open_bytes(&Path::new("/nowhere").join(name), bytes)
}

fn refusal(name: &str, bytes: &[u8]) -> &'static str {
    let problem = open(name, bytes).expect_err(name);
    assert_eq!(problem.place.file.as_deref(), Some(name));
    lawful(&problem);
    problem.code.0
}

fn remarks(name: &str, bytes: &[u8]) -> Vec<&'static str> {
    let opened = open(name, bytes).unwrap();
    opened.problems.iter().for_each(lawful);
    let mut codes: Vec<_> = opened.problems.iter().map(|p| p.code.0).collect();
    codes.dedup();
    codes
}

/// Whole sentences, a place, and something that would mend it; no blame, no shouting.
fn lawful(problem: &Problem) {
    assert!(problem.place.file.is_some(), "{problem}");
    assert!(!problem.mend.is_empty(), "{problem}");
    for sentence in problem.mend.iter().chain([&problem.found]) {
        assert!(sentence.ends_with('.'), "{problem}");
        assert!(!sentence.contains('!'), "{problem}");
        for word in ["invalid", "illegal", "failed to", "please", "oops", "Error"] {
            assert!(!sentence.contains(word), "{problem}");
        }
    }
}

#[test]
fn each_damage_that_leaves_no_study_has_its_problem() {
    let good = packed();
    let study_at = find(&good, b"study.json");
    let cases: [(&str, Vec<u8>, &str); 12] = [
        ("empty.widefold", Vec::new(), "study-empty"),
        ("blank.json", b" \n\t ".to_vec(), "study-empty"),
        ("letter.json", b"Dear colleague,".to_vec(), "not-a-study"),
        ("list.json", b"[1, 2, 3]".to_vec(), "not-a-study"),
        ("other.json", br#"{"name": "x"}"#.to_vec(), "not-a-study"),
        (
            "cells.json",
            br#"{"cells": {"a": 1}}"#.to_vec(),
            "not-a-study",
        ),
        (
            "cut.json",
            br#"{"cells": [{"kind": "fit""#.to_vec(),
            "json-broken",
        ),
        (
            "latin.json",
            b"{\"cells\": [], \"title\": \"K\xe4se\"}".to_vec(),
            "json-broken",
        ),
        (
            "junk.widefold",
            b"PK\x03\x04junk".to_vec(),
            "archive-damaged",
        ),
        (
            "cut.widefold",
            good[..study_at + 40].to_vec(),
            "study-damaged",
        ),
        (
            "photos.widefold",
            repacked(&good, |name, bytes| {
                (name != "study.json").then(|| bytes.to_vec())
            }),
            "not-a-study",
        ),
        (
            "format.json",
            br#"{"format": "one", "cells": []}"#.to_vec(),
            "format-unclear",
        ),
    ];
    for (name, bytes, code) in cases {
        assert_eq!(refusal(name, &bytes), code, "{name}");
    }
}

#[test]
fn a_broken_text_names_the_line() {
    let text = b"{\n  \"cells\": [\n    { \"kind\": \"fit\" }\n    { }\n  ]\n}";
    let problem = open("typo.json", text).unwrap_err();
    assert_eq!(problem.place.row, Some(4));
}

#[test]
fn a_study_from_the_future_is_told_as_such_in_both_forms() {
    let text = br#"{"format": 3, "cells": "in a way nobody knows yet"}"#;
    assert_eq!(refusal("future.json", text), "newer-format");
    let future = repacked(&packed(), |name, bytes| {
        Some(if name == "study.json" {
            text.to_vec()
        } else {
            bytes.to_vec()
        })
    });
    assert_eq!(refusal("future.widefold", &future), "newer-format");
    let problem = open("future.json", text).unwrap_err();
    assert_eq!(
        problem.found,
        "This study was saved by a newer version (format 3). This version reads format 1."
    );
}

#[test]
fn each_damage_that_leaves_a_study_is_told_and_the_rest_opens() {
    let good = packed();
    assert_eq!(remarks("good.widefold", &good), [""; 0]);
    let n_cells = open("good.widefold", &good).unwrap().study.cells().len();

    // The end is missing: first the record goes, then the tables; the study stands first.
    let directory = find(&good, b"PK\x01\x02");
    let cut = &good[..directory + 10];
    assert_eq!(remarks("cut.widefold", cut), ["archive-cut-off"]);
    let table = find(&good, b"sources/");
    let cut = &good[..table + 90];
    let mut codes = remarks("cut.widefold", cut);
    codes.sort();
    codes.dedup();
    // The first table is cut through; those behind it are gone.
    let one = ["archive-cut-off", "table-damaged"];
    let both = ["archive-cut-off", "table-damaged", "table-missing"];
    assert!(codes == one || codes == both, "{codes:?}");
    let opened = open("cut.widefold", cut).unwrap();
    assert_eq!(opened.study.cells().len(), n_cells);

    let other_table = repacked(&good, |name, bytes| {
        let mut bytes = bytes.to_vec();
        if name.starts_with("sources/") {
            bytes[0] ^= 1;
        }
        Some(bytes)
    });
    assert_eq!(remarks("table.widefold", &other_table), ["table-damaged"]);

    let without_table = repacked(&good, |name, bytes| {
        (!name.starts_with("sources/")).then(|| bytes.to_vec())
    });
    assert_eq!(remarks("table.widefold", &without_table), ["table-missing"]);

    let record = |change: &dyn Fn(&str) -> String| {
        repacked(&good, |name, bytes| {
            Some(if name.starts_with("record/") {
                change(std::str::from_utf8(bytes).unwrap()).into_bytes()
            } else {
                bytes.to_vec()
            })
        })
    };
    let changes: [&dyn Fn(&str) -> String; 4] = [
        &|text| text[..text.floor_char_boundary(text.len() / 2)].to_owned(),
        &|_| String::new(),
        &|text| text.replacen("\"format\":1", "\"format\":2", 1),
        &|text| {
            text.replace("\"outcome\"", "\"income\"")
                .replace("\"failure\"", "\"success\"")
        },
    ];
    for change in changes {
        let damaged = record(change);
        assert_eq!(remarks("record.widefold", &damaged), ["record-damaged"]);
        let opened = open("record.widefold", &damaged).unwrap();
        assert!(opened.record.is_empty());
    }

    // A bit has flipped inside a packed entry: its checksum tells.
    let mut flipped = good.clone();
    flipped[find(&good, b"record/") + 60] ^= 0x10;
    assert_eq!(remarks("flipped.widefold", &flipped), ["record-damaged"]);
}

#[test]
fn each_slip_of_a_hand_is_told_with_its_place() {
    let cases: [(&str, &str, &str); 19] = [
        (r#"{"kind": "fitt"}"#, "unknown-kind", "“fitt”"),
        (r#"{}"#, "unknown-kind", "of which kind"),
        (r#"7"#, "unknown-kind", "of which kind"),
        (
            r#"{"kind": "fit", "penalty": "lassoo"}"#,
            "cell-not-read",
            "cells[0].penalty",
        ),
        (
            r#"{"kind": "fit", "choose": {"inner": {"parts": -3}}}"#,
            "cell-not-read",
            "cells[0].choose.inner.parts",
        ),
        (
            r#"{"kind": "fit", "choose": {"inner": {"parts": 1e300}}}"#,
            "cell-not-read",
            "cells[0].choose.inner.parts",
        ),
        (
            r#"{"kind": "fit", "choose": {"strengths": 4000000000}}"#,
            "cell-not-read",
            "1000",
        ),
        (
            r#"{"kind": "fit", "strength": -2}"#,
            "cell-not-read",
            "0 or more",
        ),
        (
            r#"{"kind": "prepare", "steps": [{"step": "savitzky-golay", "window": 4, "degree": 2, "derivative": 1}]}"#,
            "cell-not-read",
            "odd",
        ),
        (
            r#"{"kind": "fit", "strength": 1, "choose": {}}"#,
            "cell-not-read",
            "“strength” or “choose”",
        ),
        (
            r#"{"kind": "fit", "draws-on": "Nobody"}"#,
            "cell-not-read",
            "“Nobody”",
        ),
        (
            r#"{"kind": "prepare", "steps": ["center", "log"]}"#,
            "cell-not-read",
            "cells[0].steps[1]",
        ),
        (
            r#"{"kind": "data", "tables": [{"sheet": "A"}]}"#,
            "cell-not-read",
            "“file”",
        ),
        (
            r#"{"kind": "data", "tables": [{"file": "a.csv", "sha256": "12"}]}"#,
            "cell-not-read",
            "64 hexadecimal digits",
        ),
        (
            r#"{"kind": "data", "exclusions": [{"sample": "a"}]}"#,
            "cell-not-read",
            "cells[0].exclusions[0]",
        ),
        (
            r#"{"kind": "fit", "sead": 3}"#,
            "unknown-field",
            "cells[0].sead",
        ),
        (
            r#"{"kind": "fit", "id": "three"}"#,
            "cell-number",
            "cells[0]",
        ),
        (
            r#"{"kind": "fit", "id": 4294967295}"#,
            "cell-number",
            "cells[0]",
        ),
        (
            r#"{"kind": "fit", "title": "a: {b}"}"#,
            "cell-title",
            "“a b”",
        ),
    ];
    for (cell, code, named) in cases {
        let text = format!(r#"{{"cells": [{cell}]}}"#);
        let opened = open("slip.json", text.as_bytes()).unwrap();
        opened.problems.iter().for_each(lawful);
        let problem = opened.problems.iter().find(|p| p.code.0 == code);
        let problem = problem.unwrap_or_else(|| panic!("{cell}: {:?}", opened.problems));
        assert!(problem.to_string().contains(named), "{cell}: {problem}");
        assert_eq!(opened.study.cells().len(), 1, "{cell}");
        if ["unknown-kind", "cell-not-read"].contains(&code) {
            assert_eq!(opened.study.cells()[0].settings.kind(), Kind::Prose);
        }
    }
}

#[test]
fn cells_with_one_number_or_one_title_are_told_apart() {
    let text = r#"{"cells": [
        {"id": 1, "kind": "data", "title": "A"}, {"id": 1, "kind": "fit", "title": "a"},
        {"kind": "fit", "draws-on": 1}], "next-id": "x", "ledger": {"looks": [{"cell": 5}, 6]}}"#;
    let opened = open("twins.json", text.as_bytes()).unwrap();
    opened.problems.iter().for_each(lawful);
    let codes: Vec<_> = opened.problems.iter().map(|p| p.code.0).collect();
    assert_eq!(
        codes,
        [
            "study-field",
            "cell-number",
            "cell-title",
            "ledger",
            "ledger"
        ]
    );
    let cells = opened.study.cells();
    let ids: Vec<_> = cells.iter().map(|cell| cell.id.number()).collect();
    assert_eq!(ids, [1, 2, 3]);
    assert_eq!(cells[1].title, "a 2");
    // Looks that cannot be read still count.
    assert_eq!(opened.ledger.looks().len(), 2);
}

#[test]
fn a_table_that_has_gone_or_changed_is_told_and_nothing_of_the_study_is_lost() {
    let folder = Folder::new();
    let table = folder.put("lab/lab.csv", "a,b\n1,2\n");
    let text =
        r#"{"cells": [{"kind": "data", "title": "Lab", "tables": [{"file": "lab/lab.csv"}]}]}"#;
    let path = folder.put("s.json", text);
    let none = Record::default();
    let opened = store::open(&path).unwrap();
    let save = |opened: &Opened| {
        store::save(&path, &opened.study, &opened.shelf, &opened.ledger, &none).unwrap();
    };
    save(&opened);
    let good = get(&path);

    put(&table, "a,b\n1,3\n");
    let changed = store::open(&path).unwrap();
    assert_eq!(changed.problems.len(), 1);
    assert_eq!(changed.problems[0].code.0, "table-changed");
    lawful(&changed.problems[0]);
    let id = changed.study.cells()[0].id;
    assert_ne!(
        fingerprint(&changed.study, id),
        fingerprint(&opened.study, id)
    );

    std::fs::remove_file(&table).unwrap();
    let gone = store::open(&path).unwrap();
    assert_eq!(gone.problems.len(), 1);
    assert_eq!(gone.problems[0].code.0, "table-missing");
    lawful(&gone.problems[0]);
    assert_eq!(gone.study, opened.study);
    save(&gone);
    assert_eq!(get(&path), good, "path and hash of the missing table stay");

    // Nothing but a path is known: that stays.
    put(&path, text);
    let gone = store::open(&path).unwrap();
    assert_eq!(gone.problems[0].code.0, "table-missing");
    save(&gone);
    let saved = String::from_utf8(get(&path)).unwrap();
    assert!(saved.contains(r#"{ "file": "lab/lab.csv" }"#), "{saved}");
}

#[test]
fn a_device_is_not_read_as_a_table() {
    let text = r#"{"cells": [{"kind": "data", "tables": [{"file": "/dev/zero"}, {"file": "/"}]}]}"#;
    let opened = open("device.json", text.as_bytes()).unwrap();
    let codes: Vec<_> = opened.problems.iter().map(|p| p.code.0).collect();
    assert_eq!(codes, ["table-not-read", "table-not-read"]);
}

#[test]
fn a_file_that_is_not_there_or_a_folder_is_told_as_such() {
    let folder = Folder::new();
    let missing = store::open(&folder.file("missing.widefold")).unwrap_err();
    assert_eq!(missing.code.0, "file-missing");
    let is_folder = store::open(folder.path()).unwrap_err();
    assert_eq!(is_folder.code.0, "file-is-folder");
    lawful(&missing);
    lawful(&is_folder);
}

#[test]
fn a_save_that_cannot_be_leaves_everything_as_it_was() {
    let folder = Folder::new();
    let desk = any_desk(1, &folder);
    let record = Record::from(&desk.study, &desk.standings);
    let save = |path: &Path| {
        let problem = store::save(path, &desk.study, &desk.shelf, &desk.ledger, &record);
        let problem = problem.unwrap_err();
        lawful(&problem);
        problem.code.0
    };
    assert_eq!(save(&folder.file("study.docx")), "unknown-ending");
    assert_eq!(save(&folder.file("study")), "unknown-ending");
    assert_eq!(save(&folder.file("no/such/study.json")), "folder-missing");
    let is_folder = folder.file("folder.widefold");
    std::fs::create_dir(&is_folder).unwrap();
    assert_eq!(save(&is_folder), "file-is-folder");
    // A folder that takes no files, from nobody.
    let proc = save(Path::new("/proc/study.widefold"));
    assert!(
        ["folder-missing", "no-permission"].contains(&proc),
        "{proc}"
    );

    // A save that died half-way left its neighbour: it is in nobody's way.
    let path = folder.put("study.widefold", "old");
    let neighbor = format!(".study.widefold.{}.saving", std::process::id());
    let neighbor = folder.put(&neighbor, "half a stu");
    store::save(&path, &desk.study, &desk.shelf, &desk.ledger, &record).unwrap();
    assert!(!neighbor.exists());
    assert_eq!(store::open(&path).unwrap().study, desk.study);
}

/// Opens what may be anything; if it opens, it must save and open again.
fn survive(name: &str, bytes: &[u8]) -> bool {
    let Ok(opened) = open(name, bytes) else {
        return false;
    };
    for cell in opened.study.cells() {
        let _ = fingerprint(&opened.study, cell.id);
    }
    let standings = opened.record.standings(&opened.study);
    let record = opened.record.updated(&opened.study, &standings);
    let packed = store::packed::bytes(&opened.study, &opened.shelf, &opened.ledger, &record, &[]);
    let again = open("again.widefold", &packed.unwrap()).unwrap();
    if again.study != opened.study || again.ledger != opened.ledger {
        let (found, saved) = (format!("{again:?}"), format!("{opened:?}"));
        let at = found.bytes().zip(saved.bytes()).take_while(|(a, b)| a == b);
        let at = at.count().saturating_sub(200);
        let piece = |text: &str| {
            let bytes = text.as_bytes();
            String::from_utf8_lossy(&bytes[at..(at + 400).min(bytes.len())]).into_owned()
        };
        panic!(
            "{name}: saved {} but found {}",
            piece(&saved),
            piece(&found)
        );
    }
    true
}

fn mutated(bytes: &[u8], dice: &mut Dice) -> Vec<u8> {
    let mut bytes = bytes.to_vec();
    for _ in 0..=dice.below(3) {
        if bytes.is_empty() {
            break;
        }
        let at = dice.below(bytes.len());
        match dice.below(5) {
            0 => bytes[at] ^= 1 << dice.below(8),
            1 => bytes[at] = dice.one_of(b"\"{}[],:0-19e.\\ \x00\xff"),
            2 => drop(bytes.drain(at..(at + dice.below(40)).min(bytes.len()))),
            3 => bytes.insert(at, dice.one_of(b"\"{}[],:019e")),
            _ => {
                let end = (at + dice.below(60)).min(bytes.len());
                let piece = bytes[at..end].to_vec();
                let to = dice.below(bytes.len());
                drop(bytes.splice(to..to, piece));
            }
        }
    }
    bytes
}

#[test]
fn thousands_of_mutated_studies_open_or_are_refused_and_never_panic() {
    let good = packed();
    let all = unpack(&good, "x", &|_| true).unwrap();
    let study = &all.entries["study.json"];
    let (mut opened, mut refused) = (0, 0);
    let mut count = |is_open: bool| {
        if is_open {
            opened += 1;
        } else {
            refused += 1;
        }
    };
    for seed in 0..2000 {
        let mut dice = Dice(seed);
        count(survive("text.json", &mutated(study, &mut dice)));
    }
    for seed in 3000..3800 {
        let mut dice = Dice(seed);
        count(survive("bytes.widefold", &mutated(&good, &mut dice)));
    }
    for seed in 4500..5100 {
        let which = Dice(seed).below(all.entries.len());
        let name = all.entries.keys().nth(which).unwrap();
        let bytes = repacked(&good, |entry, bytes| {
            Some(if entry == name {
                mutated(bytes, &mut Dice(seed))
            } else {
                bytes.to_vec()
            })
        });
        count(survive("entry.widefold", &bytes));
    }
    for length in (0..good.len()).step_by(29) {
        count(survive("cut.widefold", &good[..length]));
    }
    // Both must happen, or nothing was tried.
    assert!(opened > 500 && refused > 500, "{opened}, {refused}");
}

fn find(bytes: &[u8], what: &[u8]) -> usize {
    let at = bytes.windows(what.len()).position(|window| window == what);
    at.expect("the archive holds it")
}
