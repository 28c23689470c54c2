//! What one preparation step does, in the imperative, with a word for each of its settings.

use crate::base::real::Real;
use crate::eval::kind::step::region_words;
use crate::report::noun::Noun;
use crate::report::sentence::{Editor, Sentence};
use crate::report::word;
use crate::study::settings::prepare::choice::{
    AbsorbanceSource, BaselineRule, DivisorRule, DriftRemoval, Interpolation, LimitRule, LogBase,
    NeighborWeights, PowerFamily, PowerSource, ReferenceSource, ScaleRule, Statistic, Treatment,
    TrendRule,
};
use crate::study::settings::prepare::{Baseline, Divisor, LimitValue, Reference, Step, Trend};
use crate::study::settings::slot::Slot;
use crate::study::settings::slot::prepare::{PrepareSlot, StepSlot};

const DERIVATIVES: [(&str, &str); 3] = [
    ("smoothing", "smoothed course"),
    ("first-derivative", "first derivative"),
    ("second-derivative", "second derivative"),
];

/// A clause that is being written: the sentence so far, and where its step stands.
struct Clause {
    sentence: Sentence,
    at: usize,
}

impl Clause {
    fn slot(&self, slot: StepSlot) -> Slot {
        Slot::Prepare(PrepareSlot::Step(self.at, slot))
    }

    fn text(mut self, text: &str) -> Self {
        self.sentence = self.sentence.text(text);
        self
    }

    /// The step’s own word, which opens the list of steps.
    fn name(mut self, text: &str) -> Self {
        let steps = Slot::Prepare(PrepareSlot::Steps);
        self.sentence = self.sentence.word(steps, text, Editor::Steps);
        self
    }

    fn real(mut self, slot: StepSlot, value: Real) -> Self {
        let slot = self.slot(slot);
        self.sentence = self.sentence.real(slot, value);
        self
    }

    fn whole(mut self, slot: StepSlot, value: u32) -> Self {
        let slot = self.slot(slot);
        self.sentence = self.sentence.whole(slot, u64::from(value));
        self
    }

    fn choice(mut self, slot: StepSlot, text: &str, labels: &[(&str, &str)]) -> Self {
        let slot = self.slot(slot);
        self.sentence = self.sentence.choice(slot, text, labels);
        self
    }

    /// Numbers that are given: how many there are.
    fn series(mut self, slot: StepSlot, values: &[Real], none: &str) -> Self {
        let slot = self.slot(slot);
        let text = match values.len() {
            0 => none.to_owned(),
            1 => "1 number".to_owned(),
            count => format!("{} numbers", word::whole(count as u64)),
        };
        self.sentence = self.sentence.word(slot, text, Editor::List);
        self
    }

    fn list(mut self, slot: StepSlot, text: String) -> Self {
        let slot = self.slot(slot);
        self.sentence = self.sentence.word(slot, text, Editor::List);
        self
    }

    fn column(mut self, slot: StepSlot, column: Option<&String>, none: &str) -> Self {
        let slot = self.slot(slot);
        self.sentence = self.sentence.column(slot, column, none);
        self
    }

    /// `the training samples’ mean`, or `a given mean of 700 numbers`.
    fn reference(self, reference: &Reference, what: &str) -> Self {
        let source = match reference {
            Reference::Training => ReferenceSource::Training,
            Reference::Given(_) => ReferenceSource::Given,
        };
        let clause = self
            .choice(
                StepSlot::ReferenceSource,
                source.words(),
                ReferenceSource::WORDS,
            )
            .text(&format!(" {what}"));
        match reference {
            Reference::Training => clause,
            Reference::Given(values) => {
                clause
                    .text(" of ")
                    .series(StepSlot::Reference, values, "numbers still to be given")
            }
        }
    }
}

/// The sentence with what the step at a place does. `sample` is what the samples are called there,
/// `unit` what the things are that they belong to.
#[expect(clippy::too_many_lines, reason = "one arm for each step, as it reads")]
pub fn clause(sentence: Sentence, at: usize, step: &Step, sample: &Noun, unit: &Noun) -> Sentence {
    let clause = Clause { sentence, at };
    let one = sample.one.as_str();
    let many = sample.many.as_str();
    let clause = match step {
        Step::AverageUnits => clause
            .name("average")
            .text(&format!(" the {} of each {}", sample.many, unit.one)),
        Step::UnitConversion { factor, offset } => clause
            .name("convert the unit")
            .text(": multiply each value by ")
            .real(StepSlot::Factor, *factor)
            .text(" and add ")
            .real(StepSlot::Offset, *offset),
        Step::Absorbance { reference } => {
            let source = match reference {
                None => AbsorbanceSource::Shares,
                Some(_) => AbsorbanceSource::Given,
            };
            let clause = clause
                .text("take the ")
                .name("absorbance")
                .text(" (minus the logarithm to base 10) of ")
                .choice(StepSlot::Shares, source.words(), AbsorbanceSource::WORDS);
            match reference {
                None => clause,
                Some(values) => clause.text(" of ").series(
                    StepSlot::Reference,
                    values,
                    "numbers still to be given",
                ),
            }
        }
        Step::CommonAxis {
            first,
            last,
            distance,
            between,
        } => clause
            .text("read the values off on a ")
            .name("common axis")
            .text(" from ")
            .real(StepSlot::AxisFirst, *first)
            .text(" to ")
            .real(StepSlot::AxisLast, *last)
            .text(" by ")
            .real(StepSlot::AxisDistance, *distance)
            .text(", between neighbours on ")
            .choice(
                StepSlot::Interpolation,
                between.words(),
                Interpolation::WORDS,
            ),
        Step::CutRegions { regions, treatment } => clause
            .choice(StepSlot::Treatment, treatment.words(), Treatment::WORDS)
            .text(" the ")
            .name("regions")
            .text(" ")
            .list(StepSlot::Regions, region_words(regions))
            .text(" of the axis"),
        Step::SpikeRemoval { half, threshold } => clause
            .text("put the median of ")
            .whole(StepSlot::Half, *half)
            .text(" neighbours on each side in place of a ")
            .name("spike")
            .text(", a value more than ")
            .real(StepSlot::Threshold, *threshold)
            .text(" robust standard deviations off"),
        Step::SavitzkyGolay {
            window,
            degree,
            derivative,
        } => {
            let text = match derivative {
                0 => "smoothed course",
                1 => "first derivative",
                _ => "second derivative",
            };
            clause
                .text("take the ")
                .choice(StepSlot::Derivative, text, &DERIVATIVES)
                .text(" by ")
                .name("local polynomials")
                .text(" (Savitzky and Golay), window ")
                .whole(StepSlot::Window, *window)
                .text(", degree ")
                .whole(StepSlot::Degree, *degree)
        }
        Step::StandardNormalVariate => clause
            .text("take the ")
            .name("standard normal variate")
            .text(" (minus its mean, divided by its standard deviation)"),
        Step::Detrend { degree } => clause
            .text("take away a ")
            .name("trend")
            .text(" along the predictors, a polynomial of degree ")
            .whole(StepSlot::TrendDegree, *degree),
        Step::Baseline { baseline } => {
            let rule = match baseline {
                Baseline::Offset => BaselineRule::Offset,
                Baseline::Line => BaselineRule::Line,
                Baseline::Asymmetric { .. } => BaselineRule::Asymmetric,
            };
            let clause = clause
                .text("take away its ")
                .name("baseline")
                .text(", ")
                .choice(StepSlot::BaselineRule, rule.words(), BaselineRule::WORDS);
            match baseline {
                Baseline::Offset | Baseline::Line => clause,
                Baseline::Asymmetric {
                    smoothness,
                    asymmetry,
                } => clause
                    .text(" of smoothness ")
                    .real(StepSlot::Smoothness, *smoothness)
                    .text(" and asymmetry ")
                    .real(StepSlot::Asymmetry, *asymmetry),
            }
        }
        Step::ScatterCorrection { reference } => clause
            .text("correct the ")
            .name("scatter")
            .text(&format!(" by regressing each {one} on "))
            .reference(reference, "mean"),
        Step::ExtendedScatterCorrection {
            reference,
            degree,
            interferent,
        } => clause
            .text("correct the ")
            .name("scatter, extended")
            .text(&format!(", by regressing each {one} on "))
            .reference(reference, "mean")
            .text(", a polynomial of degree ")
            .whole(StepSlot::TrendDegree, *degree)
            .text(" and, as an interferent, ")
            .series(StepSlot::Interferent, interferent, "nothing"),
        Step::BelowLimit { value } => {
            let (rule, share) = match value {
                LimitValue::Share(share) => (LimitRule::Share, Some(*share)),
                LimitValue::OverRootTwo => (LimitRule::OverRootTwo, None),
                LimitValue::Whole => (LimitRule::Whole, None),
            };
            let clause =
                clause
                    .text("put ")
                    .choice(StepSlot::LimitRule, rule.words(), LimitRule::WORDS);
            let clause = match share {
                None => clause,
                Some(share) => clause
                    .text(", ")
                    .real(StepSlot::ShareOfLimit, share)
                    .text(" times it,"),
            };
            clause
                .text(" in place of a value ")
                .name("below a limit")
                .text(", and the limit in place of one above it")
        }
        Step::ColumnImputation { statistic } => clause
            .text("put the predictor’s ")
            .choice(StepSlot::Statistic, statistic.words(), Statistic::WORDS)
            .text(" in place of a ")
            .name("missing value"),
        Step::NearestImputation { neighbors, weights } => clause
            .text("fill a ")
            .name("missing value")
            .text(" from the ")
            .whole(StepSlot::Neighbors, *neighbors)
            .text(&format!(" nearest {} that have it, ", sample.many))
            .choice(StepSlot::Weights, weights.words(), NeighborWeights::WORDS),
        Step::LowRankImputation { rank } => clause
            .text("fill ")
            .name("missing values")
            .text(" by the first ")
            .whole(StepSlot::Rank, *rank)
            .text(" principal components"),
        Step::Normalisation { divisor, target } => {
            let (rule, standard) = match divisor {
                Divisor::Sum => (DivisorRule::Sum, None),
                Divisor::Area => (DivisorRule::Area, None),
                Divisor::Peak => (DivisorRule::Peak, None),
                Divisor::Length => (DivisorRule::Length, None),
                Divisor::Standard(name) => (DivisorRule::Standard, Some(name)),
            };
            let clause = clause.name("bring").text(" its ").choice(
                StepSlot::DivisorRule,
                rule.words(),
                DivisorRule::WORDS,
            );
            let clause = match standard {
                None => clause,
                Some(name) => {
                    clause
                        .text(" ")
                        .column(StepSlot::Standard, name.as_ref(), "still to be chosen")
                }
            };
            clause.text(" to ").real(StepSlot::Target, *target)
        }
        Step::ProbabilisticQuotient { reference } => clause
            .text(&format!("divide each {one} by the median of its "))
            .name("quotients")
            .text(" with ")
            .reference(reference, "median"),
        Step::QuantileNormalisation { reference } => clause
            .text(&format!("give each {one} the same "))
            .name("quantiles")
            .text(", those of ")
            .reference(reference, "distribution"),
        Step::CenteredLogRatio { pseudo_count } => clause
            .text("add ")
            .real(StepSlot::PseudoCount, *pseudo_count)
            .text(" to each value and take the ")
            .name("centred log-ratio")
            .text(" (its logarithm minus the mean logarithm)"),
        Step::Log { base, offset } => clause
            .text("add ")
            .real(StepSlot::Offset, *offset)
            .text(" to each ")
            .name("value")
            .text(" and take the ")
            .choice(StepSlot::Base, base.words(), LogBase::WORDS),
        Step::InverseHyperbolicSine { scale } => clause
            .text("take the ")
            .name("inverse hyperbolic sine")
            .text(" of each value over ")
            .real(StepSlot::HyperbolicScale, *scale),
        Step::Power { exponent } => clause
            .text("raise each value to the ")
            .name("power")
            .text(" ")
            .real(StepSlot::Exponent, *exponent),
        Step::PowerTransform { family, power } => {
            let source = match power {
                None => PowerSource::Fitted,
                Some(_) => PowerSource::Given,
            };
            let clause = clause
                .text("take the ")
                .choice(StepSlot::Family, family.words(), PowerFamily::WORDS)
                .text(" ")
                .name("transform")
                .text(" with a power that is ")
                .choice(StepSlot::PowerSource, source.words(), PowerSource::WORDS);
            match power {
                None => clause,
                Some(power) => clause.text(", ").real(StepSlot::PowerGiven, *power),
            }
        }
        Step::QualityControlDrift { trend, removal } => {
            let rule = match trend {
                Trend::Line => TrendRule::Line,
                Trend::Smooth { .. } => TrendRule::Smooth,
            };
            let clause = clause
                .text("take out the ")
                .name("drift")
                .text(" of the quality-control samples along the order of measurement, ")
                .choice(StepSlot::TrendRule, rule.words(), TrendRule::WORDS);
            let clause = match trend {
                Trend::Line => clause,
                Trend::Smooth { span } => clause
                    .text(" over a share of ")
                    .real(StepSlot::Span, *span)
                    .text(" of them at a time"),
            };
            clause
                .text(", by ")
                .choice(StepSlot::Removal, removal.words(), DriftRemoval::WORDS)
        }
        Step::QualityControlSpread { most } => clause
            .text("leave out predictors that are ")
            .name("unsteady")
            .text(" in the quality-control samples, with a standard deviation above a share of ")
            .real(StepSlot::MostSpread, *most)
            .text(" of the mean"),
        Step::BatchCentering => clause
            .text("bring the mean of each ")
            .name("batch")
            .text(" to the mean of all"),
        Step::CovariateRemoval => clause
            .text("take away what is linear in the ")
            .name("covariates"),
        Step::MissingShareFilter { most } => clause
            .text("leave out predictors with ")
            .name("missing values")
            .text(&format!(" in a share of {many} above "))
            .real(StepSlot::MostMissing, *most),
        Step::NearConstantFilter { least } => clause
            .text("leave out ")
            .name("nearly constant predictors")
            .text(&format!(", in which a share of {many} below "))
            .real(StepSlot::LeastDiffering, *least)
            .text(" differs from the commonest value"),
        Step::CallRateFilter { least } => clause
            .text("leave out markers ")
            .name("called")
            .text(&format!(" in a share of {many} below "))
            .real(StepSlot::LeastCalled, *least),
        Step::MinorAlleleFilter { least } => clause
            .text("leave out markers of which the ")
            .name("rarer allele")
            .text(" has a frequency below ")
            .real(StepSlot::LeastMinor, *least),
        Step::OutcomeFilter { keep } => clause
            .text("keep the ")
            .whole(StepSlot::Keep, *keep)
            .text(" predictors that go together ")
            .name("with the outcome")
            .text(" most closely"),
        Step::Center => clause.name("centre").text(" each predictor"),
        Step::Scale { rule } => {
            let clause = match rule {
                ScaleRule::UnitVariance
                | ScaleRule::Pareto
                | ScaleRule::Range
                | ScaleRule::Level => clause.name("scale").text(" each predictor by its "),
                ScaleRule::Robust => clause
                    .name("scale")
                    .text(" each predictor, centred on its median, by its "),
            };
            clause.choice(StepSlot::ScaleRule, rule.words(), ScaleRule::WORDS)
        }
        Step::PrincipalScores { components } => clause
            .text("put the scores on the first ")
            .whole(StepSlot::Components, *components)
            .text(" ")
            .name("principal components")
            .text(" in place of the predictors"),
    };
    clause.sentence
}
