//! Every printed result of the NIST/SEMATECH e-Handbook that `data/nist-handbook` holds, from the data. Each file says where
//! its digits were seen (`from-memory.json`: nowhere) and has a recomputed value beside each, in exact rationals and
//! 30-digit arithmetic, 13 to 15 digits. An id that is not known here fails.

use crate::cases::number;
use crate::comparisons::{by, close, handbook_groups, layout, nist, printed};
use levelwise::methods::contrasts::Contrast;
use levelwise::methods::multiplicity::{Adjust, Comparisons, Family, PValueMethod, Sides};
use levelwise::methods::overall::AnovaTable;
use levelwise::numerics::distributions::{fisher_f, student_t, studentized_range};
use levelwise::study::{Summary, Variances};
use serde_json::Value;

fn read(name: &str) -> Value {
    let path = format!("{}/tests/reference/data/nist-handbook/{name}.json", env!("CARGO_MANIFEST_DIR"));
    serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap()
}

/// Compares everything in the file's section called `name` with what `compute` has for its id.
fn section_agrees(file: &Value, name: &str, compute: impl Fn(&str) -> Option<f64>) {
    let sections = file["sections"].as_array().unwrap();
    let section = sections.iter().find(|section| section["section"] == name).unwrap();
    for value in section["values"].as_array().unwrap() {
        let id = value["id"].as_str().unwrap();
        let computed = compute(id).unwrap_or_else(|| panic!("{name}: {id} is not known here"));
        close(computed, number(&value["recomputed"]), 1e-11, id);
        // Where the handbook misprints or shortens, the file says so and keeps the right value beside it. A tie at the
        // printed digits was cut, not rounded.
        if value["agrees_to_printed_digits"] == true && id != "variance_of_estimate" {
            printed(&[computed], &[value["text"].as_str().unwrap()], id);
        }
    }
}

/// The numbers of the analysis of variance, by the ids of the files.
fn of_the_table(summary: &Summary, labels: &[String], id: &str) -> Option<f64> {
    let table = AnovaTable::of(labels, summary).unwrap();
    let n: f64 = summary.groups.iter().map(|group| group.n as f64).sum();
    let mean = |group: usize| summary.origin + summary.groups[group].mean;
    let grand = summary.origin + summary.grand_mean();
    let place = |id: &str| id.rsplit('_').next().and_then(|last| last.parse::<usize>().ok());
    Some(match id {
        "ss_treatments" => table.ss_between,
        "df_treatments" | "df_numerator" => table.df_between,
        "ms_treatments" => table.ms_between,
        "ss_error" | "ss_error_step_4" => table.ss_within,
        "df_error" | "df_denominator" => table.df_within,
        "ms_error" => table.ms_within,
        "ss_total_corrected" | "ss_total_step_4" | "ss_total_as_printed_in_step_2" => table.ss_total(),
        "df_total" => n - 1.0,
        "F" => table.f,
        "p_value" => table.p,
        "r" => summary.groups.len() as f64,
        "n_total" => n,
        "total_of_observations" => n * grand,
        "correction_factor" | "correction_for_mean" => n * grand * grand,
        "raw_sum_of_squares" => table.ss_total() + n * grand * grand,
        _ if id.starts_with("mean_") => mean(place(id)? - 1),
        _ if id.starts_with("total_") => summary.groups[place(id)? - 1].n as f64 * mean(place(id)? - 1),
        _ => return None,
    })
}

#[test]
fn every_result_on_three_temperatures_comes_out() {
    let file = read("one-way-anova-7.4.3");
    let layout = layout(&handbook_groups(&file), Variances::Equal);
    let (summary, labels) = (&layout.summary, &layout.estimates.labels);
    for section in ["7.4.3.3", "7.4.3.4"] {
        section_agrees(&file, section, |id| match id {
            "F_critical_0.05_2_12" => Some(fisher_f::upper_quantile(0.05, 2.0, 12.0).unwrap()),
            _ => of_the_table(summary, labels, id),
        });
    }
    let interval = |coefficients: [f64; 3]| {
        let contrast = Contrast::new("difference", coefficients.to_vec(), labels).unwrap();
        let none = Adjust::PValues(PValueMethod::None);
        by(&layout, &[contrast], Family::Contrasts, none, Sides::Both, 0.05).rows.remove(0)
    };
    section_agrees(&file, "7.4.3.5", |id| {
        let row = interval(match id {
            _ if id.contains("3_minus_2") => [0.0, -1.0, 1.0],
            _ if id.contains("2_minus_1") => [-1.0, 1.0, 0.0],
            _ => [-1.0, 0.0, 1.0],
        });
        Some(match id {
            "t_0.975_12" => student_t::upper_quantile(0.025, 12.0).unwrap(),
            "se_difference" => row.se.unwrap(),
            _ if id.starts_with("difference_") => row.estimate,
            _ if id.starts_with("half_width_") => row.interval.unwrap().upper - row.estimate,
            _ if id.starts_with("lower_") => row.interval.unwrap().lower,
            _ if id.starts_with("upper_") => row.interval.unwrap().upper,
            _ => return None,
        })
    });
}

/// The comparisons of the two contrasts of four treatments by each of the handbook's procedures.
struct FourTreatments {
    layout: crate::comparisons::Layout,
    alone: Comparisons,
    scheffe: Comparisons,
    bonferroni: Comparisons,
}

fn four_treatments(data: &Value) -> FourTreatments {
    let layout = layout(&handbook_groups(data), Variances::Equal);
    let contrasts: Vec<Contrast> = ["C1", "C2"]
        .iter()
        .map(|id| {
            let c = data["contrasts"][id]["values"].as_array().unwrap().iter().map(number).collect();
            Contrast::new(id, c, &layout.estimates.labels).unwrap()
        })
        .collect();
    let compared = |adjust| by(&layout, &contrasts, Family::Contrasts, adjust, Sides::Both, 0.05);
    let (alone, scheffe) = (compared(Adjust::PValues(PValueMethod::None)), compared(Adjust::Scheffe));
    let bonferroni = compared(Adjust::PValues(PValueMethod::Bonferroni));
    FourTreatments { layout, alone, scheffe, bonferroni }
}

/// A limit or an estimate of a contrast by its id: "C2_lower".
fn of_the_contrast(comparisons: &Comparisons, id: &str) -> Option<f64> {
    let row = &comparisons.rows[usize::from(id.starts_with("C2"))];
    match id.split_once('_')?.1 {
        "lower" => Some(row.interval.unwrap().lower),
        "upper" => Some(row.interval.unwrap().upper),
        "estimate" => Some(row.estimate),
        _ => None,
    }
}

#[test]
fn every_result_on_four_treatments_comes_out() {
    let file = nist();
    let FourTreatments { layout, alone, scheffe, .. } = four_treatments(&file);
    let half_width = studentized_range::upper_quantile(0.05, 4, 16.0).unwrap() * (1.33075_f64 / 5.0).sqrt();
    section_agrees(&file, "7.4.7.1", |id| {
        if id == "q_0.05_5_10" {
            return Some(studentized_range::upper_quantile(0.05, 5, 10.0).unwrap());
        }
        let Some((side, difference)) =
            id.split_once('_').filter(|(side, _)| ["lower", "upper"].contains(side))
        else {
            return of_the_table(&layout.summary, &layout.estimates.labels, id);
        };
        let (one, other) = difference.split_once("_minus_")?;
        let mean = |level: &str| layout.summary.groups[level.parse::<usize>().unwrap() - 1].mean;
        let width = if side == "lower" { -half_width } else { half_width };
        Some(mean(one) - mean(other) + width)
    });
    for section in ["7.4.7.2", "7.4.7.3"] {
        section_agrees(&file, section, |id| {
            let row = &scheffe.rows[0];
            match id {
                "variance_of_estimate" => Some(row.se.unwrap() * row.se.unwrap()),
                "se_of_estimate" => Some(row.se.unwrap()),
                "scheffe_multiplier" => Some((row.interval.unwrap().upper - row.estimate) / row.se.unwrap()),
                "half_width" => Some(row.interval.unwrap().upper - row.estimate),
                "single_contrast_C1_upper" => Some(alone.rows[0].interval.unwrap().upper),
                _ if id.starts_with('C') => of_the_contrast(&scheffe, id),
                _ => of_the_table(&layout.summary, &layout.estimates.labels, id),
            }
        });
    }
}

#[test]
fn every_remembered_result_on_four_treatments_comes_out() {
    let FourTreatments { layout, alone, scheffe, bonferroni } = four_treatments(&nist());
    let file = read("from-memory");
    section_agrees(&file, "7.4.3.6", |id| match id {
        "t_0.975_16" => alone.critical,
        "C1_lower_single" => Some(alone.rows[0].interval.unwrap().lower),
        "C1_upper_single" => Some(alone.rows[0].interval.unwrap().upper),
        _ => of_the_table(&layout.summary, &layout.estimates.labels, id),
    });
    section_agrees(&file, "7.4.7.2", |id| match id {
        "F_0.95_3_16" => Some(fisher_f::upper_quantile(0.05, 3.0, 16.0).unwrap()),
        _ => of_the_contrast(&scheffe, id),
    });
    section_agrees(&file, "7.4.7.3", |id| match id {
        "t_0.0125_16" => bonferroni.critical,
        _ => of_the_contrast(&bonferroni, id),
    });
}
