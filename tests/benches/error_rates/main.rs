//! The error rates of the multiplicity procedures, simulated: `cargo bench --bench error_rates`, or `cargo pack bench rates`.
//!
//! Prints the page `tests/benches/ERROR_RATES.md`; with `UPDATE_ERROR_RATES=1` it writes it. Trial i of a column uses stream i of
//! the column's random numbers, so that the page is the same on every machine and for any number of threads. `-- most=200`
//! limits the trials, for a quick look; such a page is not written.

mod cells;
mod judge;
mod offered;
mod page;
mod simulate;
mod words;

use cells::{Cell, DESIGNS, Design, Question, SMALL_DESIGNS, SPREAD_DESIGNS, Truth};
use levelwise::methods::contrasts::Set;
use levelwise::methods::multiplicity::{Adjust, Claim, PValueMethod, Sides};
use offered::{GROUNDS, Ground, JOINT_RANKS, ONE_ERROR_TERM, OWN_VARIANCES, PAIR_RANKS, Row, rows};
use page::Table;
use std::error::Error;
use std::time::Instant;

/// The columns of the tables of one question.
struct Columns {
    question: Question,
    heads: Vec<String>,
    cells: Vec<Cell>,
}

fn main() -> Result<(), Box<dyn Error>> {
    let arguments: Vec<String> = std::env::args().collect();
    if !arguments.iter().any(|argument| argument == "--bench") {
        println!("The error rates take long to simulate: cargo bench --bench error_rates.");
        return Ok(());
    }
    let most = arguments.iter().find_map(|argument| argument.strip_prefix("most="));
    let most: u64 = most.map(str::parse).transpose()?.unwrap_or(u64::MAX);
    let start = Instant::now();
    let page = page(most)?;
    eprintln!("{:.0} s", start.elapsed().as_secs_f64());
    if std::env::var_os("UPDATE_ERROR_RATES").is_some() && most == u64::MAX {
        std::fs::write(
            concat!(env!("CARGO_MANIFEST_DIR"), "/tests/benches/ERROR_RATES.md"),
            page.trim_end().to_owned() + "\n",
        )?;
    }
    Ok(())
}

/// The page so far, each part printed as soon as it is there.
struct Page {
    text: String,
    most: u64,
}

impl Page {
    fn add(&mut self, part: &str) {
        print!("{part}");
        self.text.push_str(part);
    }

    fn table(
        &mut self,
        columns: &Columns,
        ground: Ground,
        wanted: impl Fn(&Row) -> bool,
    ) -> Result<(), Box<dyn Error>> {
        self.add(&columns.table(ground, wanted, self.most)?);
        Ok(())
    }
}

fn page(most: u64) -> Result<String, Box<dyn Error>> {
    let mut page = Page { text: String::new(), most };
    page.add(words::HEAD);
    for (set, text) in [(Set::AllPairs, words::ALL_PAIRS), (Set::AgainstControl(0), words::AGAINST_CONTROL)] {
        page.add(text);
        for ground in GROUNDS {
            page.table(&Columns::of_differences(set, &ground.designs), ground, |_| true)?;
        }
    }
    let pairs = Question::differences(Set::AllPairs);
    page.add(words::ONE_APART);
    page.table(&Columns::new(pairs, &[Truth::OneApart], &DESIGNS), ONE_ERROR_TERM, of_ordered_means)?;
    page.add(words::SMALL);
    for ground in [OWN_VARIANCES, JOINT_RANKS, PAIR_RANKS] {
        page.table(&Columns::of_differences(Set::AllPairs, &SMALL_DESIGNS), ground, for_small_groups)?;
    }
    page.add(words::SPREADS);
    for ground in [JOINT_RANKS, PAIR_RANKS] {
        let columns = Columns::new(pairs, &[Truth::SpreadsApart], &SPREAD_DESIGNS);
        page.table(&columns, ground, holm_or_of_pairs)?;
    }
    page.add(words::MARGINS);
    let inferiority = (Claim::NonInferiority { margin: 1.0 }, Sides::Greater);
    let equivalence = (Claim::Equivalence { lower: -3.0, upper: 3.0 }, Sides::Both);
    for (claim, sides) in [inferiority, equivalence] {
        for ground in [ONE_ERROR_TERM, OWN_VARIANCES] {
            page.table(&Columns::at_the_margin(claim, sides), ground, holm_or_dunnett)?;
        }
    }
    Ok(page.text)
}

/// Those that one would choose for groups of a few values, and what they are compared with.
fn for_small_groups(row: &Row) -> bool {
    let holm = Adjust::PValues(PValueMethod::Holm);
    let of_pairs = [
        Adjust::GamesHowell,
        Adjust::TamhaneT2,
        Adjust::DunnettT3,
        Adjust::DunnettC,
        Adjust::StepDownMaxT,
        Adjust::SteelDwass,
    ];
    row.adjust == holm || of_pairs.contains(&row.adjust)
}

/// Those that go by ordered means or a gate, beside Tukey's and Holm's, which do not.
fn of_ordered_means(row: &Row) -> bool {
    let holm = Adjust::PValues(PValueMethod::Holm);
    let others = [
        Adjust::Tukey,
        Adjust::RyanEinotGabrielWelsch,
        Adjust::NewmanKeuls,
        Adjust::LeastSignificantDifference,
    ];
    row.adjust == holm || others.contains(&row.adjust)
}

fn holm_or_of_pairs(row: &Row) -> bool {
    let p_values = [PValueMethod::Holm, PValueMethod::Bonferroni, PValueMethod::None];
    p_values.map(Adjust::PValues).contains(&row.adjust) || row.adjust == Adjust::SteelDwass
}

fn holm_or_dunnett(row: &Row) -> bool {
    matches!(row.adjust, Adjust::PValues(PValueMethod::Holm) | Adjust::Dunnett)
}

impl Columns {
    fn of_differences(set: Set, designs: &[Design]) -> Self {
        Self::new(Question::differences(set), &[Truth::AllAlike, Truth::partial(set)], designs)
    }

    fn at_the_margin(claim: Claim, sides: Sides) -> Self {
        let question = Question { set: Set::AgainstControl(0), claim, sides };
        Self::new(question, &[Truth::AtTheMargin], &DESIGNS)
    }

    fn new(question: Question, truths: &[Truth], designs: &[Design]) -> Self {
        let pairs: Vec<(Truth, Design)> =
            truths.iter().flat_map(|truth| designs.iter().map(|design| (*truth, *design))).collect();
        let cell = |(column, (truth, design)): (usize, &(Truth, Design))| {
            Cell::new(question, *truth, *design, column as u64)
        };
        Self {
            question,
            heads: pairs.iter().map(|(truth, design)| words::column(*truth, *design)).collect(),
            cells: pairs.iter().enumerate().map(cell).collect(),
        }
    }

    /// The table of every procedure offered on this ground that is `wanted`, or nothing where there is none.
    fn table(
        &self,
        ground: Ground,
        wanted: impl Fn(&Row) -> bool,
        most: u64,
    ) -> Result<String, Box<dyn Error>> {
        let mut rows = rows(self.question, ground, self.cells[0].contrasts.len())?;
        rows.retain(wanted);
        if rows.is_empty() {
            return Ok(String::new());
        }
        let counted: Vec<_> =
            self.cells.iter().map(|cell| simulate::simulate(cell, ground, &rows, most)).collect();
        let title = words::title(self.question, ground);
        let table = Table { title, rows: &rows, columns: &self.heads, counted: &counted };
        eprint!("{}\n{}", table.title, table.times());
        Ok(table.markdown()?)
    }
}
