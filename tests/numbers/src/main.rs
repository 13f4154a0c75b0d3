//! Prints the table of points, one a line.

use std::io::Write;

fn main() -> std::io::Result<()> {
    std::io::stdout().write_all(levelwise_numbers::table::Table::complete().text().as_bytes())
}
