//! Reading tables: what becomes of a text, and every message that a person can meet. The tables are invented.

use levelwise::numerics::decimal::{Decimal, DecimalMark};
use levelwise::table::{
    ColumnKind, Derive, Exclude, ReadError, ReadOptions, Separator, Table, Which, quoted, read, replace_value,
};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

fn table(text: &str) -> Table {
    read(text, &ReadOptions::default()).unwrap_or_else(|error| panic!("{text:?}: {error}"))
}

fn refusal(text: &str) -> ReadError {
    match read(text, &ReadOptions::default()) {
        Err(error) => error,
        Ok(table) => panic!("{text:?} was read as {table:?}"),
    }
}

fn texts(table: &Table, column: &str) -> Vec<String> {
    let column = table.column(column).unwrap_or_else(|| panic!("no column {column}"));
    (0..table.rows).map(|row| column.text(row).to_owned()).collect()
}

fn values(table: &Table, column: &str) -> Vec<Option<f64>> {
    let column = table.column(column).unwrap_or_else(|| panic!("no column {column}"));
    (0..table.rows).map(|row| column.value(row)).collect()
}

fn kinds(table: &Table) -> Vec<&'static str> {
    table.columns.iter().map(|column| column.kind.word()).collect()
}

// Separators, line ends, quotes

#[test]
fn each_separator_is_found() {
    for (text, separator) in [
        ("group,score\na,1.5\nb,2\n", Separator::Comma),
        ("group;score\na;1,5\nb;2\n", Separator::Semicolon),
        ("group\tscore\na\t1,5\nb\t2\n", Separator::Tab),
        ("name, first;score\na;1,5\nb;2\n", Separator::Semicolon),
        ("note\tscore\na, b; c\t1\nd\t2\n", Separator::Tab),
        ("note,score\n\"a;b\",1\n\"c;d\",2\n", Separator::Comma),
        ("score\n1\n2\n", Separator::Tab),
        ("score\n1,5\n2,5\n", Separator::Tab),
    ] {
        let table = table(text);
        assert_eq!(table.separator, separator, "{text:?}");
        assert!(table.remarks.is_empty(), "{text:?}: {:?}", table.remarks);
    }
}

#[test]
fn a_text_that_splits_evenly_in_two_ways_says_so() {
    let table = table("a;b,c\n1;2,5\n3;4,5\n");
    assert_eq!(table.separator, Separator::Semicolon);
    assert_eq!(
        table.remarks,
        [
            "The rows split evenly at \";\" and at \",\"; they were read with \";\". Set separator if that is not meant."
        ]
    );
}

#[test]
fn a_chosen_separator_is_obeyed() {
    let options = ReadOptions { separator: Some(Separator::Comma), ..Default::default() };
    let table = read("a;b,c\n1;2,5\n", &options).expect("a table");
    assert_eq!(table.columns[0].name, "a;b");
}

#[test]
fn every_line_end_gives_the_same_rows_and_lines() {
    for end in ["\n", "\r\n", "\r"] {
        let text = ["group,score", "a,1", "", "b,2", "  ", "c,3"].join(end);
        for text in [text.clone(), text + end] {
            let table = table(&text);
            assert_eq!(texts(&table, "group"), ["a", "b", "c"], "{text:?}");
            assert_eq!(table.lines, [2, 4, 6], "{text:?}");
        }
    }
}

#[test]
fn quotes_hold_separators_quotes_and_line_ends() {
    for end in ["\n", "\r\n", "\r"] {
        let text = format!(
            "id,score{end}\"a,b\",1{end}\"say \"\"hi\"\"\",2{end}\"two{end}lines\",3{end}5\" pipe,4{end}"
        );
        let table = table(&text);
        let two_lines = format!("two{end}lines");
        assert_eq!(texts(&table, "id"), ["a,b", "say \"hi\"", two_lines.as_str(), "5\" pipe"]);
        assert_eq!(table.lines, [2, 3, 4, 6]);
    }
}

#[test]
fn a_byte_order_mark_and_spaces_around_fields_are_no_part_of_them() {
    let table = table("\u{feff} group , score\n a , 1.5 \n b,\u{a0}2\n");
    assert_eq!(texts(&table, "group"), ["a", "b"]);
    assert_eq!(values(&table, "score"), [Some(1.5), Some(2.0)]);
}

#[test]
fn many_columns_are_read() {
    let header: Vec<String> = (0..500).map(|i| format!("c{i}")).collect();
    let row: Vec<String> = (0..500).map(|i| i.to_string()).collect();
    let table = table(&format!("{}\n{}", header.join(","), row.join(",")));
    assert_eq!(table.columns.len(), 500);
    assert_eq!(values(&table, "c499"), [Some(499.0)]);
}

// Refusals

#[test]
fn tables_that_are_none_are_refused_with_the_reason() {
    for (text, message) in [
        ("", "The table is empty. Put in a header row and at least one row of values."),
        ("\u{feff}\n\r\n", "The table is empty. Put in a header row and at least one row of values."),
        (
            "group,score",
            "The table has a header (line 1) but no rows. Add at least one row of values under it.",
        ),
        (
            "\n\ngroup,score\n\n",
            "The table has a header (line 3) but no rows. Add at least one row of values under it.",
        ),
        (
            "group,,score\na,1,2",
            "Line 1: column 2 has no name. Name it in the header, or remove the separator that makes it.",
        ),
        (
            "group,score,group\na,1,b",
            "Line 1: columns 1 and 3 are both called \"group\". Rename one of them.",
        ),
        (
            "group,score\na,1\n\nb\n",
            "Line 4: 1 field, but the header (line 1) has 2, separated by \",\". Add the missing separators; a field between them may stay empty.",
        ),
        (
            "group\tscore\na\t1\nb\t2\t3\n",
            "Line 3: 3 fields, but the header (line 1) has 2, separated by tab. Put a field that contains the separator in double quotes, or remove the extra one.",
        ),
        (
            "group,score\na,1\n\"b,2\nc,3\n",
            "Line 3: a double quote is opened and never closed. Close it, or remove it.",
        ),
        ("\"group,score\n", "Line 1: a double quote is opened and never closed. Close it, or remove it."),
        (
            "group\tscore\na\t1,234\nb\t2,345\n",
            "Row 1, column \"score\": \"1,234\" can be read as 1.234 or as 1234. Set decimal = \",\" if the comma begins the decimals, or remove the thousands separators.",
        ),
    ] {
        assert_eq!(refusal(text).message, message, "{text:?}");
    }
}

#[test]
fn refusals_carry_their_place() {
    assert_eq!(refusal("a,b\n1,2\n3\n").line, Some(3));
    let ambiguous = refusal("group\tscore\na\tNA\nb\t2,345\n");
    assert_eq!((ambiguous.row, ambiguous.column.as_deref()), (Some(1), Some("score")));
}

// Types, decimal marks, missing values

#[test]
fn types_are_found_and_shown() {
    let table = table("id,dose,score,note\n1,low,3.5,\n2,high,NA,ok\n3,low,.,\n");
    assert_eq!(kinds(&table), ["number", "label", "number", "label"]);
    assert_eq!(values(&table, "score"), [Some(3.5), None, None]);
    assert_eq!(table.columns[2].n_missing, 2);
    assert_eq!(table.columns[3].n_missing, 2);
    assert!(table.columns[3].missing(0) && !table.columns[3].missing(1));
    assert_eq!(texts(&table, "score"), ["3.5", "NA", "."]);
}

#[test]
fn a_column_without_any_value_is_no_column_of_numbers() {
    let table = table("a,b\n1,NA\n2,\n");
    assert_eq!(kinds(&table), ["number", "label"]);
    assert_eq!(
        table.columns[1].needs_numbers().as_deref(),
        Some("Column \"b\" has no values: all its cells are missing. Fill it, or choose another column.")
    );
}

#[test]
fn the_decimal_mark_is_found_from_the_numbers() {
    use DecimalMark::{Comma, Point};
    for (text, mark, score) in [
        ("group;score\na;1,5\nb;2\n", Comma, 1.5),
        ("group\tscore\na\t1,5\nb\t2\n", Comma, 1.5),
        ("group,score\na,\"1,5\"\nb,2\n", Comma, 1.5),
        ("group;score\na;1.5\nb;2\n", Point, 1.5),
        ("group;score\na;1\nb;2\n", Point, 1.0),
        ("group\tscore\na\t1,5e-3\nb\t0,250\n", Comma, 0.0015),
        ("note\tscore\n1,234 apples\t1.5\nb\t2\n", Point, 1.5),
    ] {
        let table = table(text);
        assert_eq!(table.decimal, mark, "{text:?}");
        assert_eq!(values(&table, "score")[0], Some(score), "{text:?}");
        assert!(table.remarks.is_empty(), "{text:?}: {:?}", table.remarks);
    }
}

#[test]
fn one_stray_text_does_not_hide_the_decimal_comma() {
    let table = table("group;score\na;1,5\nb;2,5\nc;absent\n");
    assert_eq!(table.decimal, DecimalMark::Comma);
    assert_eq!(table.columns[1].n_not_numbers, 1);
    assert_eq!(
        table.columns[1].needs_numbers().as_deref(),
        Some("Row 3, column \"score\": \"absent\" is not a number. Correct it, or list it under missing.")
    );
}

#[test]
fn numbers_that_might_have_thousands_separators_are_named() {
    for (text, remark) in [
        (
            "group;score\na;1,234\nb;2,345\n",
            "Row 1, column \"score\": \"1,234\" was read as 1.234, with decimal \",\". If it means 1234, remove the thousands separators.",
        ),
        (
            "group;score\na;1.234\nb;2.345\n",
            "Row 1, column \"score\": \"1.234\" was read with decimal \".\". If it means 1234, remove the thousands separators.",
        ),
        (
            "group\tx\ty\na\t1.5\t2\nb\t2\t3,5\nc\t2.5\t4\n",
            "The table has numbers with a decimal point and with a decimal comma; it was read with decimal \".\". Row 2, column \"y\", \"3,5\" is no number then. Set decimal, or write all numbers alike.",
        ),
    ] {
        assert_eq!(table(text).remarks, [remark], "{text:?}");
    }
    // 0,123 and 12,3456 cannot be thousands: one such number settles the others.
    for settled in ["0,123", "12,3456", "1234,567", "1,2345"] {
        let table = table(&format!("group\tscore\na\t1,234\nb\t{settled}\n"));
        assert_eq!(values(&table, "score")[0], Some(1.234), "{settled}");
    }
}

#[test]
fn thousands_separators_are_not_accepted() {
    for text in ["1,234.5", "1.234.567", "1 234", "12'345"] {
        let table = table(&format!("group\tscore\na\t{text}\nb\t2.5\n"));
        let message = format!(
            "Row 1, column \"score\": \"{text}\" is not a number with decimal \".\". Remove the thousands separators, or list it under missing."
        );
        assert_eq!(table.columns[1].needs_numbers(), Some(message));
    }
}

#[test]
fn a_column_declared_as_numbers_names_the_cell_that_is_none() {
    let number = |decimal| ReadOptions {
        decimal,
        kinds: vec![("score".into(), ColumnKind::Number)],
        ..Default::default()
    };
    let seventeen = format!("group;score\n{}b;12,5\n", "a;1.5\n".repeat(16));
    for (text, decimal, message) in [
        (
            seventeen.as_str(),
            Some(DecimalMark::Point),
            "Row 17, column \"score\": \"12,5\" is not a number with decimal \".\". Set decimal = \",\", or list it under missing.",
        ),
        (
            "group;score\na;12.5",
            Some(DecimalMark::Comma),
            "Row 1, column \"score\": \"12.5\" is not a number with decimal \",\". Set decimal = \".\", or list it under missing.",
        ),
        (
            "group;score\na;sick",
            None,
            "Row 1, column \"score\": \"sick\" is not a number. Correct it, or list it under missing.",
        ),
        (
            "group;score\na;1e400",
            None,
            "Row 1, column \"score\": \"1e400\" is too large; numbers go up to about 1.8e308. Correct it, or list it under missing.",
        ),
        (
            "group;score\na;1e-400",
            None,
            "Row 1, column \"score\": \"1e-400\" is too close to zero; numbers other than 0 start at about 4.9e-324. Correct it, or list it under missing.",
        ),
    ] {
        let error = read(text, &number(decimal)).expect_err(text);
        assert_eq!(error.message, message);
        assert_eq!(error.column.as_deref(), Some("score"));
    }
}

#[test]
fn a_column_left_to_be_found_remembers_why_it_is_no_column_of_numbers() {
    let table = table("group,score\na,1\nb,1e400\nc,x\nd,y\ne,z\n");
    let score = table.column("score").expect("a column");
    assert_eq!(score.kind, ColumnKind::Label);
    assert_eq!(score.n_not_numbers, 4);
    let rows: Vec<usize> = score.not_numbers.iter().map(|cell| cell.row).collect();
    assert_eq!(rows, [1, 2, 3]);
    assert_eq!(
        score.needs_numbers().as_deref(),
        Some(
            "Row 2, column \"score\": \"1e400\" is too large; numbers go up to about 1.8e308. Correct it, or list it under missing."
        )
    );
}

#[test]
fn a_column_declared_as_labels_stays_so() {
    let options = ReadOptions { kinds: vec![("dose".into(), ColumnKind::Label)], ..Default::default() };
    let table = read("dose,score\n10,1\n20,2\n", &options).expect("a table");
    assert_eq!(kinds(&table), ["label", "number"]);
    assert_eq!(
        table.columns[0].needs_numbers().as_deref(),
        Some(
            "Column \"dose\" is declared to hold labels. Set it to \"number\" under columns, or choose another column."
        )
    );
}

#[test]
fn a_kind_for_a_column_that_is_not_there_suggests_the_nearest() {
    let message = |name: &str| {
        let options = ReadOptions { kinds: vec![(name.into(), ColumnKind::Label)], ..Default::default() };
        read("dose,score\n10,1\n", &options).expect_err(name).message
    };
    assert_eq!(message("doses"), "There is no column \"doses\". Did you mean \"dose\"?");
    assert_eq!(message("weight"), "There is no column \"weight\". The columns are \"dose\", \"score\".");
}

#[test]
fn missing_codes_can_be_named() {
    let options = ReadOptions { missing: vec!["-99".into(), "sick".into()], ..Default::default() };
    let table = read("group,score\na,-99\nb,sick\nc,3\n", &options).expect("a table");
    assert_eq!(values(&table, "score"), [None, None, Some(3.0)]);
    // The default codes no longer hold.
    let table = read("group,score\na,NA\nb,3\n", &options).expect("a table");
    assert_eq!(kinds(&table), ["label", "label"]);
}

// Exact numbers

#[test]
fn large_leading_digits_lose_nothing() {
    let table = table("y\n1000000000000.4\n1000000000000.3\n1000000000000.5\n");
    let numbers = table.columns[0].numbers.as_ref().expect("numbers");
    assert_eq!(numbers.origin.to_string(), "1000000000000");
    let offsets: Vec<Option<f64>> = (0..3).map(|row| numbers.offset(row)).collect();
    assert_eq!(offsets, [Some(0.4), Some(0.3), Some(0.5)]);
    assert_eq!(values(&table, "y")[0], Some(1000000000000.4));
}

#[test]
fn the_origin_keeps_the_common_digits_and_is_zero_where_there_are_none() {
    for (cells, origin) in [
        (["107.8681419", "107.8681903"], "107.8681"),
        (["-107.8681419", "-107.8681903"], "-107.8681"),
        (["3", "48"], "0"),
        (["-1e300", "1e308"], "0"),
        (["150", "190"], "100"),
        (["7.25", "7.25"], "7.25"),
        (["NA", "7.25"], "7.25"),
    ] {
        let table = table(&format!("y\n{}\n{}\n", cells[0], cells[1]));
        let numbers = table.columns[0].numbers.as_ref().expect("numbers");
        assert_eq!(numbers.origin.to_string(), origin, "{cells:?}");
    }
}

// Exclusions and derived columns

const TRIAL: &str = "id,group,score,time taken\np1,a,10,3\np2,b,120,4.5\np3,a,NA,2\np4,b,0,3.5\n";

fn exclude(condition: &str) -> Exclude {
    Exclude { condition: condition.into(), reason: "as agreed".into() }
}

fn excluded_by(condition: &str) -> Vec<usize> {
    let mut table = table(TRIAL);
    table.select(&[], &[exclude(condition)]).unwrap_or_else(|errors| panic!("{condition}: {errors:?}"));
    table.excluded.iter().map(|excluded| excluded.row).collect()
}

fn misfit(derive: &[(&str, &str)], exclude: &[Exclude]) -> (String, String) {
    let derive: Vec<Derive> = derive
        .iter()
        .map(|(name, text)| Derive { name: (*name).into(), expression: (*text).into() })
        .collect();
    let errors = table(TRIAL).select(&derive, exclude).expect_err("an error");
    let text = match errors[0].which {
        Which::Derive(i) => derive[i].expression.clone(),
        Which::Exclude(i) => exclude[i].condition.clone(),
    };
    (text[errors[0].span.clone()].to_owned(), errors[0].message.clone())
}

#[test]
fn conditions_choose_rows() {
    for (condition, rows) in [
        ("score > 100", vec![1]),
        ("score >= 10", vec![0, 1]),
        ("score < 10", vec![3]),
        ("score <= 1e1", vec![0, 3]),
        ("score ≤ 1e1", vec![0, 3]),
        ("score = 0", vec![3]),
        ("score = 0.00", vec![3]),
        ("score != 0", vec![0, 1]),
        ("score > -1", vec![0, 1, 3]),
        ("id = \"p2\"", vec![1]),
        ("'id' != \"p2\"", vec![0, 2, 3]),
        ("'time taken' >= 3.5", vec![1, 3]),
        ("group = \"b\" and score > 100", vec![1]),
        ("group = \"b\" AND score > 100 or id = \"p1\"", vec![0, 1]),
        ("(id = \"p1\" or id = \"p2\") and (score < 100)", vec![0]),
        ("score = \"120\"", vec![1]),
        ("group = 12", vec![]),
    ] {
        assert_eq!(excluded_by(condition), rows, "{condition}");
    }
}

#[test]
fn an_excluded_row_goes_out_under_the_first_reason_that_fits() {
    let mut table = table(TRIAL);
    let entries = [
        Exclude { condition: "group = \"b\"".into(), reason: "second site".into() },
        Exclude { condition: "score > 100".into(), reason: "impossible".into() },
        Exclude { condition: " score > 1000 ".into(), reason: "impossible".into() },
    ];
    table.select(&[], &entries).expect("conditions");
    let rows: Vec<(usize, usize)> = table.exclusions.iter().map(|entry| entry.rows).enumerate().collect();
    assert_eq!(rows, [(0, 2), (1, 0), (2, 0)]);
    assert_eq!(table.exclusion_of(1).map(|entry| entry.reason.as_str()), Some("second site"));
    assert_eq!(table.exclusion_of(0), None);
    assert_eq!(table.remarks, ["The exclusion score > 1000 takes out no row."]);
}

#[test]
fn conditions_that_do_not_fit_say_where_and_what_would() {
    for (condition, span, message) in [
        ("", "", "The condition is empty. Write one such as score > 100."),
        ("scroe > 100", "scroe", "There is no column \"scroe\". Did you mean \"score\"?"),
        (
            "weight > 100",
            "weight",
            "There is no column \"weight\". The columns are \"id\", \"group\", \"score\", \"time taken\".",
        ),
        ("score", "", "Expected =, !=, <, <=, > or >=, found the end."),
        ("score >", "", "Expected a number, or a text in double quotes, found the end."),
        ("score > > 1", ">", "Expected a number, or a text in double quotes, found >."),
        ("group = a", "a", "Expected a number or a text, found a. Put a text in double quotes: \"a\"."),
        ("score == 1", "==", "\"==\" has no meaning here. Use a single = for equal."),
        ("score > 3,5", ",", "\",\" has no meaning here. Numbers are written with a decimal point here."),
        ("score > 1 & score < 3", "&", "\"&\" has no meaning here. Use the word and."),
        ("score > 1 score < 3", "score", "Expected and, or, or the end of the condition, found score."),
        ("(score > 1", "", "Expected and, or, or a closing bracket, found the end."),
        ("> 1", ">", "Expected a column name, found >."),
        ("id = \"p1", "\"p1", "The quote \" is never closed."),
        ("score > 1e400", "1e400", "\"1e400\" is too large: numbers go up to about 1.8e308."),
        ("score > 1.2.3", "1.2.3", "\"1.2.3\" is not a number."),
        (
            "score > \"10\"",
            "score > \"10\"",
            "> compares numbers, and \"10\" is a text. Write a number without quotes.",
        ),
        (
            "group > 10",
            "group > 10",
            "Row 1, column \"group\": \"a\" is not a number. Correct it, or list it under missing.",
        ),
    ] {
        let found = misfit(&[], &[exclude(condition)]);
        assert_eq!((found.0.as_str(), found.1.as_str()), (span, message), "{condition}");
    }
    let deep = format!("{}score > 1{}", "(".repeat(10_000), ")".repeat(10_000));
    assert_eq!(misfit(&[], &[exclude(&deep)]).1, "Brackets and signs are nested too deeply. Use at most 60.");
    let no_reason = Exclude { condition: "score > 1".into(), reason: " ".into() };
    assert_eq!(
        misfit(&[], &[no_reason]).1,
        "This exclusion has no reason. Say why these rows are taken out."
    );
}

fn derived(expression: &str) -> Vec<Option<f64>> {
    let mut table = table(TRIAL);
    let entry = Derive { name: "new".into(), expression: expression.into() };
    table.select(&[entry], &[]).unwrap_or_else(|errors| panic!("{expression}: {errors:?}"));
    values(&table, "new")
}

#[test]
fn columns_are_derived_by_arithmetic() {
    assert_eq!(derived("score + 1"), [Some(11.0), Some(121.0), None, Some(1.0)]);
    assert_eq!(derived("2 * score - -'time taken' / 2"), [Some(21.5), Some(242.25), None, Some(1.75)]);
    assert_eq!(derived("(score - 'time taken') * 2 - 1 - 1"), [Some(12.0), Some(229.0), None, Some(-9.0)]);
    assert_eq!(derived("sqrt('time taken' - 2 + 14)")[2], Some(14.0_f64.sqrt()));
    assert_eq!(derived("log10(1e3) + log(1) + exp(0)"), [Some(4.0); 4]);
    assert_eq!(derived(".5"), [Some(0.5); 4]);
}

#[test]
fn derived_columns_have_texts_can_be_read_by_others_and_by_conditions() {
    let mut table = table(TRIAL);
    let entries = [("double", "2 * score"), ("ratio", "double / 3e20")];
    let entries = entries.map(|(name, text)| Derive { name: name.into(), expression: text.into() });
    table.select(&entries, &[exclude("double = 240")]).expect("columns");
    assert_eq!(texts(&table, "double"), ["20", "240", "", "0"]);
    assert_eq!(texts(&table, "ratio")[1], "8e-19");
    assert!(table.columns[4].missing(2) && table.columns[4].n_missing == 1);
    assert_eq!(table.excluded.len(), 1);
}

#[test]
fn a_row_excluded_before_need_not_be_defined() {
    let mut table = table(TRIAL);
    let entry = Derive { name: "log score".into(), expression: "log(score)".into() };
    table.select(&[entry], &[exclude("score = 0")]).expect("a column");
    assert_eq!(values(&table, "log score")[3], None);
}

#[test]
fn expressions_that_do_not_fit_say_where_and_what_would() {
    for (expression, span, message) in [
        ("", "", "The expression is empty. Write one such as after - before."),
        ("scroe + 1", "scroe", "There is no column \"scroe\". Did you mean \"score\"?"),
        ("score +", "", "Expected a number, a column or a bracket, found the end."),
        ("score + * 2", "*", "Expected a number, a column or a bracket, found *."),
        ("score 2", "2", "Expected +, -, *, / or the end of the expression, found 2."),
        ("(score", "", "Expected +, -, *, / or a closing bracket, found the end."),
        (
            "lg10(score)",
            "lg10",
            "There is no function lg10. Did you mean log10? There are log (natural), log10, sqrt and exp.",
        ),
        ("score ^ 2", "^", "\"^\" has no meaning here. Multiply instead, or use exp and log."),
        (
            "\"score\" * 2",
            "\"score\"",
            "Texts cannot be computed with. For a column, use single quotes: 'score'.",
        ),
        (
            "group * 2",
            "group",
            "Row 1, column \"group\": \"a\" is not a number. Correct it, or list it under missing.",
        ),
        (
            "log(score)",
            "log(score)",
            "Row 4, column \"new\": log of 0 is not defined; it needs a number greater than 0. Exclude the row with a reason, or list the value under missing.",
        ),
        (
            "sqrt(score - 11)",
            "sqrt(score - 11)",
            "Row 1, column \"new\": sqrt of -1 is not defined; it needs a number from 0 up. Exclude the row with a reason, or list the value under missing.",
        ),
        (
            "1 / score",
            "1 / score",
            "Row 4, column \"new\": 1 is divided by 0. Exclude the row with a reason, or list the value under missing.",
        ),
        (
            "exp(score * 10)",
            "exp(score * 10)",
            "Row 2, column \"new\": the result is too large; numbers go up to about 1.8e308. Exclude the row with a reason, or list the value under missing.",
        ),
    ] {
        let found = misfit(&[("new", expression)], &[]);
        assert_eq!((found.0.as_str(), found.1.as_str()), (span, message), "{expression}");
    }
    let taken = misfit(&[("score", "1")], &[]).1;
    assert_eq!(taken, "There is already a column \"score\". Give the derived column another name.");
    assert_eq!(misfit(&[(" ", "1")], &[]).1, "A derived column has no name. Give it one.");
    let long = vec!["1"; 5000].join("+");
    let message = "The expression is too long. Derive a part of it as a column of its own.";
    assert_eq!(misfit(&[("new", &long)], &[]).1, message);
    let minus = format!("{}1", "-".repeat(10_000));
    assert_eq!(
        misfit(&[("new", &minus)], &[]).1,
        "Brackets and signs are nested too deeply. Use at most 60."
    );
}

// Editing

#[test]
fn replacing_a_value_changes_that_field_only() {
    let text = "\u{feff}id, score ,note\r\n\r\n\"a,b\", 1 ,\"x\r\ny\"\r\nc,2,\r\n";
    let changed = |row, column, value| replace_value(text, Separator::Comma, row, column, value);
    assert_eq!(
        changed(0, 1, "7").as_deref(),
        Some("\u{feff}id, score ,note\r\n\r\n\"a,b\",7,\"x\r\ny\"\r\nc,2,\r\n")
    );
    assert_eq!(
        changed(0, 0, "q").as_deref(),
        Some("\u{feff}id, score ,note\r\n\r\nq, 1 ,\"x\r\ny\"\r\nc,2,\r\n")
    );
    assert_eq!(
        changed(0, 2, "q").as_deref(),
        Some("\u{feff}id, score ,note\r\n\r\n\"a,b\", 1 ,q\r\nc,2,\r\n")
    );
    assert_eq!(
        changed(1, 2, "a \"b\", c").as_deref(),
        Some("\u{feff}id, score ,note\r\n\r\n\"a,b\", 1 ,\"x\r\ny\"\r\nc,2,\"a \"\"b\"\", c\"\r\n")
    );
    assert_eq!(changed(2, 0, "q"), None);
    assert_eq!(changed(0, 3, "q"), None);
}

#[test]
fn emptying_the_only_field_of_a_row_keeps_the_row() {
    let text = replace_value("y\n1\n2\n", Separator::Tab, 0, 0, "").expect("a field");
    assert_eq!(text, "y\n\"\"\n2\n");
    assert_eq!(table(&text).rows, 2);
}

// Bytes

#[test]
fn bytes_become_text_in_the_usual_encodings() {
    use levelwise::table::encoding::to_text;
    let text = "Größe;x\r\n1,5;€\r\n";
    let little: Vec<u8> =
        std::iter::once(0xfeff).chain(text.encode_utf16()).flat_map(u16::to_le_bytes).collect();
    let big: Vec<u8> =
        std::iter::once(0xfeff).chain(text.encode_utf16()).flat_map(u16::to_be_bytes).collect();
    let windows = b"Gr\xf6\xdfe;x\r\n1,5;\x80\r\n";
    let marked = format!("\u{feff}{text}");
    for bytes in [text.as_bytes(), marked.as_bytes(), &little, &big, windows] {
        assert_eq!(to_text(bytes), text);
    }
}

// Properties

fn separators() -> impl Strategy<Value = Separator> {
    prop_oneof![Just(Separator::Comma), Just(Separator::Semicolon), Just(Separator::Tab)]
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(5), failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn no_text_makes_the_reader_panic(text in r#"[a-c0-9,;\t\r\n"'.\u{feff} eE+-]{0,80}"#) {
        if let Ok(mut table) = read(&text, &ReadOptions::default()) {
            for column in &table.columns {
                for row in 0..table.rows {
                    prop_assert_eq!(column.missing(row), column.value(row).is_none() && column.numbers.is_some()
                        || column.numbers.is_none() && ["", "NA", "."].contains(&column.text(row)));
                }
            }
            let entries = [exclude(&text)];
            let _ = table.select(&[Derive { name: "new".into(), expression: text.clone() }], &entries);
            for row in 0..table.rows {
                let changed = replace_value(&text, table.separator, row, 0, "7").expect("a field");
                let options = ReadOptions { separator: Some(table.separator), ..Default::default() };
                if let Ok(again) = read(&changed, &options) {
                    prop_assert_eq!(again.rows, table.rows);
                    prop_assert_eq!(again.columns[0].text(row), "7");
                }
            }
        }
    }

    #[test]
    fn no_unicode_makes_the_reader_panic(text in any::<String>(), condition in any::<String>()) {
        if let Ok(mut table) = read(&text, &ReadOptions::default()) {
            let _ = table.select(&[Derive { name: "new".into(), expression: condition.clone() }], &[exclude(&condition)]);
        }
    }

    #[test]
    fn what_is_written_is_read_again(
        rows in prop::collection::vec(prop::collection::vec(r#"[a-z,;\t\r\n" 0-9]{0,8}"#, 3), 1..8),
        separator in separators(),
        end in prop_oneof![Just("\n"), Just("\r\n"), Just("\r")],
    ) {
        let line = |fields: &[String]| {
            let fields: Vec<_> = fields.iter().map(|field| quoted(field, separator)).collect();
            fields.join(separator.character().to_string().as_str())
        };
        let header = ["x", "y", "z"].map(String::from);
        let lines: Vec<String> = std::iter::once(line(&header)).chain(rows.iter().map(|row| line(row))).collect();
        let kinds = header.iter().map(|name| (name.clone(), ColumnKind::Label)).collect();
        let options = ReadOptions { separator: Some(separator), kinds, ..Default::default() };
        let table = read(&lines.join(end), &options).expect("a table");
        prop_assert_eq!(table.rows, rows.len());
        for (row, fields) in rows.iter().enumerate() {
            for (column, field) in table.columns.iter().zip(fields) {
                prop_assert_eq!(column.text(row), field.trim());
            }
        }
    }

    #[test]
    fn a_decimal_is_its_nearest_double_and_differences_are_exact(value in any::<f64>(), small in -1000_i32..1000) {
        prop_assume!(value.is_finite());
        let decimal = Decimal::parse(&format!("{value:e}"), DecimalMark::Point).expect("a number");
        prop_assert_eq!(decimal.to_f64(), value);
        prop_assert_eq!(decimal.minus(Decimal::ZERO), value);
        prop_assert_eq!(decimal.minus(decimal), 0.0);
        let other = Decimal::new(i128::from(small), 0).expect("a number");
        prop_assert_eq!(decimal.minus(other), -other.minus(decimal));
    }

    #[test]
    fn shifting_a_column_leaves_its_differences_alone(cents in prop::collection::vec(0_i64..100, 2..20)) {
        let column = |whole: i64| {
            let cells: Vec<String> = cents.iter().map(|cents| format!("{whole}.{cents:02}")).collect();
            table(&format!("y\n{}\n", cells.join("\n"))).columns[0].numbers.clone().expect("numbers")
        };
        let shifted = column(1_000_000_000_000_000);
        for (row, &cents) in cents.iter().enumerate() {
            let whole = shifted.origin.minus(Decimal::new(1_000_000_000_000_000, 0).expect("a number"));
            let exact = cents as f64 / 100.0;
            prop_assert!((shifted.offset(row).expect("a value") + whole - exact).abs() <= 2e-16);
        }
    }
}

#[test]
fn empty_columns_without_a_name_after_the_last_one_are_no_columns() {
    let table = read("group\tscore\t\t\nA\t12\t\t\nB\t13\t\t\n", &ReadOptions::default()).expect("a table");
    assert_eq!(table.columns.len(), 2);
    assert_eq!(table.columns[1].text(1), "13");
    let error = read("group\tscore\t\nA\t12\t\nB\t13\tx\n", &ReadOptions::default())
        .expect_err("a value without a name");
    assert!(error.message.contains("column 3 has no name"), "{}", error.message);
}

#[test]
fn a_label_with_and_without_spaces_around_it_is_one_value_and_said() {
    let table = table("dose,y\nlow,1\n\"low \",2\n low,3\nhigh,4\n");
    assert_eq!(
        table.remarks,
        [
            "Column \"dose\": \"low\" stands with spaces around it in 2 rows and without in others; they count as the same value."
        ]
    );
    assert_eq!(self::table("dose, y\nlow , 1\nhigh , 2\n").remarks, Vec::<String>::new());
}
