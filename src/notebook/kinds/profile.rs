//! Describes each group and checks the assumptions.

use super::wording::{left_out, listed, outcome_with_unit, sentence};
use super::{Kind, Read};
use crate::answer::figure::{self, Groups, Span};
use crate::answer::{Answer, Cell, Figure, Precision, Row, Table, number};
use crate::methods::profile::{GroupProfile, NoCheck, Profile};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece};
use crate::notebook::outcome::Outcome;
use crate::study::{Observed, Study};
use serde_json::{Value as Json, json};

const SHOW: &[Choice] = &[
    Choice { value: "groups", shown: "the groups" },
    Choice { value: "assumptions", shown: "the assumptions" },
    Choice { value: "figure", shown: "the figure" },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Describe each group and look at the assumptions",
    fields: &[
        Field::new("study", Holds::Cell(&[Kind::Study]), "study", "The study to describe").required(),
        Field::new("show", Holds::Choices(SHOW), "what to show", "Any of groups, assumptions, figure")
            .or("groups, assumptions, figure"),
    ],
    sentence: &[
        Piece::Words("Describe each group of"),
        Piece::Blank("study"),
        Piece::Words("and show"),
        Piece::Blank("show"),
        Piece::Words("."),
    ],
    starts_with: "",
};

pub fn evaluate(ask: &Ask, read: &Read) -> Outcome {
    let mut reader = ask.reader();
    let show = reader.choices("show");
    if let Err(problems) = reader.finish(()) {
        return Outcome::mend(problems);
    }
    let Some(study) = read.study() else { return Outcome::mend(Vec::new()) };
    let Some(profile) = Profile::of(study) else { return planned(study) };
    let shown = |part: &str| show.is_empty() || show.contains(&part);
    let mut answer = Answer::new(headline(study, &profile));
    if shown("groups") {
        answer = answer.with_table(groups_table(study, &profile));
    }
    if shown("figure") {
        answer = answer.with_figure(values_figure(study, &profile));
    }
    if shown("assumptions") {
        answer = answer.with_table(checks_table(&profile));
    }
    answer = answer.with_writeup(writeup(study, &profile));
    answer.cautions = cautions(study, &profile);
    Outcome::settled(answer, results(&profile))
}

fn planned(study: &Study) -> Outcome {
    let levels = listed(study.levels.labels.iter().cloned());
    let answer = Answer::new(format!("Planned: {} described for {levels}", study.outcome));
    Outcome::plan(answer, json!({ "levels": study.levels.labels }))
}

fn headline(study: &Study, profile: &Profile) -> String {
    let n: usize = profile.groups.iter().map(|group| group.n).sum();
    let precision = mean_precision(profile);
    let means = profile.groups.iter().filter_map(|group| Some((group.moments.mean?, &group.level)));
    let lowest = means.clone().min_by(|one, other| one.0.total_cmp(&other.0));
    let highest = means.max_by(|one, other| one.0.total_cmp(&other.0));
    let (Some(lowest), Some(highest)) = (lowest, highest) else {
        return format!("No values of {} yet", study.outcome);
    };
    let groups = if profile.groups.len() == 1 {
        "1 group".to_owned()
    } else {
        format!("{} groups", profile.groups.len())
    };
    let described = format!("{} values of {} in {groups}", number::count(n), study.outcome);
    let (least, most) = (number::estimate(lowest.0, precision), number::estimate(highest.0, precision));
    if least == most {
        return format!("{described}; all means {least} as far as shown");
    }
    format!("{described}; means from {least} ({}) to {most} ({})", lowest.1, highest.1)
}

/// One precision for all means: two digits of their standard errors.
fn mean_precision(profile: &Profile) -> Precision {
    Precision::for_column(profile.groups.iter().filter_map(|group| group.moments.se))
}

fn groups_table(study: &Study, profile: &Profile) -> Table {
    let percent = number::percent(profile.confidence);
    let precision = mean_precision(profile);
    let has_order = profile.groups.iter().any(|group| group.order.is_some());
    let mut table = Table::new(format!("{} by {}", outcome_with_unit(study), study.factor))
        .text_column("Level")
        .number_column("n")
        .number_column("Missing")
        .number_column("Mean")
        .number_column("SD")
        .number_column("SE")
        .number_column(format!("{percent} CI of the mean"));
    if has_order {
        for heading in ["Min", "Lower quartile", "Median", "Upper quartile", "Max"] {
            table = table.number_column(heading);
        }
    }
    let observed = Precision::for_values(&extremes(profile));
    for group in &profile.groups {
        table.push(group_row(group, precision, observed));
    }
    if let Some(sd) = profile.pooled_sd {
        let shown = number::estimate(sd, precision.finer());
        table = table.note(format!("SD pooled over all groups: {shown}."));
    }
    table = table.note(format!("SD with divisor n - 1. The {percent} interval of each mean uses the group's own SD and Student's t on n - 1 degrees of freedom; it is not adjusted for the number of groups."));
    if has_order {
        table = table.note("Quartiles by linear interpolation between the ordered values, position (n - 1)p (Hyndman and Fan 1996, definition 7).");
    }
    match left_out(study) {
        Some(note) => table.note(note),
        None => table,
    }
}

fn extremes(profile: &Profile) -> Vec<f64> {
    profile.groups.iter().filter_map(|group| group.order).flat_map(|order| [order.min, order.max]).collect()
}

fn group_row(group: &GroupProfile, precision: Precision, observed: Precision) -> Row {
    let cell = |value: Option<f64>, precision: Precision| {
        value.map_or_else(Cell::absent, |value| Cell::estimate(value, precision))
    };
    let moments = &group.moments;
    let interval = moments.lower.zip(moments.upper);
    let mut cells = vec![
        Cell::text(group.level.clone()),
        Cell::count(group.n),
        Cell::count(group.missing),
        cell(moments.mean, precision),
        cell(moments.sd, precision.finer()),
        cell(moments.se, precision.finer()),
        interval.map_or_else(Cell::absent, |(lower, upper)| Cell::interval(lower, upper, precision)),
    ];
    if let Some(order) = group.order {
        cells.extend([
            cell(Some(order.min), observed),
            cell(Some(order.lower_quartile), observed.finer()),
            cell(Some(order.median), observed.finer()),
            cell(Some(order.upper_quartile), observed.finer()),
            cell(Some(order.max), observed),
        ]);
    }
    Row::new(cells)
}

fn values_figure(study: &Study, profile: &Profile) -> Figure {
    let groups = profile.groups.iter().enumerate().map(|(i, group)| figure::Group {
        label: group.level.clone(),
        values: match &study.observed {
            Observed::Sample(sample) => {
                sample.groups[i].iter().map(|offset| sample.origin + offset).collect()
            }
            Observed::Plan | Observed::Summary(_) => Vec::new(),
        },
        mean: group.moments.mean,
        interval: group.moments.lower.zip(group.moments.upper).map(|(lower, upper)| Span { lower, upper }),
        letters: None,
    });
    figure::groups(&Groups {
        title: format!("{} by {}", study.outcome, study.factor),
        axis: outcome_with_unit(study),
        bars: format!("Bars: mean with its {} interval, own SD.", number::percent(profile.confidence)),
        letters: String::new(),
        groups: groups.collect(),
    })
}

fn checks_table(profile: &Profile) -> Table {
    let table = Table::new("Checks of the assumptions: information, no switch for the other cells")
        .text_column("Check")
        .text_column("Question")
        .text_column("Statistic")
        .number_column("p");
    let spread = |test: &Result<crate::methods::profile::SpreadTest, NoCheck>| {
        test.as_ref().map(|test| (f_in_words(test.f, test.df1, test.df2), test.p)).map_err(Clone::clone)
    };
    let bartlett = profile.bartlett.as_ref().map_err(Clone::clone).map(|test| {
        (format!("chi-squared({}) = {}", number::df(test.df), number::statistic(test.chi2)), test.p)
    });
    let normal = profile.shapiro_wilk.as_ref().map_err(Clone::clone);
    let normal = normal.map(|test| (format!("W = {}", number::fixed(test.w, 3)), test.p));
    let rows = [
        ("Levene, distances from the means", "Equal spread?", spread(&profile.levene)),
        ("Brown-Forsythe, distances from the medians", "Equal spread?", spread(&profile.brown_forsythe)),
        ("Bartlett", "Equal spread, given normal values?", bartlett),
        ("Shapiro-Wilk on the residuals", "Normal residuals?", normal),
    ];
    let mut table = rows.into_iter().fold(table, |table, (name, question, result)| match result {
        Ok((statistic, p)) => {
            table.row([Cell::text(name), Cell::text(question), Cell::text(statistic), Cell::p_value(p)])
        }
        Err(error) => table
            .row(Row::new([Cell::text(name), Cell::text(question), Cell::absent(), Cell::absent()]).quiet())
            .note(format!("{name}: {}", sentence(&format!("not given, because {error}")))),
    });
    table = table.note("A large p does not show that an assumption holds, and choosing a test by these checks would distort its error rate: the study's choice of variances stands.");
    table
}

fn f_in_words(f: f64, df1: f64, df2: f64) -> String {
    format!("F({}, {}) = {}", number::df(df1), number::df(df2), number::statistic(f))
}

fn writeup(study: &Study, profile: &Profile) -> String {
    let precision = mean_precision(profile);
    let percent = number::percent(profile.confidence);
    let groups = profile.groups.iter().map(|group| {
        let mut words = format!("{} n = {}", group.level, number::count(group.n));
        if let Some(mean) = group.moments.mean {
            words.push_str(&format!(", mean {}", number::estimate(mean, precision)));
        }
        if let Some(sd) = group.moments.sd {
            words.push_str(&format!(", SD {}", number::estimate(sd, precision.finer())));
        }
        if let Some((lower, upper)) = group.moments.lower.zip(group.moments.upper) {
            words.push_str(&format!(", {percent} CI {}", number::interval_in_words(lower, upper, precision)));
        }
        words
    });
    format!("{} by {}: {}.", outcome_with_unit(study), study.factor, groups.collect::<Vec<_>>().join("; "))
}

fn cautions(study: &Study, profile: &Profile) -> Vec<String> {
    let mut cautions = Vec::new();
    let small = profile.groups.iter().filter(|group| group.n < 5);
    let small: Vec<String> = small.map(|group| format!("{} (n = {})", group.level, group.n)).collect();
    if !small.is_empty() {
        let which =
            if small.len() > 8 { format!("{} groups", small.len()) } else { listed(small.into_iter()) };
        cautions.push(format!("Small groups: {which}. Their means and SDs are uncertain, and no check can tell whether the assumptions hold."));
    }
    let sizes = || profile.groups.iter().map(|group| group.n);
    if let (Some(least), Some(most)) = (sizes().min(), sizes().max())
        && least > 0
        && most >= 3 * least
    {
        cautions.push(format!("Very unequal groups: from {least} to {most} values. Pooling one standard deviation is then risky where the groups vary differently; the study's variances say whether that is done."));
    }
    let sds = || profile.groups.iter().filter_map(|group| group.moments.sd);
    let (narrowest, widest) = (sds().fold(f64::INFINITY, f64::min), sds().fold(0.0, f64::max));
    if narrowest > 0.0 && narrowest.is_finite() && widest >= 2.0 * narrowest {
        let ratio = number::fixed(widest / narrowest, 1);
        cautions.push(format!("The groups vary differently: the largest SD is {ratio} times the smallest."));
    }
    if matches!(study.observed, Observed::Summary(_)) {
        cautions.push("Only sizes, means and SDs are known: medians, quartiles, the checks on single values and a figure of the values cannot be given.".to_owned());
    }
    cautions
}

fn results(profile: &Profile) -> Json {
    let mut results = json!({ "groups": profile.groups, "confidence": profile.confidence });
    let mut put = |key: &str, value: Option<Json>| {
        if let Some(value) = value {
            results[key] = value;
        }
    };
    put("pooled_sd", profile.pooled_sd.map(Json::from));
    put("levene", profile.levene.as_ref().ok().map(|test| json!(test)));
    put("brown_forsythe", profile.brown_forsythe.as_ref().ok().map(|test| json!(test)));
    put("bartlett", profile.bartlett.as_ref().ok().map(|test| json!(test)));
    put("shapiro_wilk", profile.shapiro_wilk.as_ref().ok().map(|test| json!(test)));
    results
}
