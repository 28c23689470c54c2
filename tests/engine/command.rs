//! The program itself: exit statuses, what is said and written.
#![expect(
    clippy::disallowed_methods,
    reason = "tests make and read files of their own"
)]

use crate::support::spectra;
use std::path::PathBuf;
use std::process::{Command, Output};

struct Folder(PathBuf);

impl Folder {
    fn new(name: &str) -> Self {
        let path = std::env::temp_dir().join(format!("widefold-{name}-{}", std::process::id()));
        let _ = std::fs::remove_dir_all(&path);
        std::fs::create_dir_all(&path).unwrap();
        Self(path)
    }

    fn put(&self, name: &str, bytes: &[u8]) {
        std::fs::write(self.0.join(name), bytes).unwrap();
    }

    fn run(&self, arguments: &[&str]) -> Output {
        let program = env!("CARGO_BIN_EXE_widefold");
        Command::new(program)
            .args(arguments)
            .current_dir(&self.0)
            .output()
            .unwrap()
    }

    /// Runs a command that must end with this status; returns what it said on standard error.
    fn said(&self, status: i32, arguments: &[&str]) -> String {
        let output = self.run(arguments);
        let said = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(status), "{arguments:?}: {said}");
        said
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.0);
    }
}

const SMALL: [&str; 8] = [
    "--parts",
    "5",
    "--repeats",
    "1",
    "--outer-parts",
    "4",
    "--outer-repeats",
    "1",
];

const MEATS: &[u8] = include_bytes!("../reference/data/meats.csv");
const PERMEABILITY: &[u8] = include_bytes!("../reference/data/permeability.csv");

fn whole_way(folder: &Folder, table: &str, outcome: &str, ignored: &[&str]) -> serde_json::Value {
    let mut start = vec!["start", table, "--outcome", outcome, "-o", "study.widefold"];
    start.extend(SMALL);
    ignored
        .iter()
        .for_each(|name| start.extend(["--ignore", name]));
    let _ = folder.said(0, &start);
    let _ = folder.said(0, &["update", "study.widefold"]);
    let output = folder.run(&["facts", "study.widefold", "--json"]);
    assert!(output.status.success());
    let facts: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    let _ = folder.said(
        0,
        &[
            "export",
            "study.widefold",
            "--workbook",
            "out.xlsx",
            "--write-up",
            "out.md",
        ],
    );
    let text = std::fs::read_to_string(folder.0.join("out.md")).unwrap();
    for heading in [
        "## Methods",
        "## Results",
        "## Caveats",
        "## What this document cannot know",
    ] {
        assert!(text.contains(heading), "{heading}");
    }
    for figure in text.lines().filter(|line| line.starts_with("![")) {
        let name = figure.rsplit('(').next().unwrap().trim_end_matches(')');
        assert!(folder.0.join(name).exists(), "{name}");
    }
    assert!(
        std::fs::read(folder.0.join("out.xlsx"))
            .unwrap()
            .starts_with(b"PK")
    );
    facts
}

fn fact(facts: &serde_json::Value, kind: &str, name: &str) -> f64 {
    let cells = facts["cells"].as_array().unwrap();
    let cell = cells.iter().find(|cell| cell["kind"] == kind).unwrap();
    let facts = cell["facts"].as_array().unwrap();
    facts.iter().find(|fact| fact["name"] == name).unwrap()["value"]
        .as_f64()
        .unwrap()
}

#[test]
fn open_spectra_go_from_table_to_hand_overs() {
    let folder = Folder::new("meats");
    // 60 samples of 100 absorbances: fewer samples than predictors.
    let first: Vec<&[u8]> = MEATS.split(|b| *b == b'\n').take(61).collect();
    folder.put("meats.csv", &first.join(&b'\n'));
    let facts = whole_way(&folder, "meats.csv", "fat", &["water", "protein"]);
    assert!(facts["study"].is_object());
    for cell in facts["cells"].as_array().unwrap() {
        assert_eq!(cell["state"], "current", "{}", cell["name"]);
        assert!(cell["facts"].is_array() && cell["caveats"].is_array());
    }
    assert_eq!(fact(&facts, "data", "samples"), 60.0);
    assert_eq!(fact(&facts, "data", "predictors"), 100.0);
    // Near-infrared spectra tell fat well, even from 60 samples.
    assert!(fact(&facts, "fit", "nested r²") > 0.8);
    assert_eq!(fact(&facts, "fit", "unsettled solutions"), 0.0);
}

#[test]
fn open_fingerprints_go_from_table_to_hand_overs() {
    let folder = Folder::new("permeability");
    folder.put("permeability.csv", PERMEABILITY);
    let facts = whole_way(&folder, "permeability.csv", "permeability", &[]);
    let nested = fact(&facts, "fit", "nested r²");
    assert!((0.2..0.7).contains(&nested), "{nested}");
    // The all-zero point of the reference values (independent solver and scikit-learn).
    let strongest = fact(&facts, "fit", "strongest strength");
    assert!(
        (strongest / 9.735_072_948_223_09 - 1.0).abs() < 1e-9,
        "{strongest}"
    );
}

#[test]
fn a_wrong_command_line_ends_with_two_and_a_study_that_fails_with_one() {
    let folder = Folder::new("status");
    folder.put("vats.csv", spectra(20, 12, 3.0, 3).as_bytes());
    assert_eq!(
        folder
            .run(&["start", "vats.csv", "-o", "s.widefold"])
            .status
            .code(),
        Some(2)
    );
    assert_eq!(folder.run(&["update"]).status.code(), Some(2));
    assert_eq!(
        folder.run(&["facts", "s.widefold", "--xml"]).status.code(),
        Some(2)
    );
    for later in [
        &["score", "s.widefold", "--fit", "f", "t.csv", "-o", "o.csv"][..],
        &["verify", "s.widefold"],
        &["compare", "a.widefold", "b.widefold"],
    ] {
        assert!(folder.said(1, later).contains("not built yet"));
    }
    let said = folder.said(1, &["update", "nowhere.widefold"]);
    assert!(said.contains("nowhere.widefold"));
    let said = folder.said(
        1,
        &[
            "start",
            "vats.csv",
            "--outcome",
            "yield_g",
            "-o",
            "study.txt",
        ],
    );
    assert!(said.contains(".widefold"), "{said}");
}

#[test]
fn each_bad_input_gets_its_own_clear_answer() {
    let folder = Folder::new("bad");
    folder.put("vats.csv", spectra(20, 12, 3.0, 3).as_bytes());
    let start = |table: &str, outcome: &str| {
        folder.said(
            1,
            &["start", table, "--outcome", outcome, "-o", "s.widefold"],
        )
    };
    assert!(start("vats.csv", "yeild").contains("yeild"));
    folder.put("empty.csv", b"");
    assert!(start("empty.csv", "y").contains("empty.csv: The file is empty."));
    folder.put(
        "binary.csv",
        &[
            0x7f, b'E', b'L', b'F', 2, 1, 1, 0, 0, 0, 0, 0, 3, 0, 62, 0, 0xff, 0xfe, 0, 1,
        ],
    );
    assert!(start("binary.csv", "y").contains("binary.csv"));
    let lab = include_bytes!("../../demo-data/cellar-lab.xlsx");
    folder.put("cut.xlsx", &lab[..lab.len() / 2]);
    assert!(start("cut.xlsx", "y").contains("cut.xlsx"));
    folder.put("heads.csv", b"sample,y,a,b\n");
    assert!(start("heads.csv", "y").contains("heads.csv"));

    // What can be read but not analysed fails in its cell, with the place and what would mend it.
    let fails = |table: &str, text: &str, outcome: &str, more: &[&str]| {
        folder.put(table, text.as_bytes());
        let mut arguments = vec![
            "start",
            table,
            "--outcome",
            outcome,
            "--kind",
            "measured",
            "-o",
            "b.widefold",
        ];
        arguments.extend(more);
        let _ = folder.said(0, &arguments);
        let said = folder.said(1, &["update", "b.widefold"]);
        assert!(said.contains("→"), "what would mend it: {said}");
        said
    };
    let three = "sample,y,a,b\nA,1,2,3\nB,2,3,5\nC,3,1,1\n";
    assert!(fails("three.csv", three, "y", &[]).contains("parts"));
    let constant = "sample,y,a\nA,5,1\nB,5,2\nC,5,4\nD,5,3\nE,5,2\nF,5,7\n";
    assert!(fails("constant.csv", constant, "y", &[]).contains("the same for all"));
    let words = "sample,y,a\nA,low,1\nB,high,2\nC,low,4\nD,mid,3\nE,low,2\nF,high,7\n";
    let said = fails("words.csv", words, "y", &[]);
    assert!(said.contains("words.csv") && said.contains('y'), "{said}");
    let twice = "sample,y,a\nA,1,1\nA,2,2\nB,3,4\nC,4,3\nD,5,2\nE,6,7\n";
    let said = fails("twice.csv", twice, "y", &["--samples", "sample"]);
    assert!(
        said.contains("more than once") && said.contains("“A”"),
        "{said}"
    );
}

#[test]
fn one_predictor_and_more_samples_than_predictors_are_fitted() {
    let folder = Folder::new("narrow");
    let mut text = String::from("sample,y,a\n");
    let mut dice = crate::support::Dice(4);
    for i in 0..40 {
        let a = dice.normal();
        text.push_str(&format!(
            "S{i},{:.4},{a:.4}\n",
            2.0 * a + 0.3 * dice.normal()
        ));
    }
    folder.put("narrow.csv", text.as_bytes());
    let facts = whole_way(&folder, "narrow.csv", "y", &[]);
    assert_eq!(fact(&facts, "data", "predictors"), 1.0);
    assert!(fact(&facts, "fit", "nested r²") > 0.9);
}
