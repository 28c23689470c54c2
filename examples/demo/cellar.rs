//! The invented cellars: wheels of cheese, what is true of them, and the light that they give back.

use crate::chance::{Chance, band};

/// Wheels of this season, which a study learns from.
pub const N_WHEELS: usize = 120;
/// Wheels of the next season, which stay sealed.
pub const N_SEALED: usize = 40;
/// Scans of each wheel.
pub const N_SCANS: usize = 3;
/// Points of a spectrum.
pub const N_POINTS: usize = 700;
/// Standard deviation of the laboratory's error, g/100 g.
pub const LABORATORY_SD: f64 = 0.12;
/// Lowest and highest value that the laboratory reports, g/100 g.
pub const SALT_RANGE: (f64, f64) = (1.8, 4.2);

/// The caves, with the difference of their mean salt from the mean of all, g/100 g.
pub const CAVES: [(&str, f64); 4] = [
    ("Lower", 0.25),
    ("Old Mill", 0.05),
    ("Quarry", -0.10),
    ("Spring", -0.20),
];
/// The families that make the cheese.
pub const MAKERS: [&str; 12] = [
    "Arbel", "Brume", "Corvane", "Doulet", "Esparre", "Fontal", "Grivel", "Houssin", "Issard",
    "Jorane", "Kervel", "Lombray",
];
/// What a cave adds to the signal bands as if it were salt, g/100 g.
const CAVE_GUISE: [f64; 4] = [0.16, -0.12, 0.05, -0.09];

/// A smooth band of absorbance.
pub struct Band {
    /// What it stands for.
    pub what: &'static str,
    /// Its center, nm.
    pub center: f64,
    /// Its standard deviation, nm.
    pub width: f64,
    /// Absorbance at its center per unit of what it stands for.
    pub height: f64,
}

/// What salt does to a spectrum: absorbance per g/100 g.
pub const SALT_BANDS: [Band; 3] = [
    Band {
        what: "salt",
        center: 1150.0,
        width: 28.0,
        height: 0.010,
    },
    Band {
        what: "salt",
        center: 1380.0,
        width: 24.0,
        height: 0.012,
    },
    Band {
        what: "salt",
        center: 1450.0,
        width: 32.0,
        height: 0.014,
    },
];
/// What fat does, per standard deviation of fat; its bands overlap those of salt.
pub const FAT_BANDS: [Band; 2] = [
    Band {
        what: "fat",
        center: 1210.0,
        width: 34.0,
        height: 0.030,
    },
    Band {
        what: "fat",
        center: 1395.0,
        width: 30.0,
        height: 0.015,
    },
];
/// What water does, per standard deviation of water.
pub const WATER_BANDS: [Band; 2] = [
    Band {
        what: "water",
        center: 1450.0,
        width: 45.0,
        height: 0.030,
    },
    Band {
        what: "water",
        center: 970.0,
        width: 30.0,
        height: 0.006,
    },
];

/// How strongly a wheel, a cave and a maker leave a mark that has nothing to do with salt, and
/// how little a scan differs from the next scan of the same wheel.
const WHEEL_MARK: f64 = 0.00095;
const CAVE_MARK: f64 = 0.0005;
const MAKER_MARK: f64 = 0.0003;
const SCAN_MARK: f64 = 0.000_02;
const NOISE: f64 = 0.000_04;
const TEMPERATURE: f64 = 0.0010;
const PROBE: f64 = 0.004;
/// Narrow bands out of which the marks are made.
const N_MARKS: usize = 140;

/// A wheel of cheese and what is true of it.
pub struct Wheel {
    /// `W001` and so on.
    pub name: String,
    /// This season is 0, the next is 1.
    pub season: usize,
    /// Position in [`CAVES`].
    pub cave: usize,
    /// Position in [`MAKERS`].
    pub maker: usize,
    /// Salt in moisture as it is, g/100 g.
    pub true_salt: f64,
    /// What the laboratory found, g/100 g.
    pub found_salt: f64,
    /// What stands in the laboratory's table: that of another wheel if labels were swapped.
    pub written_salt: f64,
    /// Fat, in standard deviations.
    pub fat: f64,
    /// Water, in standard deviations.
    pub water: f64,
    /// Moisture as the laboratory found it, g/100 g.
    pub moisture: f64,
}

/// A scan: what was measured and what disturbed it.
pub struct Scan {
    /// Position of the wheel.
    pub wheel: usize,
    /// The wheel's name and a letter.
    pub name: String,
    /// 0 or 1.
    pub probe: usize,
    /// Running number of the measurement.
    pub order: usize,
    /// Factor on the whole spectrum.
    pub gain: f64,
    /// Absorbance added at every point.
    pub offset: f64,
    /// Absorbance added from the middle to the end.
    pub slope: f64,
    /// Temperature above the usual, in standard deviations.
    pub temperature: f64,
    /// Points that carry a spike, and its height.
    pub spikes: Vec<(usize, f64)>,
    /// Absorbance at every point.
    pub spectrum: Vec<f64>,
}

/// Everything there is in the setting.
pub struct Cellar {
    /// This season's wheels, then the next season's.
    pub wheels: Vec<Wheel>,
    /// Three scans per wheel, in the order of the wheels.
    pub scans: Vec<Scan>,
    /// The two wheels whose laboratory values changed places.
    pub swapped: (usize, usize),
}

/// Wavelength of a point, nm: 700 points evenly spaced from 900 to 1700.
pub fn wavelength(point: usize) -> f64 {
    900.0 + 800.0 * point as f64 / (N_POINTS - 1) as f64
}

/// Absorbance of some bands at every point, per unit of what they stand for.
pub fn curve(bands: &[Band]) -> Vec<f64> {
    (0..N_POINTS)
        .map(|point| {
            bands
                .iter()
                .map(|b| b.height * band(wavelength(point), b.center, b.width))
                .sum()
        })
        .collect()
}

/// Makes the setting from its one seed.
pub fn cellar(seed: u64) -> Cellar {
    let mut chance = Chance::new(seed);
    let mut wheels = wheels(&mut chance);
    let swapped = swap_two_labels(&mut wheels);
    let scans = scans(&wheels, &mut chance);
    Cellar {
        wheels,
        scans,
        swapped,
    }
}

fn wheels(chance: &mut Chance) -> Vec<Wheel> {
    let maker_salt: Vec<f64> = chance
        .normals(MAKERS.len())
        .iter()
        .map(|z| 0.12 * z)
        .collect();
    (0..N_WHEELS + N_SEALED)
        .map(|at| {
            let maker = chance.below(MAKERS.len());
            // A family ripens most of its wheels in one cave and some elsewhere.
            let cave = if chance.happens(0.75) {
                maker % CAVES.len()
            } else {
                chance.below(CAVES.len())
            };
            let mean = 3.0 + CAVES[cave].1 + maker_salt[maker];
            let true_salt = within(SALT_RANGE.0 + 0.05, SALT_RANGE.1 - 0.05, || {
                mean + 0.75 * chance.normal()
            });
            let found_salt = within(SALT_RANGE.0, SALT_RANGE.1, || {
                true_salt + LABORATORY_SD * chance.normal()
            });
            let fat = chance.normal();
            let water = 0.8 * chance.normal() - 0.3 * (true_salt - 3.0);
            Wheel {
                name: format!("W{:03}", at + 1),
                season: usize::from(at >= N_WHEELS),
                cave,
                maker,
                true_salt,
                found_salt,
                written_salt: found_salt,
                fat,
                water,
                moisture: 39.0 + 1.5 * water + 0.4 * chance.normal(),
            }
        })
        .collect()
}

/// Draws until the value lies in a range, so that no values pile up at its ends.
fn within(low: f64, high: f64, mut draw: impl FnMut() -> f64) -> f64 {
    loop {
        let value = draw();
        if (low..=high).contains(&value) {
            return value;
        }
    }
}

/// Lets the laboratory mix up the two wheels whose values differ by as nearly 1 g/100 g as any.
fn swap_two_labels(wheels: &mut [Wheel]) -> (usize, usize) {
    let mut best = (0, 1);
    let mut best_miss = f64::INFINITY;
    for one in 0..N_WHEELS {
        for other in one + 1..N_WHEELS {
            let difference = (wheels[one].found_salt - wheels[other].found_salt).abs();
            let miss = (difference - 1.0).abs();
            if miss < best_miss {
                best = (one, other);
                best_miss = miss;
            }
        }
    }
    wheels[best.0].written_salt = wheels[best.1].found_salt;
    wheels[best.1].written_salt = wheels[best.0].found_salt;
    best
}

/// The narrow bands out of which marks are made, each over all points.
fn mark_bands(chance: &mut Chance) -> Vec<Vec<f64>> {
    (0..N_MARKS)
        .map(|_| {
            let center = chance.between(905.0, 1695.0);
            let width = chance.between(6.0, 11.0);
            (0..N_POINTS)
                .map(|point| band(wavelength(point), center, width))
                .collect()
        })
        .collect()
}

/// Adds `scale` times a random mixture of the narrow bands.
fn add_mark(spectrum: &mut [f64], bands: &[Vec<f64>], scale: f64, chance: &mut Chance) {
    for band in bands {
        add(spectrum, scale * chance.normal(), band);
    }
}

fn add(spectrum: &mut [f64], factor: f64, curve: &[f64]) {
    for (value, part) in spectrum.iter_mut().zip(curve) {
        *value += factor * part;
    }
}

/// The spectrum that all cheese shares.
fn common_spectrum() -> Vec<f64> {
    (0..N_POINTS)
        .map(|point| {
            let nm = wavelength(point);
            0.35 + 0.0002 * (nm - 900.0)
                + 0.10 * band(nm, 970.0, 30.0)
                + 0.18 * band(nm, 1195.0, 40.0)
                + 0.55 * band(nm, 1450.0, 45.0)
                + 0.25 * band(nm, 1600.0, 140.0)
        })
        .collect()
}

fn scans(wheels: &[Wheel], chance: &mut Chance) -> Vec<Scan> {
    let marks = mark_bands(chance);
    let mut of_cave = vec![vec![0.0; N_POINTS]; CAVES.len()];
    let mut of_maker = vec![vec![0.0; N_POINTS]; MAKERS.len()];
    of_cave
        .iter_mut()
        .for_each(|s| add_mark(s, &marks, CAVE_MARK, chance));
    of_maker
        .iter_mut()
        .for_each(|s| add_mark(s, &marks, MAKER_MARK, chance));
    let common = common_spectrum();
    let (salt, fat, water) = (curve(&SALT_BANDS), curve(&FAT_BANDS), curve(&WATER_BANDS));
    let next_season: Vec<f64> = (0..N_POINTS)
        .map(|point| 0.004 * band(wavelength(point), 1420.0, 60.0))
        .collect();
    let mut scans = Vec::new();
    for (at, wheel) in wheels.iter().enumerate() {
        let mut spectrum = common.clone();
        add(
            &mut spectrum,
            wheel.true_salt - 3.0 + CAVE_GUISE[wheel.cave],
            &salt,
        );
        add(&mut spectrum, wheel.fat, &fat);
        add(&mut spectrum, wheel.water, &water);
        add(&mut spectrum, 1.0, &of_cave[wheel.cave]);
        add(&mut spectrum, 1.0, &of_maker[wheel.maker]);
        add_mark(&mut spectrum, &marks, WHEEL_MARK, chance);
        if wheel.season == 1 {
            add(&mut spectrum, 0.25, &salt);
            add(&mut spectrum, 1.0, &next_season);
        }
        for letter in ["a", "b", "c"] {
            scans.push(scan(
                at,
                format!("{}-{letter}", wheel.name),
                &spectrum,
                &marks,
                chance,
            ));
        }
    }
    number_in_random_order(&mut scans, chance);
    spike_five_scans(&mut scans, chance);
    scans
}

fn scan(
    wheel: usize,
    name: String,
    of_wheel: &[f64],
    marks: &[Vec<f64>],
    chance: &mut Chance,
) -> Scan {
    let probe = chance.below(2);
    let gain = 1.0 + 0.06 * chance.normal();
    let offset = 0.03 * chance.normal();
    let slope = 0.02 * chance.normal();
    let temperature = chance.normal();
    let mut spectrum = of_wheel.to_vec();
    add_mark(&mut spectrum, marks, SCAN_MARK, chance);
    for (point, value) in spectrum.iter_mut().enumerate() {
        let nm = wavelength(point);
        // Warmth moves the water band: what it adds has the shape of the band's slope.
        *value += temperature * TEMPERATURE * (nm - 1450.0) / 32.0 * band(nm, 1450.0, 32.0);
        if probe == 1 {
            *value += PROBE * (band(nm, 1290.0, 50.0) - band(nm, 1560.0, 70.0));
        }
        *value = gain * *value + offset + slope * (nm - 1300.0) / 400.0 + NOISE * chance.normal();
    }
    Scan {
        wheel,
        name,
        probe,
        order: 0,
        gain,
        offset,
        slope,
        temperature,
        spikes: Vec::new(),
        spectrum,
    }
}

/// All of this season's scans were measured before any of the next.
fn number_in_random_order(scans: &mut [Scan], chance: &mut Chance) {
    let (this_season, next_season) = scans.split_at_mut(N_WHEELS * N_SCANS);
    let mut first = 1;
    for season in [this_season, next_season] {
        let mut numbers: Vec<usize> = (first..first + season.len()).collect();
        chance.shuffle(&mut numbers);
        for (scan, number) in season.iter_mut().zip(numbers) {
            scan.order = number;
        }
        first += season.len();
    }
}

/// Five scans of five wheels of this season get two spikes each.
fn spike_five_scans(scans: &mut [Scan], chance: &mut Chance) {
    let mut wheels: Vec<usize> = (0..N_WHEELS).collect();
    chance.shuffle(&mut wheels);
    for wheel in wheels.into_iter().take(5) {
        let scan = &mut scans[wheel * N_SCANS + chance.below(N_SCANS)];
        for _ in 0..2 {
            let point = chance.below(N_POINTS);
            let height = chance.between(0.008, 0.020);
            scan.spectrum[point] += height;
            scan.spikes.push((point, height));
        }
    }
}
