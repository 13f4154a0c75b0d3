//! The overall test of means: the study's F test, the other one beside it, and effect sizes for the whole factor.

use crate::answer::{Answer, Cell, Precision, Row, Table, number};
use crate::methods::effect_size::{WelchEffect, WholeFactor};
use crate::methods::overall::{AnovaTable, NoOverallTest, WelchTest};
use crate::notebook::ask::Ask;
use crate::notebook::kinds::wording::{
    effect, effect_row, effect_with_interval, groups_table, listed, outcome_with_unit, p_cell, p_statement,
    refused, remedy, sizes,
};
use crate::notebook::outcome::Outcome;
use crate::study::{Study, Summary, Variances};
use serde_json::{Value as Json, json};

/// The answer about means, or why there is none.
pub fn outcome(ask: &Ask, study: &Study, summary: &Summary) -> Outcome {
    let labels = &study.levels.labels;
    let classical = AnovaTable::of(labels, summary);
    let welch = WelchTest::of(labels, summary);
    let decisive = match study.variances {
        Variances::Equal => classical.clone().map(Decisive::classical),
        Variances::Unequal => welch.clone().map(Decisive::welch),
    };
    match decisive {
        Ok(decisive) => Means { study, summary, classical, welch, decisive }.outcome(),
        Err(error) => refused(ask, refusal(study, &error)),
    }
}

/// The confidence whose interval excludes 0 exactly when a test that looks at one side rejects at `alpha`.
fn matching_confidence(alpha: f64) -> f64 {
    1.0 - 2.0 * alpha
}

fn refusal(study: &Study, error: &NoOverallTest) -> String {
    let what = match study.variances {
        Variances::Equal => "The F test",
        Variances::Unequal => "Welch's F test",
    };
    let help = match error {
        NoOverallTest::NoEstimates(error) => remedy(error),
        _ => "",
    };
    format!("{what} of \"{}\" cannot be given: {error}.{help}", study.outcome)
}

/// The test that the study's variances ask for.
#[derive(Debug, Clone, Copy)]
struct Decisive {
    name: &'static str,
    f: f64,
    df1: f64,
    df2: f64,
    p: f64,
}

impl Decisive {
    fn classical(table: AnovaTable) -> Self {
        let AnovaTable { f, df_between, df_within, p, .. } = table;
        Self { name: "one-way F test", f, df1: df_between, df2: df_within, p }
    }

    fn welch(test: WelchTest) -> Self {
        Self { name: "Welch's F test", f: test.f, df1: test.df1, df2: test.df2, p: test.p }
    }

    /// "F(2, 7.77) = 2.56, p = 0.140".
    fn in_words(&self, alpha: f64) -> String {
        format!("{}, {}", f_in_words(self.f, self.df1, self.df2), p_statement(self.p, alpha))
    }
}

fn f_in_words(f: f64, df1: f64, df2: f64) -> String {
    format!("F({}, {}) = {}", number::df(df1), number::df(df2), number::statistic(f))
}

/// Everything from which the answer about means is laid out.
struct Means<'a> {
    study: &'a Study,
    summary: &'a Summary,
    classical: Result<AnovaTable, NoOverallTest>,
    welch: Result<WelchTest, NoOverallTest>,
    decisive: Decisive,
}

impl Means<'_> {
    fn outcome(&self) -> Outcome {
        let effects = self.effects();
        let mut answer = Answer::new(self.headline()).with_table(self.tests_table());
        if let (Ok(table), Variances::Equal) = (&self.classical, self.study.variances) {
            answer = answer.with_table(sums_table(self.study, table));
        }
        if let Some(table) = self.effects_table(&effects) {
            answer = answer.with_table(table);
        }
        answer =
            answer.with_table(groups_table(self.study, self.summary)).with_writeup(self.writeup(&effects));
        answer.cautions = self.cautions(&effects);
        Outcome::settled(answer, self.results(&effects))
    }

    fn rejected(&self) -> bool {
        self.decisive.p <= self.study.alpha
    }

    fn headline(&self) -> String {
        let (outcome, factor, k) = (&self.study.outcome, &self.study.factor, self.study.levels.count());
        let test = format!("{}, {}", self.decisive.name, self.decisive.in_words(self.study.alpha));
        if self.rejected() {
            format!("The means of {outcome} differ over the {k} levels of {factor} ({test})")
        } else {
            format!(
                "A difference of the means of {outcome} over the {k} levels of {factor} was not shown ({test})"
            )
        }
    }

    fn tests_table(&self) -> Table {
        let alpha = self.study.alpha;
        let in_use = self.study.variances;
        let role =
            |variances| if in_use == variances { "decides, as the study says" } else { "for comparison" };
        let mut table = Table::new(format!(
            "Tests of equal means of {} over the levels of {}",
            outcome_with_unit(self.study),
            self.study.factor
        ))
        .text_column("Test")
        .number_column("F")
        .number_column("df 1")
        .number_column("df 2")
        .number_column("p")
        .text_column("Role");
        let welch = self.welch.as_ref().map(|test| (test.f, test.df1, test.df2, test.p));
        let classical = self.classical.as_ref().map(|test| (test.f, test.df_between, test.df_within, test.p));
        let rows = [
            ("Welch's F test, variances may differ (Welch 1951)", welch, Variances::Unequal),
            ("One-way F test, one pooled variance", classical, Variances::Equal),
        ];
        for (name, test, variances) in rows {
            let row = match test {
                Ok((f, df1, df2, p)) => Row::new([
                    Cell::text(name),
                    Cell::statistic(f),
                    Cell::df(df1),
                    Cell::df(df2),
                    p_cell(p, alpha),
                    Cell::text(role(variances)),
                ]),
                Err(error) => {
                    table = table.note(format!("{name}: {error}."));
                    let absent = || Cell::absent();
                    let name = Cell::text(name);
                    Row::new([name, absent(), absent(), absent(), absent(), Cell::text("cannot be given")])
                        .quiet()
                }
            };
            table.push(if in_use == variances { row.strong() } else { row });
        }
        table.note("The study decides which test counts; the other is shown so that a reader can see what depends on that choice.")
    }

    fn effects(&self) -> Effects {
        let confidence = matching_confidence(self.study.alpha);
        Effects {
            classical: self.classical.as_ref().ok().map(|table| WholeFactor::of(table, confidence)),
            welch: match (&self.welch, self.study.variances) {
                (Ok(test), Variances::Unequal) => {
                    Some(WelchEffect::of(test, self.summary.total_n(), confidence))
                }
                _ => None,
            },
            confidence,
        }
    }

    fn effects_table(&self, effects: &Effects) -> Option<Table> {
        if effects.classical.is_none() && effects.welch.is_none() {
            return None;
        }
        let percent = number::percent(effects.confidence);
        let mut table = Table::new(format!("How much of the variation goes with {}", self.study.factor))
            .text_column("Effect size")
            .number_column("Estimate")
            .number_column(format!("{percent} CI from"))
            .number_column("to");
        if let Some(welch) = &effects.welch {
            table.push(effect_row("omega squared, from Welch's F", &welch.omega_squared).strong());
            table.push(effect_row("Cohen's f, from Welch's F", &welch.f));
            table = table.note("From Welch's F: the interval takes Welch's F as noncentral F on its own degrees of freedom, an approximation as the test is one. The other rows use one pooled variance.");
        }
        if let Some(classical) = &effects.classical {
            let omega = effect_row("omega squared", &classical.omega_squared);
            table.push(effect_row("eta squared", &classical.eta_squared));
            table.push(if effects.welch.is_none() { omega.strong() } else { omega });
            table.push(effect_row("epsilon squared", &classical.epsilon_squared));
            table.push(effect_row("Cohen's f", &classical.f));
            table = table.note("Eta, omega and epsilon squared estimate one and the same population share and therefore have the same interval. Eta squared overestimates it in small samples; the other two can come out below 0, which is read as 0.");
        }
        if !effects.have_intervals() {
            return Some(table);
        }
        Some(table.note(format!(
            "Intervals of {percent} invert the noncentral F (Steiger 2004). An F test looks at one side, so this is the interval that excludes 0 exactly when its test rejects at {}.",
            number::percent(self.study.alpha)
        )))
    }

    fn writeup(&self, effects: &Effects) -> String {
        let study = self.study;
        let result = self.decisive.in_words(study.alpha);
        let assumption = match study.variances {
            Variances::Equal => "one pooled variance",
            Variances::Unequal => "variances not assumed equal",
        };
        let verdict = if self.rejected() { "differed" } else { "were not shown to differ" };
        let size = match (&effects.welch, &effects.classical) {
            (Some(welch), _) => {
                let name = "omega squared (from Welch's F)";
                format!(", {}", effect_with_interval(name, &welch.omega_squared, effects.confidence))
            }
            (None, Some(classical)) => {
                let size = &classical.omega_squared;
                format!(", {}", effect_with_interval("omega squared", size, effects.confidence))
            }
            (None, None) => String::new(),
        };
        let n = self.summary.groups.iter().map(|group| group.n);
        let test = match study.variances {
            Variances::Equal => "the one-way F test",
            Variances::Unequal => "Welch's F test",
        };
        format!(
            "Mean {} was compared over {} with {test} ({assumption}) at {}. The means {verdict}, {result}{size}.",
            outcome_with_unit(study),
            sizes(&study.levels.labels, n),
            number::percent(study.alpha),
        )
    }

    fn cautions(&self, effects: &Effects) -> Vec<String> {
        let mut cautions = Vec::new();
        if !self.rejected() {
            let size = effects.welch.as_ref().map(|effect| effect.omega_squared);
            let size = size.or(effects.classical.as_ref().map(|effect| effect.omega_squared));
            let reach = size.and_then(|size| size.upper).map(|upper| {
                let percent = number::percent(effects.confidence);
                if upper == 0.0 {
                    return format!(
                        " F is so small that the {percent} interval of omega squared has shrunk to 0: that is a chance result of these data or a sign of values that are not independent, and no proof that nothing differs."
                    );
                }
                format!(" The {percent} interval of omega squared reaches up to {}.", effect(upper))
            });
            cautions.push(format!("Not shown to differ does not mean equal.{}", reach.unwrap_or_default()));
        }
        if let (Ok(classical), Ok(welch)) = (&self.classical, &self.welch)
            && (classical.p <= self.study.alpha) != (welch.p <= self.study.alpha)
        {
            cautions.push("The two F tests decide differently here. The one that the study names counts, if it was named before the data were seen; choosing by the result would not keep the error rate.".to_owned());
        }
        cautions.extend(spread_caution(self.study, self.summary));
        cautions.extend(small_caution(self.study, self.summary));
        cautions
    }

    fn results(&self, effects: &Effects) -> Json {
        let Decisive { f, df1, df2, p, .. } = self.decisive;
        let mut results = json!({ "test": "means", "variances": self.study.variances, "F": f, "df1": df1, "df2": df2, "p": p });
        let mut put = |key: &str, value: Json| {
            results[key] = value;
        };
        if let Ok(table) = &self.classical {
            for (key, value) in [
                ("ss_between", table.ss_between),
                ("ss_within", table.ss_within),
                ("ms_between", table.ms_between),
                ("ms_within", table.ms_within),
            ] {
                put(key, value.into());
            }
            let (df1, df2) = (table.df_between, table.df_within);
            put("equal_variances", json!({ "F": table.f, "df1": df1, "df2": df2, "p": table.p }));
        }
        if let Ok(test) = &self.welch {
            put("welch", json!(test));
        }
        if let Some(classical) = &effects.classical {
            put("eta_squared", json!(classical.eta_squared));
            put("omega_squared", json!(classical.omega_squared));
            put("epsilon_squared", json!(classical.epsilon_squared));
            put("f", json!(classical.f));
        }
        if let Some(welch) = &effects.welch {
            put("welch_omega_squared", json!(welch.omega_squared));
            put("welch_f", json!(welch.f));
        }
        put("effect_confidence", effects.confidence.into());
        put("alpha", self.study.alpha.into());
        results
    }
}

/// Effect sizes that go with the tests that could be given.
struct Effects {
    classical: Option<WholeFactor>,
    welch: Option<WelchEffect>,
    confidence: f64,
}

impl Effects {
    fn have_intervals(&self) -> bool {
        let welch = self.welch.as_ref().and_then(|effect| effect.omega_squared.upper);
        welch.or(self.classical.as_ref().and_then(|effect| effect.eta_squared.upper)).is_some()
    }
}

fn sums_table(study: &Study, table: &AnovaTable) -> Table {
    let precision = Precision::from_spread(table.ms_within / 100.0);
    let square = |value: f64| Cell::estimate(value, precision);
    Table::new(format!("One-way analysis of variance of {}", outcome_with_unit(study)))
        .text_column("Source")
        .number_column("SS")
        .number_column("df")
        .number_column("MS")
        .number_column("F")
        .number_column("p")
        .row(Row::new([
            Cell::text(format!("between the levels of {}", study.factor)),
            square(table.ss_between),
            Cell::df(table.df_between),
            square(table.ms_between),
            Cell::statistic(table.f),
            p_cell(table.p, study.alpha),
        ]))
        .row(Row::new([
            Cell::text("within the levels"),
            square(table.ss_within),
            Cell::df(table.df_within),
            square(table.ms_within),
        ]))
        .row(
            Row::new([
                Cell::text("in all"),
                square(table.ss_total()),
                Cell::df(table.df_between + table.df_within),
            ])
            .total(),
        )
}

/// Pooling over unequal spread and unequal sizes, where the study pools.
fn spread_caution(study: &Study, summary: &Summary) -> Option<String> {
    if study.variances != Variances::Equal {
        return None;
    }
    let spread: Vec<(f64, usize)> =
        summary.groups.iter().filter_map(|group| Some((group.sd()?, group.n))).collect();
    let widest = spread.iter().copied().max_by(|one, other| one.0.total_cmp(&other.0))?;
    let narrowest = spread.iter().copied().min_by(|one, other| one.0.total_cmp(&other.0))?;
    if widest.0 < 2.0 * narrowest.0 {
        return None;
    }
    let effect = match widest.1.cmp(&narrowest.1) {
        std::cmp::Ordering::Less => {
            " The smaller group varies more, which makes the F test with one pooled variance reject too often."
        }
        std::cmp::Ordering::Greater => {
            " The larger group varies more, which makes the F test with one pooled variance reject too rarely."
        }
        std::cmp::Ordering::Equal => "",
    };
    Some(format!(
        "The largest standard deviation is at least twice the smallest.{effect} Welch's test does without one common variance."
    ))
}

/// Groups so small that Welch's approximation is rough.
fn small_caution(study: &Study, summary: &Summary) -> Option<String> {
    let small: Vec<String> = study
        .levels
        .labels
        .iter()
        .zip(&summary.groups)
        .filter(|(_, group)| group.n < 6)
        .map(|(level, group)| format!("{level} (n = {})", group.n))
        .collect();
    if small.is_empty() {
        return None;
    }
    let consequence = match study.variances {
        Variances::Unequal => {
            "Welch's test is an approximation that is rough below about 6 observations a group"
        }
        Variances::Equal => {
            "with so few values the F test leans on normal distributions that cannot be checked"
        }
    };
    let which = if small.len() > 8 {
        format!("{} groups have fewer than 6 observations", small.len())
    } else {
        listed(small.into_iter())
    };
    Some(format!("Small groups: {which}; {consequence}."))
}
