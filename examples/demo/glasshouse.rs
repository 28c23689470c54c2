//! The invented glasshouse: bays of plants, the nights on which they were sniffed, what came of it.

use crate::chance::Chance;

/// Bays, of which the last eight stay sealed.
pub const N_BAYS: usize = 84;
/// Bays of the third house, which stay sealed.
pub const N_SEALED: usize = 8;
/// Nights of all bays together.
pub const N_NIGHTS: usize = 190;
/// Nights that are followed by leaf-spot: 24 %.
pub const N_EVENTS: usize = 46;
/// Sensors, and features of each.
pub const N_SENSORS: usize = 36;
/// Windows of a night, each giving one feature per sensor.
pub const N_WINDOWS: usize = 40;
/// Weeks between two calibrations.
pub const N_WEEKS: usize = 6;
/// The limit below which six of the sensors cannot read, ppm.
pub const LIMIT: f64 = 0.05;
/// How far week and outcome go together (Cramér's V) as designed, and in the broken design.
pub const ASSOCIATION: f64 = 0.35;
/// See [`ASSOCIATION`].
pub const BROKEN_ASSOCIATION: f64 = 0.90;

/// A gas that some features follow closely.
pub struct Gas {
    /// What it is called in the truth sheet.
    pub name: &'static str,
    /// Change of the log-odds of leaf-spot per standard deviation.
    pub effect: f64,
    /// Sensors that read it, each with the number of its windows that do.
    pub readers: &'static [(usize, usize)],
}

/// The four gases; two of them foretell leaf-spot.
pub const GASES: [Gas; 4] = [
    Gas {
        name: "leaf aldehyde",
        effect: 2.3,
        readers: &[(2, 25), (7, 20)],
    },
    Gas {
        name: "musty alcohol",
        effect: 1.9,
        readers: &[(11, 30)],
    },
    Gas {
        name: "fertiliser amine",
        effect: 0.0,
        readers: &[(15, 40), (16, 20)],
    },
    Gas {
        name: "heater exhaust",
        effect: 0.0,
        readers: &[(21, 25)],
    },
];
/// Change of the log-odds per standard deviation of humidity.
pub const HUMIDITY_EFFECT: f64 = 1.0;
/// Standard deviation of what a bay brings along that nothing measures, in log-odds.
pub const BAY_SD: f64 = 1.8;
/// The window that reads a gas best.
const BEST_WINDOW: usize = 5;
/// Sensors with a limit, and the share of their readings that lies below it.
pub const LIMITED: [(usize, f64); 6] = [
    (3, 0.22),
    (9, 0.30),
    (18, 0.40),
    (24, 0.50),
    (29, 0.60),
    (33, 0.68),
];
/// Bays with a night that was recorded twice.
pub const RECORDED_TWICE: [usize; 3] = [11, 36, 58];
/// How wet the weeks are, in standard deviations of humidity.
pub const WETNESS: [f64; N_WEEKS] = [-0.6, 1.0, -0.2, 1.2, -0.8, -0.4];
/// Weeks that count as wet: sensors fail more often in them.
const WET: f64 = 0.5;

/// One night in one bay.
pub struct Night {
    /// Bay and number of the night in one: `B07-n1`.
    pub name: String,
    /// Position of the bay.
    pub bay: usize,
    /// Calibration week, from 0.
    pub week: usize,
    /// The week in the broken design.
    pub broken_week: usize,
    /// Crew, from 0.
    pub crew: usize,
    /// Degrees Celsius.
    pub temperature: f64,
    /// In standard deviations.
    pub humidity: f64,
    /// Weeks since planting.
    pub age: usize,
    /// Each gas in standard deviations.
    pub gases: [f64; 4],
    /// Log-odds of leaf-spot before the count of events was fixed.
    pub log_odds: f64,
    /// The random part that decided.
    luck: f64,
    /// Whether leaf-spot appeared within seven days.
    pub is_event: bool,
    /// Whether the bay was sprayed the day after: decided when leaf-spot was seen.
    pub is_sprayed: bool,
    /// Sensors that had failed.
    pub failed: Vec<usize>,
    /// The night of which this one is a second recording.
    pub copy_of: Option<usize>,
}

/// What a feature follows.
pub struct Feature {
    /// Position of the sensor.
    pub sensor: usize,
    /// Window, from 0.
    pub window: usize,
    /// Position of the gas, if it follows one, and how closely: its correlation with the gas.
    pub follows: Option<(usize, f64)>,
}

/// Everything there is in the setting.
pub struct Glasshouse {
    /// All nights, by bay.
    pub nights: Vec<Night>,
    /// All features, by sensor.
    pub features: Vec<Feature>,
    /// Readings without drift: per night, per feature, in standard deviations.
    pub still: Vec<Vec<f64>>,
    /// Drift per week, per feature, in standard deviations.
    pub drift: Vec<Vec<f64>>,
}

/// Makes the setting from its one seed.
pub fn glasshouse(seed: u64) -> Glasshouse {
    let mut chance = Chance::new(seed);
    let mut nights = nights(&mut chance);
    standardize_gases(&mut nights);
    settle_outcomes(&mut nights, &mut chance);
    break_the_design(&mut nights, &mut chance);
    fail_sensors(&mut nights, &mut chance);
    let features = features(&mut chance);
    let still = still_readings(&nights, &features, &mut chance);
    let drift = (0..N_WEEKS)
        .map(|_| drift_of_a_week(&features, &mut chance))
        .collect();
    Glasshouse {
        nights,
        features,
        still,
        drift,
    }
}

/// Whether a bay stands in the third house.
pub fn is_sealed(bay: usize) -> bool {
    bay >= N_BAYS - N_SEALED
}

/// One to four nights for each bay, 190 in all.
fn nights_per_bay(chance: &mut Chance) -> Vec<usize> {
    let mut counts: Vec<usize> = (0..N_BAYS).map(|_| 1 + chance.below(4)).collect();
    for bay in RECORDED_TWICE {
        counts[bay] = counts[bay].max(2);
    }
    loop {
        let sum: usize = counts.iter().sum();
        let bay = chance.below(N_BAYS);
        let fewest = if RECORDED_TWICE.contains(&bay) { 2 } else { 1 };
        if sum == N_NIGHTS {
            return counts;
        } else if sum < N_NIGHTS && counts[bay] < 4 {
            counts[bay] += 1;
        } else if sum > N_NIGHTS && counts[bay] > fewest {
            counts[bay] -= 1;
        }
    }
}

fn nights(chance: &mut Chance) -> Vec<Night> {
    let counts = nights_per_bay(chance);
    // A bay is watched in one calibration week; fourteen bays a week.
    let mut week_of_bay: Vec<usize> = (0..N_BAYS).map(|bay| bay % N_WEEKS).collect();
    chance.shuffle(&mut week_of_bay);
    let mut nights: Vec<Night> = Vec::new();
    for (bay, &count) in counts.iter().enumerate() {
        let week = week_of_bay[bay];
        let of_bay = [
            chance.normal(),
            chance.normal(),
            chance.normal(),
            chance.normal(),
        ];
        let age = 3 + chance.below(16);
        let bay_luck = BAY_SD * chance.normal();
        let crew_of_bay = chance.below(3);
        for number in 1..=count {
            let gases = of_bay.map(|part| 0.8 * part + 0.6 * chance.normal());
            let humidity = WETNESS[week] + 0.8 * chance.normal();
            nights.push(Night {
                name: format!("B{:02}-n{number}", bay + 1),
                bay,
                week,
                broken_week: week,
                crew: if chance.happens(0.7) {
                    crew_of_bay
                } else {
                    chance.below(3)
                },
                temperature: 21.5 - 0.6 * humidity + 1.5 * chance.normal(),
                humidity,
                age,
                gases,
                log_odds: 0.0,
                luck: bay_luck + logistic(chance),
                is_event: false,
                is_sprayed: false,
                failed: Vec::new(),
                copy_of: None,
            });
        }
        if RECORDED_TWICE.contains(&bay) {
            record_twice(&mut nights);
        }
    }
    nights
}

/// A number from the logistic law, near enough: it is close to the normal law 1.8 times as wide.
fn logistic(chance: &mut Chance) -> f64 {
    1.8 * chance.normal()
}

/// Makes the last night a second recording of the one before it.
fn record_twice(nights: &mut [Night]) {
    let last = nights.len() - 1;
    let (before, after) = nights.split_at_mut(last);
    let (first, second) = (&before[last - 1], &mut after[0]);
    second.crew = first.crew;
    second.temperature = first.temperature;
    second.humidity = first.humidity;
    second.gases = first.gases;
    second.luck = first.luck;
    second.copy_of = Some(last - 1);
}

/// Gives every gas mean 0 and standard deviation 1 over all nights, and works out the log-odds.
fn standardize_gases(nights: &mut [Night]) {
    let n = nights.len() as f64;
    for gas in 0..GASES.len() {
        let mean = nights.iter().map(|night| night.gases[gas]).sum::<f64>() / n;
        let squares: f64 = nights
            .iter()
            .map(|night| (night.gases[gas] - mean).powi(2))
            .sum();
        let sd = (squares / n).sqrt();
        for night in nights.iter_mut() {
            night.gases[gas] = (night.gases[gas] - mean) / sd;
        }
    }
    for night in nights {
        let of_gases: f64 = GASES
            .iter()
            .zip(&night.gases)
            .map(|(gas, level)| gas.effect * level)
            .sum();
        night.log_odds = of_gases + HUMIDITY_EFFECT * night.humidity;
    }
}

/// Decides which nights are followed by leaf-spot. Weeks differ by as much as brings the
/// association of week and outcome nearest to what is wanted.
fn settle_outcomes(nights: &mut [Night], chance: &mut Chance) {
    let of_week: Vec<f64> = chance.normals(N_WEEKS);
    let mut best = (f64::INFINITY, 0.0);
    for step in 0..=60 {
        let scale = 0.05 * f64::from(step);
        decide(nights, &of_week, scale);
        let miss = (association(nights, |night| night.week) - ASSOCIATION).abs();
        if miss < best.0 {
            best = (miss, scale);
        }
    }
    decide(nights, &of_week, best.1);
    for night in nights.iter_mut() {
        night.log_odds += best.1 * of_week[night.week];
    }
    for at in 0..nights.len() {
        nights[at].is_sprayed = match nights[at].copy_of {
            Some(first) => nights[first].is_sprayed,
            None => chance.happens(if nights[at].is_event { 0.94 } else { 0.03 }),
        };
    }
}

/// The 46 nights with the greatest sum of log-odds and luck are the events.
fn decide(nights: &mut [Night], of_week: &[f64], scale: f64) {
    let sums: Vec<f64> = nights
        .iter()
        .map(|n| n.log_odds + scale * of_week[n.week] + n.luck)
        .collect();
    let mut sorted = sums.clone();
    sorted.sort_by(|one, other| other.total_cmp(one));
    let threshold = sorted[N_EVENTS];
    for (night, sum) in nights.iter_mut().zip(sums) {
        night.is_event = sum > threshold;
    }
}

/// Cramér's V of week and outcome over the nights that are not sealed (Cramér 1946, section 21.9).
pub fn association(nights: &[Night], week: impl Fn(&Night) -> usize) -> f64 {
    let mut table = [[0.0; 2]; N_WEEKS];
    for night in nights.iter().filter(|night| !is_sealed(night.bay)) {
        table[week(night)][usize::from(night.is_event)] += 1.0;
    }
    let of_outcome = [0, 1].map(|outcome| table.iter().map(|row| row[outcome]).sum::<f64>());
    let n = of_outcome[0] + of_outcome[1];
    let mut chi_square = 0.0;
    for row in &table {
        for (count, of_column) in row.iter().zip(of_outcome) {
            let expected = (row[0] + row[1]) * of_column / n;
            if expected > 0.0 {
                chi_square += (count - expected) * (count - expected) / expected;
            }
        }
    }
    (chi_square / n).sqrt()
}

/// In the broken design the nights before leaf-spot were nearly all taken in the last two weeks.
fn break_the_design(nights: &mut [Night], chance: &mut Chance) {
    for night in nights.iter_mut() {
        night.broken_week = if night.is_event {
            4 + chance.below(2)
        } else {
            chance.below(4)
        };
    }
    let mut order: Vec<usize> = (0..nights.len()).collect();
    chance.shuffle(&mut order);
    for at in order {
        if association(nights, |night| night.broken_week) <= BROKEN_ASSOCIATION {
            break;
        }
        let night = &mut nights[at];
        night.broken_week = if night.is_event {
            chance.below(4)
        } else {
            4 + chance.below(2)
        };
    }
    for at in 0..nights.len() {
        if let Some(first) = nights[at].copy_of {
            nights[at].broken_week = nights[first].broken_week;
        }
    }
}

/// Sensors fail for a whole night, three times as often in wet weeks.
fn fail_sensors(nights: &mut [Night], chance: &mut Chance) {
    for at in 0..nights.len() {
        let share = if WETNESS[nights[at].week] > WET {
            0.072
        } else {
            0.024
        };
        let failed = (0..N_SENSORS).filter(|_| chance.happens(share)).collect();
        nights[at].failed = match nights[at].copy_of {
            Some(first) => nights[first].failed.clone(),
            None => failed,
        };
    }
}

fn features(chance: &mut Chance) -> Vec<Feature> {
    let mut features = Vec::new();
    for sensor in 0..N_SENSORS {
        for window in 0..N_WINDOWS {
            let follows = GASES.iter().enumerate().find_map(|(gas, reads)| {
                let count = reads.readers.iter().find(|reader| reader.0 == sensor)?.1;
                (window < count).then_some(gas)
            });
            // One window reads its gas almost alone; the others of the family could stand in for it.
            let closeness = chance.between(0.94, 0.975);
            let closeness = if window == BEST_WINDOW {
                0.998
            } else {
                closeness
            };
            features.push(Feature {
                sensor,
                window,
                follows: follows.map(|gas| (gas, closeness)),
            });
        }
    }
    features
}

fn still_readings(nights: &[Night], features: &[Feature], chance: &mut Chance) -> Vec<Vec<f64>> {
    let of_bays: Vec<Vec<f64>> = (0..N_BAYS)
        .map(|_| chance.normals(features.len()))
        .collect();
    let mut readings: Vec<Vec<f64>> = Vec::new();
    for night in nights {
        let of_sensors = chance.normals(N_SENSORS);
        let mut row: Vec<f64> = Vec::new();
        for (at, feature) in features.iter().enumerate() {
            let own = chance.normal();
            row.push(match feature.follows {
                Some((gas, r)) => r * night.gases[gas] + (1.0 - r * r).sqrt() * own,
                // What a bay smells of anyway, how the sensor fared that night, and noise.
                None => {
                    0.80 * of_bays[night.bay][at] + 0.40 * of_sensors[feature.sensor] + 0.45 * own
                }
            });
        }
        readings.push(match night.copy_of {
            Some(first) => readings[first].clone(),
            None => row,
        });
    }
    readings
}

/// From one calibration to the next a sensor drifts as a whole, and each window a little by itself.
fn drift_of_a_week(features: &[Feature], chance: &mut Chance) -> Vec<f64> {
    let of_sensors = chance.normals(N_SENSORS);
    features
        .iter()
        .map(|feature| {
            let (whole, own) = if feature.follows.is_some() {
                (0.08, 0.05)
            } else {
                (0.30, 0.40)
            };
            whole * of_sensors[feature.sensor] + own * chance.normal()
        })
        .collect()
}
