//! How many participants the next study needs.

mod overall;

use crate::answer::number;
use crate::methods::power::{NoPower, eta_squared_of_f, f_of_eta_squared, f_of_means};
use crate::notebook::ask::{Ask, Reader};
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece, choice};
use crate::notebook::outcome::Outcome;

const QUESTIONS: &[Choice] = &[Choice { value: "overall", shown: "the overall test" }];
const FIND: &[Choice] = &[choice("n per group"), choice("power"), choice("smallest effect")];

pub const TABLE: KindTable = KindTable {
    purpose: "Find how many participants the next study needs, its power, or the smallest effect it can find",
    fields: &[
        Field::new("question", Holds::Choice(QUESTIONS), "question", "What the study is sized for")
            .or("the overall test"),
        Field::new(
            "find",
            Holds::Choice(FIND),
            "what to find",
            "The one of n, power and effect that is asked for",
        )
        .or("n per group"),
        Field::new("groups", Holds::Whole(2, 200), "number of groups", "How many groups the study has"),
        Field::new(
            "effect",
            Holds::Above(0.0),
            "effect f",
            "Cohen's f: the SD of the true means over the SD inside the groups",
        )
        .or("not given"),
        Field::new(
            "eta_squared",
            Holds::Between(0.0, 1.0),
            "eta squared",
            "The share of the variance that lies between the groups",
        )
        .or("not given"),
        Field::new(
            "means",
            Holds::Numbers,
            "expected means",
            "The true means that are expected, one a group",
        )
        .or("not given"),
        Field::new(
            "sd",
            Holds::Above(0.0),
            "expected SD",
            "The expected standard deviation inside the groups",
        )
        .or("not given"),
        Field::new("n", Holds::Whole(2, 1_000_000), "n per group", "Participants in each group"),
        Field::new("target", Holds::Between(0.0, 1.0), "target power", "The power that is wanted").or("0.8"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The error rate of the test").or("0.05"),
    ],
    sentence: &[
        Piece::Words("For"),
        Piece::Blank("question"),
        Piece::Words("of"),
        Piece::Blank("groups"),
        Piece::Words("groups, find the"),
        Piece::Blank("find"),
        Piece::Words("at error rate"),
        Piece::Blank("alpha"),
        Piece::When(
            "find",
            &["n per group", "smallest effect"],
            &[Piece::Words("and power"), Piece::Blank("target")],
        ),
        Piece::When(
            "find",
            &["power", "smallest effect"],
            &[Piece::Words("with"), Piece::Blank("n"), Piece::Words("in each group")],
        ),
        Piece::When(
            "find",
            &["n per group", "power"],
            &[
                Piece::Words(". The effect, in one of these ways: f"),
                Piece::Blank("effect"),
                Piece::Words("; eta squared"),
                Piece::Blank("eta_squared"),
                Piece::Words("; expected means"),
                Piece::Blank("means"),
                Piece::Words("with SD"),
                Piece::Blank("sd"),
            ],
        ),
        Piece::Words("."),
    ],
    starts_with: "",
};

/// Which of the three is asked for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Find {
    PerGroup,
    Power,
    SmallestEffect,
}

/// What the cell asks, read and checked.
#[derive(Debug, Clone)]
struct PowerAsk {
    find: Find,
    groups: usize,
    /// Cohen's f with how it was given, in words; `None` when the effect is asked for.
    effect: Option<(f64, String)>,
    n: Option<usize>,
    target: f64,
    alpha: f64,
    /// Fields that stand in the text and play no part.
    unused: Vec<&'static str>,
}

pub fn evaluate(ask: &Ask) -> Outcome {
    let mut reader = ask.reader();
    let read = read(&mut reader);
    match (reader.finish(()), read) {
        (Ok(()), Some(read)) => match overall::outcome(&read) {
            // Shown in the sentence while the number of groups follows from the means.
            Ok(outcome) => outcome.with_in_force("groups", read.groups.to_string()),
            Err(error) => overall::refused(ask, &read, &error),
        },
        (Err(problems), _) => Outcome::mend(problems),
        (Ok(()), None) => Outcome::mend(Vec::new()),
    }
}

/// The ask, or `None` with what is missing noted in the reader.
fn read(reader: &mut Reader) -> Option<PowerAsk> {
    reader.choice("question");
    let find = match reader.choice("find") {
        Some("power") => Find::Power,
        Some("smallest effect") => Find::SmallestEffect,
        _ => Find::PerGroup,
    };
    let target = reader.number("target").unwrap_or(0.8);
    let alpha = reader.number("alpha").unwrap_or(0.05);
    let n = reader.number("n").map(|n| n as usize);
    let means =
        reader.numbers("means").map(|means| means.into_iter().map(|mean| mean.value).collect::<Vec<_>>());
    let groups = group_count(reader, means.as_deref());
    let given = effect(reader, means.as_deref());
    if find == Find::SmallestEffect {
        if n.is_none() && !reader.ask().given("n") {
            reader.problem("n", "The smallest effect depends on the group size. Add n = the number in each group, such as n = 20.");
        }
    } else if given.is_none() && reader.problems().is_empty() {
        reader.problem(
            "effect",
            "The power depends on the effect. Add one of effect = 0.25 (Cohen's f), eta_squared = 0.06, or means = [...] with sd = ...",
        );
    }
    if find == Find::Power && n.is_none() && !reader.ask().given("n") {
        reader.problem(
            "n",
            "The power depends on the group size. Add n = the number in each group, such as n = 20.",
        );
    }
    let unused = unused(reader.ask(), find);
    let effect = given.filter(|_| find != Find::SmallestEffect);
    Some(PowerAsk { find, groups: groups?, effect, n, target, alpha, unused })
}

fn group_count(reader: &mut Reader, means: Option<&[f64]>) -> Option<usize> {
    let groups = reader.number("groups").map(|groups| groups as usize);
    match (groups, means) {
        (Some(groups), Some(means)) if groups != means.len() => {
            let message = format!(
                "There are {} means for {groups} groups. Give one mean for each group, or leave groups out.",
                means.len()
            );
            reader.problem("means", message);
            None
        }
        (Some(groups), _) => Some(groups),
        (None, Some(means)) => Some(means.len()),
        (None, None) => {
            if !reader.ask().given("groups") {
                reader.problem(
                    "groups",
                    "The number of groups is missing. Add groups = 3, or the expected means.",
                );
            }
            None
        }
    }
}

/// Cohen's f from the one way in which it was given.
fn effect(reader: &mut Reader, means: Option<&[f64]>) -> Option<(f64, String)> {
    let ways = ["effect", "eta_squared", "means"].into_iter().filter(|way| reader.ask().given(way));
    let ways: Vec<&str> = ways.collect();
    if let [first, second, ..] = ways[..] {
        let message = format!(
            "The effect is given twice, as {first} and as {second}. Keep the one that is meant and remove the other."
        );
        reader.problem(second, message);
        return None;
    }
    match ways.first().copied()? {
        "effect" => reader.number("effect").map(|f| (f, "given as f".to_owned())),
        "eta_squared" => {
            let eta = reader.number("eta_squared")?;
            let words = format!("given as eta squared = {}", number::plain(eta));
            noted(reader, "eta_squared", f_of_eta_squared(eta)).map(|f| (f, words))
        }
        _ => {
            if !reader.ask().given("sd") {
                reader.problem("means", "Means need the standard deviation inside the groups. Add sd = ...");
            }
            let sd = reader.number("sd")?;
            let means = means?;
            let shown: Vec<String> = means.iter().map(|mean| number::plain(*mean)).collect();
            let words = format!("given as means {} with SD {}", shown.join(", "), number::plain(sd));
            let f = noted(reader, "means", f_of_means(means, sd))?;
            if f == 0.0 {
                reader.problem("means", "The expected means are all equal, so there is no effect to find. Give means that differ.");
                return None;
            }
            Some((f, words))
        }
    }
}

fn noted(reader: &mut Reader, field: &str, result: Result<f64, NoPower>) -> Option<f64> {
    match result {
        Ok(value) => Some(value),
        Err(error) => {
            reader.problem(field, super::wording::sentence(&error.to_string()));
            None
        }
    }
}

/// Fields that are given although this question does not look at them.
fn unused(ask: &Ask, find: Find) -> Vec<&'static str> {
    let unread: &[&'static str] = match find {
        Find::PerGroup => &["n"],
        Find::Power => &["target"],
        Find::SmallestEffect => &["effect", "eta_squared", "means", "sd"],
    };
    let spare_sd = ask.given("sd") && !ask.given("means") && find != Find::SmallestEffect;
    let unread = unread.iter().copied().filter(|field| ask.given(field));
    unread.chain(spare_sd.then_some("sd")).collect()
}

/// Eta squared for an f that has been checked.
fn eta_squared(f: f64) -> f64 {
    eta_squared_of_f(f).unwrap_or(0.0)
}
