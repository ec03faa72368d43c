"""Works behind the method, as a reader can look them up."""

from __future__ import annotations

# Bibliographic details are from memory; measures carry their own sources in their passports.
FREEDMAN_LANE = (
    "Freedman, D. & Lane, D. (1983). A nonstochastic interpretation of reported significance levels. "
    "Journal of Business & Economic Statistics, 1, 292–298."
)
WINKLER = (
    "Winkler, A. M., Ridgway, G. R., Webster, M. A., Smith, S. M. & Nichols, T. E. (2014). Permutation "
    "inference for the general linear model. NeuroImage, 92, 381–397."
)
WESTFALL_YOUNG = (
    "Westfall, P. H. & Young, S. S. (1993). Resampling-based multiple testing: examples and methods for "
    "p-value adjustment. Wiley."
)
PHIPSON_SMYTH = (
    "Phipson, B. & Smyth, G. K. (2010). Permutation p-values should never be zero: calculating exact "
    "p-values when permutations are randomly drawn. Statistical Applications in Genetics and Molecular "
    "Biology, 9, 39."
)
PATTERSON_THOMPSON = (
    "Patterson, H. D. & Thompson, R. (1971). Recovery of inter-block information when block sizes are "
    "unequal. Biometrika, 58, 545–554."
)
SATTERTHWAITE = (
    "Satterthwaite, F. E. (1946). An approximate distribution of estimates of variance components. "
    "Biometrics Bulletin, 2, 110–114."
)
