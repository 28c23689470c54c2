//! The choices within preparation steps, with their stable names and their words.

/// Declares a set of choices: each with its stable name, and how it reads in a sentence.
macro_rules! choices {
    ($(
        $(#[$about:meta])*
        $name:ident {
            $($(#[$doc:meta])* $variant:ident = $stable:literal, $words:literal;)+
        }
    )+) => { $(
        $(#[$about])*
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
        pub enum $name {
            $($(#[$doc])* $variant,)+
        }

        impl $name {
            /// Every choice by its stable name.
            pub const TABLE: &'static [(&'static str, Self)] = &[$(($stable, Self::$variant)),+];
            /// The stable names.
            pub const NAMES: &'static [&'static str] = &[$($stable),+];
            /// How each choice reads in a sentence, by its stable name.
            pub const WORDS: &'static [(&'static str, &'static str)] = &[$(($stable, $words)),+];

            /// The stable name.
            #[must_use]
            pub const fn name(self) -> &'static str {
                match self {
                    $(Self::$variant => $stable),+
                }
            }

            /// How the choice reads in a sentence.
            #[must_use]
            pub const fn words(self) -> &'static str {
                match self {
                    $(Self::$variant => $words),+
                }
            }
        }
    )+ };
}

choices! {
    /// The base of a logarithm.
    LogBase {
        /// The number e.
        Natural = "natural", "natural logarithm";
        /// Two.
        Two = "two", "logarithm to base 2";
        /// Ten.
        Ten = "ten", "logarithm to base 10";
    }
    /// A family of power transforms.
    PowerFamily {
        /// For values above 0.
        BoxCox = "box-cox", "Box–Cox";
        /// For any values.
        YeoJohnson = "yeo-johnson", "Yeo–Johnson";
    }
    /// Whether a power is fitted or given.
    PowerSource {
        /// For each predictor, in every training part.
        Fitted = "fitted", "fitted for each predictor";
        /// One for all.
        Given = "given", "given";
    }
    /// What stands for a value below a limit.
    LimitRule {
        /// A share of the limit.
        Share = "share", "a share of the limit";
        /// The limit over the root of two.
        OverRootTwo = "over-root-two", "the limit over √2";
        /// The limit itself.
        Whole = "whole", "the limit itself";
    }
    /// What stands for a missing value of a predictor.
    Statistic {
        /// The median of the training part.
        Median = "median", "median";
        /// The mean of the training part.
        Mean = "mean", "mean";
    }
    /// How the nearest samples count.
    NeighborWeights {
        /// All the same.
        Equal = "equal", "counted equally";
        /// By the inverse of their distance.
        InverseDistance = "inverse-distance", "weighted by the inverse of their distance";
    }
    /// The scale that predictors are divided by.
    ScaleRule {
        /// The standard deviation, divisor n.
        UnitVariance = "unit-variance", "standard deviation";
        /// The root of the standard deviation.
        Pareto = "pareto", "root of the standard deviation";
        /// The largest value minus the smallest.
        Range = "range", "range";
        /// The mean.
        Level = "level", "mean";
        /// The median distance from the median.
        Robust = "robust", "median distance from the median";
    }
    /// Where a reference comes from.
    ReferenceSource {
        /// The training part.
        Training = "training", "the training samples’";
        /// It is given.
        Given = "given", "a given";
    }
    /// Whether reflectance is measured against a reference.
    AbsorbanceSource {
        /// The values are shares already.
        Shares = "shares", "shares";
        /// The values are divided by a given reference first.
        Given = "given", "values over a given reference";
    }
    /// How values between predictors are found.
    Interpolation {
        /// On straight lines.
        Linear = "linear", "straight lines";
        /// On a natural cubic spline.
        CubicSpline = "cubic-spline", "a cubic spline";
    }
    /// What happens to regions of the axis.
    Treatment {
        /// They are left out.
        Cut = "cut", "leave out";
        /// All else is left out.
        Keep = "keep", "keep only";
    }
    /// What the baseline of a sample is.
    BaselineRule {
        /// Its smallest value.
        Offset = "offset", "its smallest value";
        /// The line through its ends.
        Line = "line", "the line through its ends";
        /// A smooth curve below it.
        Asymmetric = "asymmetric", "a smooth curve by asymmetric least squares";
    }
    /// What a sample is divided by.
    DivisorRule {
        /// The sum over its predictors.
        Sum = "sum", "sum";
        /// The area along the axis.
        Area = "area", "area along the axis";
        /// The largest value.
        Peak = "peak", "largest value";
        /// The root of the sum of squares.
        Length = "length", "length (root of the sum of squares)";
        /// One predictor.
        Standard = "standard", "internal standard";
    }
    /// The shape of a drift.
    TrendRule {
        /// A straight line.
        Line = "line", "a straight line";
        /// Local straight lines.
        Smooth = "smooth", "a smooth curve";
    }
    /// How a drift is taken out.
    DriftRemoval {
        /// For drifts of sensitivity.
        Ratio = "ratio", "dividing by it";
        /// For drifts of level.
        Difference = "difference", "taking it away";
    }
}
