//! The published sources of preparation steps.

use crate::study::settings::prepare::choice::{PowerFamily, ScaleRule};
use crate::study::settings::prepare::{Baseline, Step, Trend};

/// A published source.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Source {
    /// As it is cited in running text.
    pub cited: &'static str,
    /// As it stands in a list of references.
    pub full: &'static str,
}

const BARNES: Source = Source {
    cited: "Barnes et al. 1989",
    full: "Barnes, R. J., Dhanoa, M. S. & Lister, S. J. (1989). Standard normal variate transformation and de-trending of near-infrared diffuse reflectance spectra. Applied Spectroscopy 43, 772–777.",
};
const SAVITZKY: Source = Source {
    cited: "Savitzky and Golay 1964",
    full: "Savitzky, A. & Golay, M. J. E. (1964). Smoothing and differentiation of data by simplified least squares procedures. Analytical Chemistry 36, 1627–1639.",
};
const GELADI: Source = Source {
    cited: "Geladi et al. 1985",
    full: "Geladi, P., MacDougall, D. & Martens, H. (1985). Linearization and scatter-correction for near-infrared reflectance spectra of meat. Applied Spectroscopy 39, 491–500.",
};
const MARTENS: Source = Source {
    cited: "Martens and Stark 1991",
    full: "Martens, H. & Stark, E. (1991). Extended multiplicative signal correction and spectral interference subtraction: new preprocessing methods for near infrared spectroscopy. Journal of Pharmaceutical and Biomedical Analysis 9, 625–635.",
};
const EILERS: Source = Source {
    cited: "Eilers and Boelens 2005",
    full: "Eilers, P. H. C. & Boelens, H. F. M. (2005). Baseline correction with asymmetric least squares smoothing. Report, Leiden University Medical Centre.",
};
const WHITAKER: Source = Source {
    cited: "after Whitaker and Hayes 2018",
    full: "Whitaker, D. A. & Hayes, K. (2018). A simple algorithm for despiking Raman spectra. Chemometrics and Intelligent Laboratory Systems 179, 82–84.",
};
const SCHISTERMAN: Source = Source {
    cited: "on what this costs see Schisterman et al. 2006",
    full: "Schisterman, E. F., Vexler, A., Whitcomb, B. W. & Liu, A. (2006). The limitations due to exposure detection limits for regression models. American Journal of Epidemiology 163, 374–383.",
};
const AITCHISON: Source = Source {
    cited: "Aitchison 1982",
    full: "Aitchison, J. (1982). The statistical analysis of compositional data. Journal of the Royal Statistical Society B 44, 139–177.",
};
const DIETERLE: Source = Source {
    cited: "Dieterle et al. 2006",
    full: "Dieterle, F., Ross, A., Schlotterbeck, G. & Senn, H. (2006). Probabilistic quotient normalization as robust method to account for dilution of complex biological mixtures. Analytical Chemistry 78, 4281–4290.",
};
const BOLSTAD: Source = Source {
    cited: "Bolstad et al. 2003",
    full: "Bolstad, B. M., Irizarry, R. A., Åstrand, M. & Speed, T. P. (2003). A comparison of normalization methods for high density oligonucleotide array data based on variance and bias. Bioinformatics 19, 185–193.",
};
const TROYANSKAYA: Source = Source {
    cited: "Troyanskaya et al. 2001",
    full: "Troyanskaya, O., Cantor, M., Sherlock, G., Brown, P., Hastie, T., Tibshirani, R., Botstein, D. & Altman, R. B. (2001). Missing value estimation methods for DNA microarrays. Bioinformatics 17, 520–525.",
};
const BOX: Source = Source {
    cited: "Box and Cox 1964",
    full: "Box, G. E. P. & Cox, D. R. (1964). An analysis of transformations. Journal of the Royal Statistical Society B 26, 211–252.",
};
const YEO: Source = Source {
    cited: "Yeo and Johnson 2000",
    full: "Yeo, I.-K. & Johnson, R. A. (2000). A new family of power transformations to improve normality or symmetry. Biometrika 87, 954–959.",
};
const CLEVELAND: Source = Source {
    cited: "local lines after Cleveland 1979",
    full: "Cleveland, W. S. (1979). Robust locally weighted regression and smoothing scatterplots. Journal of the American Statistical Association 74, 829–836.",
};
const AMBROISE: Source = Source {
    cited: "learnt outside the training parts it would flatter: Ambroise and McLachlan 2002",
    full: "Ambroise, C. & McLachlan, G. J. (2002). Selection bias in gene extraction on the basis of microarray gene-expression data. Proceedings of the National Academy of Sciences 99, 6562–6566.",
};
const SONESON: Source = Source {
    cited: "on its limits see Soneson et al. 2014",
    full: "Soneson, C., Gerster, S. & Delorenzi, M. (2014). Batch effect confounding leads to strong bias in performance estimates obtained by cross-validation. PLoS ONE 9, e100335.",
};
const SNOEK: Source = Source {
    cited: "learnt in the training part as in Snoek et al. 2019",
    full: "Snoek, L., Miletić, S. & Scholte, H. S. (2019). How to control for confounds in decoding analyses of neuroimaging data. NeuroImage 184, 741–760.",
};
const PEARSON: Source = Source {
    cited: "Pearson 1901",
    full: "Pearson, K. (1901). On lines and planes of closest fit to systems of points in space. Philosophical Magazine 2, 559–572.",
};
const VAN_DEN_BERG: Source = Source {
    cited: "van den Berg et al. 2006",
    full: "van den Berg, R. A., Hoefsloot, H. C. J., Westerhuis, J. A., Smilde, A. K. & van der Werf, M. J. (2006). Centering, scaling, and transformations: improving the biological information content of metabolomics data. BMC Genomics 7, 142.",
};

/// The published source of a step; `None` where it is arithmetic or a convention.
#[must_use]
pub const fn source(step: &Step) -> Option<Source> {
    Some(match step {
        Step::StandardNormalVariate | Step::Detrend { .. } => BARNES,
        Step::SavitzkyGolay { .. } => SAVITZKY,
        Step::ScatterCorrection { .. } => GELADI,
        Step::ExtendedScatterCorrection { .. } => MARTENS,
        Step::Baseline {
            baseline: Baseline::Asymmetric { .. },
        } => EILERS,
        Step::SpikeRemoval { .. } => WHITAKER,
        Step::BelowLimit { .. } => SCHISTERMAN,
        Step::CenteredLogRatio { .. } => AITCHISON,
        Step::ProbabilisticQuotient { .. } => DIETERLE,
        Step::QuantileNormalisation { .. } => BOLSTAD,
        Step::NearestImputation { .. } | Step::LowRankImputation { .. } => TROYANSKAYA,
        Step::PowerTransform {
            family: PowerFamily::BoxCox,
            ..
        } => BOX,
        Step::PowerTransform {
            family: PowerFamily::YeoJohnson,
            ..
        } => YEO,
        Step::QualityControlDrift {
            trend: Trend::Smooth { .. },
            ..
        } => CLEVELAND,
        Step::OutcomeFilter { .. } => AMBROISE,
        Step::BatchCentering => SONESON,
        Step::CovariateRemoval => SNOEK,
        Step::PrincipalScores { .. } => PEARSON,
        Step::Scale {
            rule: ScaleRule::Pareto | ScaleRule::Range | ScaleRule::Level | ScaleRule::Robust,
        } => VAN_DEN_BERG,
        Step::AverageUnits
        | Step::UnitConversion { .. }
        | Step::Absorbance { .. }
        | Step::CommonAxis { .. }
        | Step::CutRegions { .. }
        | Step::Normalisation { .. }
        | Step::Baseline {
            baseline: Baseline::Offset | Baseline::Line,
        }
        | Step::Log { .. }
        | Step::InverseHyperbolicSine { .. }
        | Step::Power { .. }
        | Step::QualityControlDrift {
            trend: Trend::Line, ..
        }
        | Step::MissingShareFilter { .. }
        | Step::CallRateFilter { .. }
        | Step::MinorAlleleFilter { .. }
        | Step::NearConstantFilter { .. }
        | Step::QualityControlSpread { .. }
        | Step::ColumnImputation { .. }
        | Step::Center
        | Step::Scale {
            rule: ScaleRule::UnitVariance,
        } => return None,
    })
}
