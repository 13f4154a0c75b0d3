//! Checks against values from outside, one file per distribution or procedure. Each file's head names its
//! source; `data/` holds the longer tables with theirs.

mod accuracy;
mod accuracy_page;
mod adjustments;
mod amalgamated_means;
mod anova_power;
mod cases;
mod central;
mod comparisons;
mod continuous;
mod contrasts;
mod distribution_properties;
mod effect_size;
mod handbook;
mod invariances;
mod many_to_one;
mod multivariate_t;
mod multivariate_t_properties;
mod nist_strd;
mod noncentral_f;
mod noncentral_t;
mod one_way;
mod open_data;
mod permutation;
mod profile;
mod properties;
mod random;
mod rank_counts;
mod rank_properties;
mod remembered;
mod shapiro_wilk;
mod studentized_families;
mod studentized_range;
mod trend;
mod wide;
