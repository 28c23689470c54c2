//! From numbers to places along an axis, and the numbers that are written there.

use crate::base::number::{self, Precision};
use crate::figure::{Axis, Scale, Zero};

/// Larger numbers have no place: their differences would overflow.
const LARGEST: f64 = 1e300;

/// The smallest number that has a place on an axis of ratios.
const SMALLEST_RATIO: f64 = 1e-300;

/// The part of an axis of ratios that is kept for zero, where zero has a shelf.
const SHELF: f64 = 0.11;

/// Where on the shelf zero lies.
const ZERO_ON_SHELF: f64 = 0.035;

/// The narrowest axis, as a share of its largest number: more digits than this cannot be written.
const NARROWEST: f64 = 1e-9;

/// How the numbers of one axis become places from 0 to 1.
#[derive(Clone, Debug, PartialEq)]
pub struct Mapping {
    kind: Kind,
    /// The ends, in the units in which the axis is even (logarithms for ratios).
    low: f64,
    high: f64,
    /// The numbers to write, if they are not chosen here.
    given: Vec<f64>,
}

#[derive(Clone, Debug, PartialEq)]
enum Kind {
    Even,
    Share,
    Ratio,
    RatioAndZero,
    Names(Vec<String>),
}

/// A number written at a place of an axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Tick {
    /// Its place, from 0 to 1.
    pub share: f64,
    /// Its text.
    pub text: String,
}

/// How the ends of an axis follow from its numbers.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ends {
    /// Out to the next written number, so that the grid encloses everything.
    Rounded,
    /// A little air at both ends.
    Padded,
    /// Exactly at the outermost numbers.
    Exact,
}

impl Mapping {
    /// The mapping of an axis on which the given numbers are to be seen.
    #[must_use]
    pub fn new(axis: &Axis, values: impl Iterator<Item = f64>, ends: Ends) -> Self {
        let kind = match &axis.scale {
            Scale::Linear => Kind::Even,
            Scale::Percent => Kind::Share,
            Scale::Log10 => Kind::Ratio,
            Scale::Log10AndZero => Kind::RatioAndZero,
            Scale::Names(names) => Kind::Names(names.clone()),
        };
        if let Kind::Names(names) = &kind {
            let high = names.len().max(1) as f64 - 0.5;
            return Self {
                kind,
                low: -0.5,
                high,
                given: Vec::new(),
            };
        }
        let mut mapping = Self {
            kind,
            low: f64::INFINITY,
            high: f64::NEG_INFINITY,
            given: axis.ticks.clone(),
        };
        let fixed = axis.range.and_then(|(low, high)| {
            let ends = (mapping.even(low)?, mapping.even(high)?);
            (ends.0 < ends.1).then_some(ends)
        });
        if let Some((low, high)) = fixed {
            (mapping.low, mapping.high) = (low, high);
            return mapping;
        }
        for value in values {
            mapping.reach(value);
        }
        if axis.zero == Zero::Shown {
            mapping.reach(0.0);
        }
        mapping.widen(ends, axis.zero);
        mapping
    }

    fn reach(&mut self, value: f64) {
        if let Some(even) = self.even(value) {
            self.low = self.low.min(even);
            self.high = self.high.max(even);
        }
    }

    /// Gives an axis without numbers, or with a single one, a length; then air at the ends.
    fn widen(&mut self, ends: Ends, zero: Zero) {
        if self.low > self.high {
            (self.low, self.high) = (0.0, 1.0);
        }
        let size = self.low.abs().max(self.high.abs());
        let narrowest = match self.kind {
            Kind::Even | Kind::Share => size * NARROWEST,
            Kind::Ratio | Kind::RatioAndZero | Kind::Names(_) => 1e-6,
        };
        if self.high - self.low <= narrowest {
            let air = match self.kind {
                Kind::Even | Kind::Share if size == 0.0 => 1.0,
                Kind::Even | Kind::Share => size * 0.1,
                Kind::Ratio | Kind::RatioAndZero | Kind::Names(_) => 0.5,
            };
            if zero == Zero::Free || size == 0.0 {
                self.low -= air;
            }
            self.high += air;
        }
        let span = self.high - self.low;
        match (ends, &self.kind) {
            (Ends::Exact, _) => {}
            (Ends::Rounded, Kind::Even | Kind::Share) => {
                let step = nice_step(span / 6.0);
                // A hair inwards first, so that an end that is a multiple stays where it is.
                self.low = ((self.low + 1e-9 * span) / step).floor() * step;
                self.high = ((self.high - 1e-9 * span) / step).ceil() * step;
            }
            (Ends::Rounded | Ends::Padded, _) => {
                let pinned = zero == Zero::Shown && self.kind.is_even();
                let (at_zero_low, at_zero_high) = (self.low == 0.0, self.high == 0.0);
                if !(pinned && at_zero_low) {
                    self.low -= 0.04 * span;
                }
                if !(pinned && at_zero_high) {
                    self.high += 0.04 * span;
                }
            }
        }
    }

    /// A number in the units in which the axis is even; `None` where it has no place.
    fn even(&self, value: f64) -> Option<f64> {
        if !value.is_finite() || value.abs() > LARGEST {
            return None;
        }
        match self.kind {
            // What is smaller than every ratio would lose its digits on the way; it is zero.
            Kind::Even | Kind::Share if value.abs() < SMALLEST_RATIO => Some(0.0),
            Kind::Even | Kind::Share | Kind::Names(_) => Some(value),
            Kind::Ratio | Kind::RatioAndZero => (value >= SMALLEST_RATIO).then(|| value.log10()),
        }
    }

    /// The place of a number, from 0 to 1 for those on the axis and beyond for others; `None`
    /// where it has none.
    #[must_use]
    pub fn share(&self, value: f64) -> Option<f64> {
        match (self.even(value), &self.kind) {
            (Some(even), Kind::RatioAndZero) => Some(SHELF + (1.0 - SHELF) * self.even_share(even)),
            (Some(even), Kind::Even | Kind::Share | Kind::Ratio | Kind::Names(_)) => {
                Some(self.even_share(even))
            }
            (None, Kind::RatioAndZero) if value.is_finite() && value < SMALLEST_RATIO => {
                Some(ZERO_ON_SHELF)
            }
            (None, _) => None,
        }
    }

    fn even_share(&self, even: f64) -> f64 {
        (even - self.low) / (self.high - self.low)
    }

    /// The place on which lengths stand: that of zero where zero is on the axis.
    #[must_use]
    pub fn base(&self) -> f64 {
        match self.kind {
            Kind::Even | Kind::Share => self.even_share(0.0).clamp(0.0, 1.0),
            Kind::Ratio | Kind::RatioAndZero | Kind::Names(_) => 0.0,
        }
    }

    /// The numbers at the two ends.
    #[must_use]
    pub fn ends(&self) -> (f64, f64) {
        match self.kind {
            Kind::Even | Kind::Share | Kind::Names(_) => (self.low, self.high),
            Kind::Ratio | Kind::RatioAndZero => (10f64.powf(self.low), 10f64.powf(self.high)),
        }
    }

    /// What the written numbers are to be multiplied by, such as “× 10⁹”; empty for 1.
    #[must_use]
    pub fn factor(&self) -> String {
        match self.exponent() {
            0 => String::new(),
            exponent => format!("× {}", number::power_of_ten(exponent)),
        }
    }

    /// The power of ten that is taken out of the written numbers, in steps of three.
    fn exponent(&self) -> i32 {
        if self.kind != Kind::Even || !self.given.is_empty() {
            return 0;
        }
        let size = self.low.abs().max(self.high.abs());
        if (1e-4..1e6).contains(&size) || size == 0.0 {
            0
        } else {
            (size.log10() / 3.0).floor() as i32 * 3
        }
    }

    /// The numbers to write, from the low to the high end, at most about `most` of them.
    #[must_use]
    pub fn ticks(&self, most: usize) -> Vec<Tick> {
        let most = most.max(2);
        if !self.given.is_empty() {
            return self.given_ticks();
        }
        match &self.kind {
            Kind::Even => self.even_ticks(most),
            Kind::Share => self.share_ticks(most),
            Kind::Ratio => self.ratio_ticks(most),
            Kind::RatioAndZero => {
                let mut ticks = vec![Tick {
                    share: ZERO_ON_SHELF,
                    text: number::text(0.0, Precision::Whole),
                }];
                ticks.extend(self.ratio_ticks(most).into_iter().map(|tick| Tick {
                    share: SHELF + (1.0 - SHELF) * tick.share,
                    ..tick
                }));
                ticks
            }
            Kind::Names(names) => names
                .iter()
                .enumerate()
                .map(|(at, name)| Tick {
                    share: self.even_share(at as f64),
                    text: name.clone(),
                })
                .collect(),
        }
    }

    /// The given numbers that lie on the axis, with as many decimals as they need.
    fn given_ticks(&self) -> Vec<Tick> {
        let needs = |value: &f64| {
            (0..6_u8)
                .find(|places| {
                    let scaled = value * 10f64.powi(i32::from(*places));
                    (scaled - scaled.round()).abs() < 1e-6
                })
                .unwrap_or(6)
        };
        let places = self.given.iter().map(needs).max().unwrap_or(0);
        self.given
            .iter()
            .filter_map(|value| {
                let share = self.share(*value)?;
                (-1e-9..=1.0 + 1e-9).contains(&share).then(|| Tick {
                    share: share.clamp(0.0, 1.0),
                    text: number::text(*value, Precision::Decimals(places)),
                })
            })
            .collect()
    }

    fn even_ticks(&self, most: usize) -> Vec<Tick> {
        let unit = 10f64.powi(self.exponent());
        let (low, high) = (self.low / unit, self.high / unit);
        let step = nice_step((high - low) / most as f64);
        multiples(low, high, step)
            .map(|value| Tick {
                share: (value - low) / (high - low),
                text: number::text(value, Precision::Decimals(decimals(step))),
            })
            .collect()
    }

    fn share_ticks(&self, most: usize) -> Vec<Tick> {
        let step = nice_step((self.high - self.low) / most as f64);
        multiples(self.low, self.high, step)
            .map(|value| Tick {
                share: self.even_share(value),
                text: number::text(value, Precision::Percent(decimals(step * 100.0))),
            })
            .collect()
    }

    fn ratio_ticks(&self, most: usize) -> Vec<Tick> {
        let air = 1e-9;
        let (first, last) = ((self.low - air).ceil(), (self.high + air).floor());
        let decades = (last - first + 1.0).max(0.0) as usize;
        // One way of writing for the whole axis: plain numbers if none of them is long.
        let is_plain = self.low > -4.5 && self.high < 5.5;
        let write = if is_plain { plain_ratio } else { power_ratio };
        let mut ticks = Vec::new();
        let mut push = |digit: f64, exponent: i32| {
            let even = digit.log10() + f64::from(exponent);
            if even >= self.low - air && even <= self.high + air {
                ticks.push(Tick {
                    share: self.even_share(even).clamp(0.0, 1.0),
                    text: write(digit, exponent),
                });
            }
        };
        let span = self.high - self.low;
        if decades >= 3 || span > 2.0 {
            let every = decades.div_ceil(most).max(1) as i32;
            for exponent in first as i32..=last as i32 {
                if exponent.rem_euclid(every) == 0 {
                    push(1.0, exponent);
                }
            }
            return ticks;
        }
        if span > 0.7 {
            for exponent in self.low.floor() as i32..=self.high.ceil() as i32 {
                for digit in [1.0, 2.0, 5.0] {
                    push(digit, exponent);
                }
            }
            return ticks;
        }
        // Less than a factor of five: even numbers read better than ratios.
        let (low, high) = self.ends();
        let step = nice_step((high - low) / most as f64);
        let digits = ((high / step).log10().ceil() as u8 + 1).clamp(1, 9);
        multiples(low, high, step)
            .filter_map(|value| {
                Some(Tick {
                    share: self.even_share(self.even(value)?).clamp(0.0, 1.0),
                    text: if is_plain {
                        number::text(value, Precision::Decimals(decimals(step)))
                    } else {
                        number::text(value, Precision::Significant(digits))
                    },
                })
            })
            .collect()
    }
}

impl Kind {
    fn is_even(&self) -> bool {
        match self {
            Self::Even | Self::Share => true,
            Self::Ratio | Self::RatioAndZero | Self::Names(_) => false,
        }
    }
}

fn plain_ratio(digit: f64, exponent: i32) -> String {
    let places = (-exponent).clamp(0, 12) as u8;
    number::text(digit * 10f64.powi(exponent), Precision::Decimals(places))
}

fn power_ratio(digit: f64, exponent: i32) -> String {
    let power = number::power_of_ten(exponent);
    if digit == 1.0 {
        power
    } else {
        format!("{} × {power}", number::text(digit, Precision::Whole))
    }
}

/// The smallest of 1, 2 and 5 times a power of ten that is not below a length.
fn nice_step(length: f64) -> f64 {
    let power = 10f64.powf(length.max(f64::MIN_POSITIVE).log10().floor());
    [1.0, 2.0, 5.0]
        .into_iter()
        .map(|digit| digit * power)
        .find(|step| *step >= length * (1.0 - 1e-9))
        .unwrap_or(10.0 * power)
}

/// The multiples of a step between two numbers, both included.
fn multiples(low: f64, high: f64, step: f64) -> impl Iterator<Item = f64> {
    let first = (low / step - 1e-6).ceil();
    let count = (high / step + 1e-6).floor() - first;
    // A guard against steps that no longer change the number; a hundred is more than is written.
    let count = if count.is_finite() {
        count.clamp(-1.0, 100.0)
    } else {
        -1.0
    };
    (0..=count as i64).map(move |at| (first + at as f64) * step)
}

/// How many decimals the multiples of a step need.
fn decimals(step: f64) -> u8 {
    (-(step.log10() + 1e-9).floor()).clamp(0.0, 12.0) as u8
}

#[cfg(test)]
mod tests {
    use super::*;

    fn texts(map: &Mapping, most: usize) -> Vec<String> {
        map.ticks(most).into_iter().map(|tick| tick.text).collect()
    }

    fn mapping(scale: Scale, values: &[f64], ends: Ends) -> Mapping {
        let axis = Axis::scaled("", "", scale);
        Mapping::new(&axis, values.iter().copied(), ends)
    }

    #[test]
    fn even_axes_are_written_in_ones_twos_and_fives() {
        let map = mapping(Scale::Linear, &[0.21, 0.93], Ends::Rounded);
        assert_eq!(texts(&map, 6), ["0.2", "0.4", "0.6", "0.8", "1.0"]);
        let map = mapping(Scale::Linear, &[-7.0, 12.0], Ends::Rounded);
        assert_eq!(texts(&map, 5), ["−10", "−5", "0", "5", "10", "15"]);
        let map = mapping(Scale::Percent, &[0.0, 1.0], Ends::Exact);
        assert_eq!(texts(&map, 2), ["0 %", "50 %", "100 %"]);
    }

    #[test]
    fn axes_of_ratios_are_written_at_decades_or_in_ones_twos_and_fives() {
        let map = mapping(Scale::Log10, &[0.001, 1.0], Ends::Exact);
        assert_eq!(texts(&map, 5), ["0.001", "0.01", "0.1", "1"]);
        let map = mapping(Scale::Log10, &[0.5, 30.0], Ends::Exact);
        assert_eq!(texts(&map, 5), ["0.5", "1", "2", "5", "10", "20"]);
        let map = mapping(Scale::Log10, &[1e-9, 1e-3], Ends::Exact);
        assert_eq!(texts(&map, 4), ["10⁻⁸", "10⁻⁶", "10⁻⁴"]);
    }

    #[test]
    fn zero_has_a_shelf_below_the_smallest_ratio() {
        let map = mapping(Scale::Log10AndZero, &[0.0, 0.1, 10.0], Ends::Padded);
        assert_eq!(texts(&map, 5)[0], "0");
        let places = [0.0, -1e-17, 0.1, 10.0].map(|value| map.share(value).unwrap());
        assert!(places[0] == places[1] && places[1] < SHELF && SHELF < places[2]);
        assert!(places[2] < places[3] && places[3] < 1.0);
    }

    #[test]
    fn large_and_small_numbers_are_written_with_a_common_factor() {
        let map = mapping(Scale::Linear, &[1.2e9, 3.4e9], Ends::Rounded);
        assert_eq!(map.factor(), "× 10⁹");
        assert_eq!(texts(&map, 5), ["1.0", "1.5", "2.0", "2.5", "3.0", "3.5"]);
        let map = mapping(Scale::Linear, &[2e-7, 9e-7], Ends::Rounded);
        assert_eq!(map.factor(), "× 10⁻⁶");
        assert_eq!(
            mapping(Scale::Linear, &[0.0, 40.0], Ends::Exact).factor(),
            ""
        );
    }

    #[test]
    fn numbers_without_a_place_have_none() {
        let even = mapping(Scale::Linear, &[0.0, 1.0], Ends::Exact);
        let ratio = mapping(Scale::Log10, &[0.1, 1.0], Ends::Exact);
        for odd in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, f64::MAX] {
            assert_eq!(even.share(odd), None);
        }
        assert_eq!(ratio.share(0.0), None);
        assert_eq!(ratio.share(-3.0), None);
        assert_eq!(even.share(0.25), Some(0.25));
    }

    #[test]
    fn written_numbers_lie_on_the_axis_in_order_whatever_the_numbers() {
        let scales = [
            Scale::Linear,
            Scale::Percent,
            Scale::Log10,
            Scale::Log10AndZero,
        ];
        let sizes = [1e-305, 1e-40, 3e-5, 0.7, 1.0, 812.0, 4e7, 1e200, 9e299];
        for scale in scales {
            for low in sizes {
                for high in sizes {
                    for ends in [Ends::Rounded, Ends::Padded, Ends::Exact] {
                        for values in [[low, high], [-low, high], [low, low]] {
                            let map = mapping(scale.clone(), &values, ends);
                            let ticks = map.ticks(5);
                            let inside = |tick: &Tick| (-1e-6..=1.0 + 1e-6).contains(&tick.share);
                            assert!(ticks.iter().all(inside), "{scale:?} {values:?} {ticks:?}");
                            assert!(
                                ticks.windows(2).all(|pair| pair[0].share < pair[1].share),
                                "{scale:?} {values:?} {ticks:?}"
                            );
                            assert!(ticks.len() < 20, "{scale:?} {values:?} {ticks:?}");
                        }
                    }
                }
            }
        }
    }

    #[test]
    fn given_numbers_are_written_with_the_decimals_that_they_need() {
        let axis = Axis::linear("", "")
            .with_range(0.0, 24.0)
            .with_ticks(&[0.0, 7.5, 24.0, 90.0]);
        let map = Mapping::new(&axis, std::iter::empty(), Ends::Exact);
        assert_eq!(texts(&map, 3), ["0.0", "7.5", "24.0"]);
    }

    #[test]
    fn an_axis_without_numbers_or_with_equal_ones_has_a_length() {
        for values in [&[][..], &[f64::NAN], &[0.0], &[5.0, 5.0], &[-3e-9, -3e-9]] {
            for scale in [Scale::Linear, Scale::Log10, Scale::Log10AndZero] {
                let map = mapping(scale, values, Ends::Exact);
                assert!(map.high > map.low, "{values:?}");
            }
        }
    }
}
