//! The glasshouse as the panel and the growers deliver it, and the truth beside it.

use crate::chance::{Chance, exp};
use crate::glasshouse::{
    GASES, Glasshouse, HUMIDITY_EFFECT, LIMIT, LIMITED, N_BAYS, N_SENSORS, Night, glasshouse,
    is_sealed,
};
use crate::page::{Page, lines, packed, with_point};
use std::error::Error;

/// The seed of the setting.
pub const SEED: u64 = 20_260_401;
/// The seeds of the null twin and of the second recordings.
const NULL_SEED: u64 = 20_260_412;
const SHAKE_SEED: u64 = 20_260_403;

/// All files of the setting.
///
/// # Errors
///
/// When the compressor fails.
pub fn pages() -> Result<Vec<Page>, Box<dyn Error>> {
    let house = glasshouse(SEED);
    let nulls = dealt_out(&house.nights);
    let as_designed = night_rows(&house, |night| night.week);
    let broken = night_rows(&house, |night| night.broken_week);
    let written: Vec<usize> = (0..house.nights.len()).collect();
    Ok(vec![
        Page {
            name: "glasshouse-nights.csv",
            bytes: lines(&as_designed, ','),
        },
        Page {
            name: "glasshouse-nights-broken.csv.gz",
            bytes: packed(&lines(&broken, ','))?,
        },
        Page {
            name: "glasshouse-log.csv",
            bytes: lines(&log_rows(&house.nights, &written), ','),
        },
        Page {
            name: "glasshouse-log-null.csv",
            bytes: lines(&log_rows(&house.nights, &nulls), ','),
        },
        Page {
            name: "glasshouse-sensors.csv",
            bytes: lines(&sensor_rows(), ','),
        },
        Page {
            name: "glasshouse-truth.csv",
            bytes: lines(&truth_rows(&house), ','),
        },
    ])
}

/// What a sensor is called. Some of these names are taken for dates or numbers by careless readers.
pub fn sensor_name(sensor: usize) -> String {
    match sensor {
        2 => "MAR-2".to_owned(),
        7 => "SEP-9".to_owned(),
        11 => "1E-05".to_owned(),
        15 => "DEC-1".to_owned(),
        16 => "007".to_owned(),
        24 => "2E3".to_owned(),
        other => format!("VS-{:02}", other + 1),
    }
}

/// The name of a feature: sensor and window.
pub fn feature_name(sensor: usize, window: usize) -> String {
    format!("{} w{:02}", sensor_name(sensor), window + 1)
}

fn is_limited(sensor: usize) -> bool {
    LIMITED.iter().any(|limited| limited.0 == sensor)
}

fn night_rows(house: &Glasshouse, week: impl Fn(&Night) -> usize) -> Vec<Vec<String>> {
    let mut head: Vec<String> = [
        "night",
        "house",
        "week",
        "crew",
        "temperature",
        "humidity",
        "bay age",
    ]
    .map(str::to_owned)
    .to_vec();
    head.extend(
        house
            .features
            .iter()
            .map(|f| feature_name(f.sensor, f.window)),
    );
    let zeros = limit_positions(house);
    let mut shake = Chance::new(SHAKE_SEED);
    let mut rows = vec![head];
    for (night, still) in house.nights.iter().zip(&house.still) {
        let mut row = vec![
            night.name.clone(),
            house_name(night.bay).to_owned(),
            format!("week {}", week(night) + 1),
            format!("crew {}", ["A", "B", "C"][night.crew]),
            with_point(night.temperature, 1),
            with_point(humidity(night), 1),
            night.age.to_string(),
        ];
        for (at, feature) in house.features.iter().enumerate() {
            let level = still[at] + house.drift[week(night)][at];
            // A second recording differs from the first in the last place.
            let last_place = if night.copy_of.is_some() {
                shake.below(3) as f64 - 1.0
            } else {
                0.0
            };
            row.push(if night.failed.contains(&feature.sensor) {
                String::new()
            } else if is_limited(feature.sensor) {
                let ppm = LIMIT * exp(0.7 * (level - zeros[at])) + 0.001 * last_place;
                if ppm < LIMIT {
                    format!("<{LIMIT}")
                } else {
                    with_point(ppm, 3)
                }
            } else {
                let resting = 900 + 53 * (feature.sensor % 11) + 7 * (feature.window % 13);
                with_point(resting as f64 + 120.0 * level + last_place, 0)
            });
        }
        rows.push(row);
    }
    rows
}

fn house_name(bay: usize) -> &'static str {
    if is_sealed(bay) {
        "House 3"
    } else if bay < N_BAYS / 2 {
        "House 1"
    } else {
        "House 2"
    }
}

/// Relative humidity, per cent.
fn humidity(night: &Night) -> f64 {
    (76.0 + 7.0 * night.humidity).clamp(35.0, 99.0)
}

/// For each feature, the level that stands at the limit: the wanted share of nights lies below.
fn limit_positions(house: &Glasshouse) -> Vec<f64> {
    let shares = |sensor: usize| {
        LIMITED
            .iter()
            .find(|limited| limited.0 == sensor)
            .map(|l| l.1)
    };
    house
        .features
        .iter()
        .enumerate()
        .map(|(at, feature)| {
            let Some(share) = shares(feature.sensor) else {
                return 0.0;
            };
            let mut levels: Vec<f64> = house
                .nights
                .iter()
                .zip(&house.still)
                .map(|(night, still)| still[at] + house.drift[night.week][at])
                .collect();
            levels.sort_by(f64::total_cmp);
            levels[(share * levels.len() as f64) as usize]
        })
        .collect()
}

/// For each night, the night whose outcome it gets in the null twin: whole bays exchange theirs
/// with bays of as many nights in the same house.
fn dealt_out(nights: &[Night]) -> Vec<usize> {
    let of_bay: Vec<Vec<usize>> = (0..N_BAYS)
        .map(|bay| {
            (0..nights.len())
                .filter(|&at| nights[at].bay == bay)
                .collect()
        })
        .collect();
    let mut chance = Chance::new(NULL_SEED);
    let mut from: Vec<usize> = (0..nights.len()).collect();
    for sealed in [false, true] {
        for count in 1..=4 {
            let bays: Vec<usize> = (0..N_BAYS)
                .filter(|&bay| is_sealed(bay) == sealed && of_bay[bay].len() == count)
                .collect();
            let mut others = bays.clone();
            chance.shuffle(&mut others);
            for (bay, other) in bays.into_iter().zip(others) {
                for (&to, &source) in of_bay[bay].iter().zip(&of_bay[other]) {
                    from[to] = source;
                }
            }
        }
    }
    from
}

fn yes_or_no(statement: bool) -> String {
    if statement {
        "yes".to_owned()
    } else {
        "no".to_owned()
    }
}

fn log_rows(nights: &[Night], from: &[usize]) -> Vec<Vec<String>> {
    let mut rows = vec![
        ["night", "leaf spot", "spray_next_day"]
            .map(str::to_owned)
            .to_vec(),
    ];
    for (night, &source) in nights.iter().zip(from) {
        let source = &nights[source];
        rows.push(vec![
            night.name.clone(),
            yes_or_no(source.is_event),
            yes_or_no(source.is_sprayed),
        ]);
    }
    rows
}

fn sensor_rows() -> Vec<Vec<String>> {
    let mut rows = vec![
        ["sensor", "kind", "unit", "limit"]
            .map(str::to_owned)
            .to_vec(),
    ];
    for sensor in 0..N_SENSORS {
        let (kind, unit, limit) = if is_limited(sensor) {
            ("cell", "ppm", LIMIT.to_string())
        } else {
            ("film", "counts", String::new())
        };
        rows.push(vec![
            sensor_name(sensor),
            kind.to_owned(),
            unit.to_owned(),
            limit,
        ]);
    }
    rows
}

/// The truth sheet: one quantity per row.
fn truth_rows(house: &Glasshouse) -> Vec<Vec<String>> {
    let mut rows = vec![
        ["kind", "name", "quantity", "value"]
            .map(str::to_owned)
            .to_vec(),
    ];
    let mut add = |kind: &str, name: &str, quantity: &str, value: String| {
        rows.push(vec![
            kind.to_owned(),
            name.to_owned(),
            quantity.to_owned(),
            value,
        ]);
    };
    let effect = "log-odds per standard deviation";
    for gas in &GASES {
        add("gas", gas.name, effect, with_point(gas.effect, 1));
    }
    add(
        "covariate",
        "humidity",
        effect,
        with_point(HUMIDITY_EFFECT, 1),
    );
    add("covariate", "temperature", effect, "0".to_owned());
    add("covariate", "bay age", effect, "0".to_owned());
    for feature in &house.features {
        if let Some((gas, r)) = feature.follows {
            let name = feature_name(feature.sensor, feature.window);
            add(
                "feature",
                &name,
                &format!("correlation with {}", GASES[gas].name),
                with_point(r, 3),
            );
        }
    }
    for night in &house.nights {
        for (gas, level) in GASES.iter().zip(night.gases) {
            add("night", &night.name, gas.name, with_point(level, 3));
        }
        add(
            "night",
            &night.name,
            "log-odds without luck",
            with_point(night.log_odds, 3),
        );
        if let Some(first) = night.copy_of {
            add(
                "night",
                &night.name,
                "second recording of",
                house.nights[first].name.clone(),
            );
        }
        for &sensor in &night.failed {
            add("night", &night.name, "failed sensor", sensor_name(sensor));
        }
    }
    rows
}
