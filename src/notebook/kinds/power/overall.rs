//! The answer to a power question about the overall F test.

use super::{Find, PowerAsk, eta_squared};
use crate::answer::figure::{self, Curve, Point, Span};
use crate::answer::{Answer, Cell, Figure, Precision, Row, Table, number};
use crate::methods::power::{CurvePoint, MAX_PER_GROUP, NoPower, OverallDesign};
use crate::notebook::ask::Ask;
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::kinds::wording::{listed, sentence};
use crate::notebook::outcome::Outcome;
use serde_json::{Map, Value as Json, json};

/// How many sizes the curve shows at most.
const CURVE_POINTS: usize = 25;

/// The whole plan: what was given and what was found.
struct Plan<'a> {
    ask: &'a PowerAsk,
    f: f64,
    per_group: usize,
    power: f64,
    power_one_fewer: Option<f64>,
    /// The smallest f that this size finds with the target power.
    smallest: f64,
    curve: Vec<CurvePoint>,
}

/// The answer.
///
/// # Errors
/// [`NoPower`] where the question has none.
pub fn outcome(ask: &PowerAsk) -> Result<Outcome, NoPower> {
    let plan = plan(ask)?;
    let mut answer = Answer::new(plan.headline())
        .with_table(plan.plan_table())
        .with_table(plan.effect_table())
        .with_figure(plan.figure())
        .with_writeup(plan.writeup());
    answer.cautions = plan.cautions();
    Ok(Outcome::settled(answer, plan.results()))
}

/// A question without an answer, said at the field that it depends on.
pub fn refused(ask: &Ask, read: &PowerAsk, error: &NoPower) -> Outcome {
    let field = match error {
        NoPower::Target { .. } | NoPower::TargetNotAboveAlpha { .. } => "target",
        NoPower::Alpha { .. } => "alpha",
        NoPower::TooFewGroups { .. } | NoPower::TooManyGroups { .. } => "groups",
        NoPower::TooFewPerGroup { .. } | NoPower::TooManyPerGroup { .. } => "n",
        _ => match read.find {
            Find::SmallestEffect => "n",
            _ => ["effect", "eta_squared", "means"]
                .into_iter()
                .find(|field| ask.given(field))
                .unwrap_or("effect"),
        },
    };
    Outcome::mend(vec![Diagnostic::new(sentence(&error.to_string()), ask.span(field), Some(field))])
}

fn plan(ask: &PowerAsk) -> Result<Plan<'_>, NoPower> {
    let design = OverallDesign::new(ask.groups, ask.alpha)?;
    // The reader has seen to it that what is asked from is there; an absent one is refused as 0 would be.
    let n = ask.n.unwrap_or(0);
    let given = ask.effect.as_ref().map_or(0.0, |effect| effect.0);
    let (f, per_group, power, power_one_fewer) = match ask.find {
        Find::PerGroup => {
            let size = design.sample_size(given, ask.target)?;
            (given, size.per_group, size.power, size.power_one_fewer)
        }
        Find::Power => (given, n, design.power(n, given)?, None),
        Find::SmallestEffect => {
            let f = design.smallest_effect(n, ask.target)?;
            (f, n, design.power(n, f)?, None)
        }
    };
    let smallest = match ask.find {
        Find::SmallestEffect => f,
        _ => design.smallest_effect(per_group, ask.target)?,
    };
    let up_to = (2 * per_group).clamp(10, MAX_PER_GROUP);
    let curve = design.curve(f, up_to, CURVE_POINTS)?;
    Ok(Plan { ask, f, per_group, power, power_one_fewer, smallest, curve })
}

/// A power with three decimals, ">0.999" where it would round to 1.
fn shown_power(power: f64) -> String {
    if power > 0.9995 && power < 1.0 { ">0.999".to_owned() } else { number::fixed(power, 3) }
}

fn power_cell(power: f64) -> Cell {
    Cell::number(shown_power(power), power)
}

/// Three significant digits of an effect size.
fn three_digits(value: f64) -> String {
    number::estimate(value, Precision::from_spread(value / 10.0))
}

impl Plan<'_> {
    fn total(&self) -> usize {
        self.per_group * self.ask.groups
    }

    fn effect_words(&self) -> String {
        format!("f = {}", three_digits(self.f))
    }

    fn size_words(&self) -> String {
        format!(
            "{} in each of {} groups, {} in all",
            number::count(self.per_group),
            self.ask.groups,
            number::count(self.total())
        )
    }

    fn headline(&self) -> String {
        let (size, effect) = (self.size_words(), self.effect_words());
        let target = number::plain(self.ask.target);
        match self.ask.find {
            Find::PerGroup => {
                format!("{size}: power {} (target {target}) for {effect}", shown_power(self.power))
            }
            Find::Power => format!("Power {} with {size}, for {effect}", shown_power(self.power)),
            Find::SmallestEffect => {
                format!("{effect} is the smallest effect that {size}, find with power {target}")
            }
        }
    }

    fn plan_table(&self) -> Table {
        let mut table =
            Table::new("Plan for the one-way F test, equal group sizes (power from the noncentral F)")
                .text_column("Quantity")
                .number_column("Value");
        let count = |words: &str, n: usize| Row::new([Cell::text(words), Cell::count(n)]);
        let found = |row: Row, find| if self.ask.find == find { row.strong() } else { row };
        table.push(count("groups", self.ask.groups));
        table.push(found(count("n per group", self.per_group), Find::PerGroup));
        table.push(found(count("n in all", self.total()), Find::PerGroup));
        table.push(Row::new([
            Cell::text("alpha"),
            Cell::number(number::percent(self.ask.alpha), self.ask.alpha),
        ]));
        if self.ask.find != Find::Power {
            let target = Cell::number(number::plain(self.ask.target), self.ask.target);
            table.push(Row::new([Cell::text("target power"), target]));
        }
        table.push(found(Row::new([Cell::text("power"), power_cell(self.power)]), Find::Power));
        if let Some(power) = self.power_one_fewer {
            table.push(Row::new([Cell::text("power with one fewer per group"), power_cell(power)]));
        }
        let noncentrality = self.total() as f64 * self.f * self.f;
        let shown = Cell::estimate(noncentrality, Precision::decimals(3));
        table.push(Row::new([Cell::text("noncentrality, N times f squared"), shown]));
        table
    }

    fn effect_table(&self) -> Table {
        let mut table = Table::new("The effect in other terms")
            .text_column("Effect")
            .number_column("Cohen's f")
            .number_column("eta squared");
        let row = |words: String, f: f64| {
            let eta = eta_squared(f);
            Row::new([
                Cell::text(words),
                Cell::number(three_digits(f), f),
                Cell::number(three_digits(eta), eta),
            ])
        };
        if let Some((f, given)) = &self.ask.effect {
            table.push(row(format!("planned for, {given}"), *f));
        }
        let target = number::plain(self.ask.target);
        let words =
            format!("smallest that {} per group find with power {target}", number::count(self.per_group));
        let smallest = row(words, self.smallest);
        table.push(if self.ask.find == Find::SmallestEffect { smallest.strong() } else { smallest });
        table.note("Eta squared = f squared / (1 + f squared): the share of the variance between equally large groups. f is the SD of the true means over the SD inside the groups.")
    }

    fn figure(&self) -> Figure {
        let points = self.curve.iter().map(|point| Point { x: point.per_group as f64, y: point.power });
        let needs_target = self.ask.find != Find::Power;
        figure::curve(&Curve {
            title: format!("Power against group size for {}", self.effect_words()),
            x_axis: "Observations per group".to_owned(),
            y_axis: "Power".to_owned(),
            points: points.collect(),
            y_range: Some(Span { lower: 0.0, upper: 1.0 }),
            target: needs_target.then_some(self.ask.target),
            target_words: if needs_target {
                format!("target {}", number::plain(self.ask.target))
            } else {
                String::new()
            },
            chosen: Some(Point { x: self.per_group as f64, y: self.power }),
            chosen_words: format!(
                "{} per group: power {}",
                number::count(self.per_group),
                shown_power(self.power)
            ),
        })
    }

    fn writeup(&self) -> String {
        let test = format!(
            "one-way F test over {} groups of equal size (alpha = {}, equal variances)",
            self.ask.groups,
            number::percent(self.ask.alpha)
        );
        let effect = format!("{} (eta squared = {})", self.effect_words(), three_digits(eta_squared(self.f)));
        let (n, all) = (number::count(self.per_group), number::count(self.total()));
        let target = number::plain(self.ask.target);
        let power = shown_power(self.power);
        match self.ask.find {
            Find::PerGroup => format!(
                "To find an effect of {effect} with a power of at least {target} by a {test}, {n} observations per group are needed, {all} in all; the power is then {power}."
            ),
            Find::Power => format!(
                "With {n} observations per group, {all} in all, a {test} finds an effect of {effect} with power {power}."
            ),
            Find::SmallestEffect => format!(
                "With {n} observations per group, {all} in all, the smallest effect that a {test} finds with power {target} is {effect}."
            ),
        }
    }

    fn cautions(&self) -> Vec<String> {
        let mut cautions = vec![
            "This is the power to find some difference among the groups. To show which groups differ usually needs more.".to_owned(),
            "It supposes equal variances, equal group sizes and no loss of participants; enrol more where some will drop out.".to_owned(),
        ];
        if self.ask.find != Find::SmallestEffect {
            cautions.push("The effect is an assumption: take it from what would matter, not from the estimate of one small study, and look at the curve for what happens if it is smaller.".to_owned());
        }
        if self.per_group < 6 {
            cautions.push("With so few observations per group the F test leans on normal distributions that nobody will be able to check.".to_owned());
        }
        if !self.ask.unused.is_empty() {
            let fields = listed(self.ask.unused.iter().map(|field| format!("\"{field}\"")));
            cautions.push(format!("Not used for this question: {fields}, which stand in the cell's text."));
        }
        cautions
    }

    fn results(&self) -> Json {
        let each = (1..=self.ask.groups).map(|i| (format!("group {i}"), Json::from(self.per_group)));
        let curve: Vec<Json> = self.curve.iter().map(|point| json!([point.per_group, point.power])).collect();
        let mut results = json!({
            "question": "overall",
            "groups": self.ask.groups,
            "n": each.collect::<Map<String, Json>>(),
            "n_per_group": self.per_group,
            "total": self.total(),
            "alpha": self.ask.alpha,
            "target": self.ask.target,
            "power": { "estimate": self.power },
            "f": self.f,
            "eta_squared": eta_squared(self.f),
            "minimum_effect": self.smallest,
            "curve": curve,
        });
        if let Some(power) = self.power_one_fewer {
            results["power_one_fewer"] = power.into();
        }
        results
    }
}
