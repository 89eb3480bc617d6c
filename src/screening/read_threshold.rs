//! From the text of a threshold to the threshold.

use toml::Spanned;
use toml::de::DeValue;

use super::table_reader::TableReader;
use super::threshold::{Table, Threshold};

/// A number, an expression in quotes, or a table.
pub fn threshold(table: &mut TableReader<'_, '_>) -> Option<Threshold> {
    let Some(value) = table.value("threshold") else {
        table.wrong_here("threshold is missing");
        return None;
    };
    if value.get_ref().as_str().is_some() {
        return table.expression_of("threshold", value).map(Threshold::Expression);
    }
    let Some(inner) = value.get_ref().as_table() else {
        return table.number("threshold").map(Threshold::Number);
    };
    let path = format!("{}, threshold", table.path);
    let mut reader = TableReader::new(table.notebook, &path, value.span(), inner);
    let read = lookup(&mut reader);
    reader.finish();
    read.map(|table| Threshold::Table(Box::new(table)))
}

fn lookup(table: &mut TableReader<'_, '_>) -> Option<Table> {
    let over: Vec<_> = match table.value("over") {
        None => {
            table.wrong_here("over is missing: the expression, or the two, that the table is over");
            return None;
        }
        Some(value) => match value.get_ref().as_array() {
            Some(list) => list.iter().map(|one| table.expression_of("over", one)).collect(),
            None => vec![table.expression_of("over", value)],
        },
    };
    let at = table.value("at");
    let values = table.value("values");
    let (Some(at), Some(values)) = (at, values) else {
        table.wrong_here("a table needs over, at and values");
        return None;
    };
    let (at, values) = match over.len() {
        1 => (vec![table.numbers("at", at)?], table.numbers("values", values)?),
        2 => {
            let (at, values) = (rows(table, "at", at)?, rows(table, "values", values)?);
            let across = at.get(1).map_or(0, Vec::len);
            if let Some(row) = values.iter().find(|row| row.len() != across) {
                table.wrong_here(format!("a row of {} values for {across} points", row.len()));
                return None;
            }
            (at, values.concat())
        }
        _ => {
            table.wrong_here("a table is over one expression or two");
            return None;
        }
    };
    let over: Vec<_> = over.into_iter().collect::<Option<_>>()?;
    let ascending = |points: &Vec<f64>| points.windows(2).all(|pair| pair[0] < pair[1]);
    let sizes: usize = at.iter().map(Vec::len).product();
    if at.len() != over.len() || at.iter().any(Vec::is_empty) || !at.iter().all(ascending) {
        table.wrong_here("at must hold ascending numbers, one list for each expression");
        None
    } else if sizes != values.len() {
        table.wrong_here(format!("{} values do not fit {sizes} points", values.len()));
        None
    } else {
        Some(Table { over, at, values })
    }
}

fn rows(
    table: &mut TableReader<'_, '_>,
    key: &str,
    value: &Spanned<DeValue<'_>>,
) -> Option<Vec<Vec<f64>>> {
    let Some(list) = value.get_ref().as_array() else {
        table.wrong(key, value, "expected a list of lists, as in [[260, 270], [1, 2]]");
        return None;
    };
    list.iter().map(|row| table.numbers(key, row)).collect()
}
