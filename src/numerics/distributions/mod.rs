//! Probability distributions, one a file, each with `cdf`, `sf` (upper tail) and `quantile`.
