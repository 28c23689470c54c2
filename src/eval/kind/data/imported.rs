//! The facts of a Data cell about its files: what was read, what was noticed, what was joined.

use crate::base::layout::Orientation;
use crate::eval::fact::{Fact, FactColumn, Facts};
use crate::eval::finding;
use crate::eval::kind::data::facts::{counts, texts};
use crate::eval::kind::data::roles::Roles;
use crate::study::settings::data::Data;
use crate::table::finding::Finding;

/// Publishes what is known about the files.
pub fn publish(facts: &mut Facts, settings: &Data, roles: &Roles) {
    files(facts, roles);
    findings(facts, settings, &roles.findings);
    offers(facts, settings, roles);
    places(facts, &roles.findings);
    joins(facts, roles);
}

fn files(facts: &mut Facts, roles: &Roles) {
    let sources = &roles.sources;
    facts.push(Fact::count(
        "tables",
        sources.len(),
        "How many tables were read.",
    ));
    let orientation = |used: Option<Orientation>| match used {
        Some(Orientation::SamplesInColumns) => "samples in columns",
        Some(Orientation::SamplesInRows) | None => "samples in rows",
    };
    facts.push(Fact::table(
        "source files",
        vec![
            FactColumn::texts(
                "file",
                texts(sources, |s| s.file.clone()),
                "The file's name.",
            ),
            FactColumn::texts(
                "sheet",
                texts(sources, |s| s.sheet.clone()),
                "The sheet of a workbook.",
            ),
            counts(sources, "bytes", "The file's size in bytes.", |s| s.bytes),
            FactColumn::texts(
                "sha-256",
                texts(sources, |s| s.hash.clone()),
                "The SHA-256 of the file's bytes.",
            ),
            FactColumn::texts(
                "taken on",
                texts(sources, |s| s.taken_on.clone()),
                "The day on which the bytes were taken in.",
            ),
            FactColumn::texts(
                "table sha-256",
                texts(sources, |s| s.table.to_string()),
                "The SHA-256 of the table as read: names, units and values, whatever the form.",
            ),
            FactColumn::texts(
                "orientation",
                texts(sources, |s| orientation(s.used.orientation).to_owned()),
                "Whether a sample is a row or a column of the file.",
            ),
            counts(
                sources,
                "rows read",
                "How many samples or things the table describes.",
                |s| s.shape.0,
            ),
            counts(
                sources,
                "columns read",
                "How many columns the table has.",
                |s| s.shape.1,
            ),
        ],
        "The files that were read, with what identifies them.",
    ));
}

fn findings(facts: &mut Facts, settings: &Data, findings: &[Finding]) {
    let place = |finding: &Finding| {
        finding
            .places
            .first()
            .map(ToString::to_string)
            .unwrap_or_default()
    };
    let setting = |finding: &Finding| {
        let lines: Vec<String> = finding::offers(finding, settings)
            .iter()
            .map(|offer| offer.line.clone())
            .collect();
        lines.join(" | ")
    };
    facts.push(Fact::table(
        "import findings",
        vec![
            FactColumn::texts(
                "finding",
                texts(findings, finding::sentence),
                "What was found.",
            ),
            counts(findings, "count", "How often it was found.", |f| f.count),
            FactColumn::texts(
                "places",
                texts(findings, place),
                "Where it was found first; the table of places lists more.",
            ),
            FactColumn::texts(
                "treatment",
                texts(findings, |f| finding::treatment(f).to_owned()),
                "What was done about it.",
            ),
            FactColumn::texts(
                "could be done",
                texts(findings, |f| finding::mend(f).join(" ")),
                "What could be done about it.",
            ),
            FactColumn::texts(
                "setting",
                texts(findings, setting),
                "The settings that do it, as start and update take them behind --set.",
            ),
        ],
        "What was found while reading the tables, what was done and what could be done about it.",
    ));
}

/// What can be done about the findings with one press of a button or one setting.
fn offers(facts: &mut Facts, settings: &Data, roles: &Roles) {
    let of_findings = roles.findings.iter().flat_map(|finding| {
        let code = finding.kind.code();
        finding::offers(finding, settings)
            .into_iter()
            .map(move |offer| (code, offer))
    });
    let of_joins = roles.joins.iter().flat_map(|(source, report)| {
        let offers = finding::join_offers(&source.file, report);
        offers.into_iter().map(|offer| ("join", offer))
    });
    let offers: Vec<(&str, finding::Offer)> = of_findings.chain(of_joins).collect();
    if offers.is_empty() {
        return;
    }
    facts.push(Fact::table(
        "import offers",
        vec![
            FactColumn::texts(
                "finding",
                texts(&offers, |(code, _)| (*code).to_owned()),
                "The sort of finding.",
            ),
            FactColumn::texts(
                "offer",
                texts(&offers, |(_, offer)| offer.label.clone()),
                "What can be done.",
            ),
            FactColumn::texts(
                "setting",
                texts(&offers, |(_, offer)| offer.line.clone()),
                "The setting that does it, as start and update take it behind --set.",
            ),
        ],
        "What can be done about the findings with one setting.",
    ));
}

/// Where everything that was found stands.
fn places(facts: &mut Facts, findings: &[Finding]) {
    let places: Vec<(&Finding, &crate::base::problem::Place)> = findings
        .iter()
        .flat_map(|finding| finding.places.iter().map(move |place| (finding, place)))
        .collect();
    if places.is_empty() {
        return;
    }
    let row = |place: &crate::base::problem::Place| {
        place.row.map(|row| row.to_string()).unwrap_or_default()
    };
    facts.push(Fact::table(
        "import places",
        vec![
            FactColumn::texts(
                "finding",
                texts(&places, |(finding, _)| finding.kind.code().to_owned()),
                "The sort of finding.",
            ),
            FactColumn::texts(
                "file",
                texts(&places, |(_, place)| place.file.clone().unwrap_or_default()),
                "The file.",
            ),
            FactColumn::texts(
                "sheet",
                texts(&places, |(_, place)| {
                    place.sheet.clone().unwrap_or_default()
                }),
                "The sheet of a workbook.",
            ),
            FactColumn::texts(
                "row",
                texts(&places, |(_, place)| row(place)),
                "The row of the file.",
            ),
            FactColumn::texts(
                "column",
                texts(&places, |(_, place)| {
                    place.column.clone().unwrap_or_default()
                }),
                "The column.",
            ),
        ],
        "Where it stands: of every finding the first 200 places.",
    ));
}

fn joins(facts: &mut Facts, roles: &Roles) {
    if roles.joins.is_empty() {
        return;
    }
    let joins = &roles.joins;
    facts.push(Fact::table(
        "join report",
        vec![
            FactColumn::texts(
                "table",
                texts(joins, |(s, _)| s.file.clone()),
                "The table that was joined.",
            ),
            FactColumn::texts(
                "key",
                texts(joins, |(s, _)| {
                    s.join.as_ref().map(|j| j.left.clone()).unwrap_or_default()
                }),
                "The column on which it was joined.",
            ),
            counts(
                joins,
                "matched",
                "How many samples found a row in the joined table.",
                |(_, r)| r.matched,
            ),
            counts(
                joins,
                "only left",
                "How many names stand only in the tables before.",
                |(_, r)| r.only_left.len(),
            ),
            counts(
                joins,
                "only right",
                "How many names stand only in the joined table.",
                |(_, r)| r.only_right.len(),
            ),
            counts(
                joins,
                "repeated",
                "How many names stand in the joined table more than once, with values that \
                 differ; nothing was taken from them.",
                |(_, r)| r.repeated_right.len(),
            ),
            counts(
                joins,
                "without a name",
                "How many samples have no name to be matched by.",
                |(_, r)| r.unnamed_left,
            ),
            counts(
                joins,
                "samples per row",
                "The most samples that one row of the joined table served.",
                |(_, r)| r.most_shared,
            ),
            FactColumn::texts(
                "rule",
                texts(joins, |(_, r)| finding::join_rule(&r.rule)),
                "When two names are taken as the same.",
            ),
            FactColumn::texts(
                "remarks",
                texts(joins, |(_, r)| finding::join_report(r).join(" ")),
                "What is to be known about it.",
            ),
        ],
        "What joining the tables found.",
    ));
    let names: Vec<(&str, &str, &String)> = joins
        .iter()
        .flat_map(|(source, report)| {
            let file = source.file.as_str();
            let left = report.only_left.iter();
            let right = report.only_right.iter();
            let repeated = report.repeated_right.iter();
            left.map(move |name| (file, "only in the tables before", name))
                .chain(right.map(move |name| (file, "only in the joined table", name)))
                .chain(
                    repeated.map(move |name| (file, "more than once, with differing values", name)),
                )
        })
        .collect();
    if names.is_empty() {
        return;
    }
    facts.push(Fact::table(
        "names that did not match",
        vec![
            FactColumn::texts(
                "table",
                texts(&names, |(file, ..)| (*file).to_owned()),
                "The table that was joined.",
            ),
            FactColumn::texts(
                "name",
                texts(&names, |(.., name)| (*name).clone()),
                "The name, as it is written.",
            ),
            FactColumn::texts(
                "stands",
                texts(&names, |(_, what, _)| (*what).to_owned()),
                "Where it stands.",
            ),
        ],
        "Every name that found no partner, or more than one.",
    ));
}
