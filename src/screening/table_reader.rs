//! Reading TOML tables key by key, strictly: what nobody asked for is a mistake.

use std::ops::Range;

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::mistakes::RuleMistake;
use crate::layers::Expression;
use crate::system::{clean_text, near_names};

/// The lines of a rulebook and the mistakes found so far.
pub struct Notebook {
    line_ends: Vec<usize>,
    /// In the order in which they were found.
    pub mistakes: Vec<RuleMistake>,
}

impl Notebook {
    /// Without mistakes yet.
    pub fn new(text: &str) -> Self {
        let line_ends = text.match_indices('\n').map(|(at, _)| at).collect();
        Self { line_ends, mistakes: Vec::new() }
    }

    /// Notes a mistake at a place of the text.
    pub fn note(&mut self, span: &Range<usize>, key: &str, what: impl Into<String>) {
        let line = self.line_ends.partition_point(|end| *end < span.start) + 1;
        self.mistakes.push(RuleMistake { line, key: key.to_owned(), what: what.into() });
    }
}

/// One table on its way; keys that are asked for are the keys that it may have.
pub struct TableReader<'n, 'd> {
    /// Where mistakes go.
    pub notebook: &'n mut Notebook,
    /// The way to the table, for messages.
    pub path: String,
    /// Where it stands.
    pub span: Range<usize>,
    table: &'d DeTable<'d>,
    asked: Vec<&'static str>,
}

type Value<'d> = &'d Spanned<DeValue<'d>>;

impl<'n, 'd> TableReader<'n, 'd> {
    /// Begins to read a table.
    pub fn new(
        notebook: &'n mut Notebook,
        path: &str,
        span: Range<usize>,
        table: &'d DeTable<'d>,
    ) -> Self {
        Self { notebook, path: path.to_owned(), span, table, asked: Vec::new() }
    }

    /// A key's value, if it is there.
    pub fn value(&mut self, key: &'static str) -> Option<Value<'d>> {
        self.asked.push(key);
        self.table.iter().find(|(name, _)| name.get_ref().as_ref() == key).map(|(_, value)| value)
    }

    /// Notes a mistake at a key's value.
    pub fn wrong(&mut self, key: &str, at: Value<'_>, what: impl Into<String>) {
        let path = self.path_to(key);
        self.notebook.note(&at.span(), &path, what);
    }

    /// Notes a mistake of the table as a whole.
    pub fn wrong_here(&mut self, what: impl Into<String>) {
        let (path, span) = (self.path.clone(), self.span.clone());
        self.notebook.note(&span, &path, what);
    }

    fn path_to(&self, key: &str) -> String {
        if self.path.is_empty() { key.to_owned() } else { format!("{}, {key}", self.path) }
    }

    fn needed<T>(&mut self, key: &str, found: Option<T>) -> Option<T> {
        if found.is_none() {
            self.wrong_here(format!("{key} is missing"));
        }
        found
    }

    /// A text, if it is there; surrounding white space is cut.
    pub fn text(&mut self, key: &'static str) -> Option<String> {
        let value = self.value(key)?;
        match value.get_ref() {
            DeValue::String(text) => Some(text.trim().to_owned()),
            other => {
                self.wrong(key, value, format!("expected a text, found {}", kind(other)));
                None
            }
        }
    }

    /// A text that must be there.
    pub fn needed_text(&mut self, key: &'static str) -> Option<String> {
        let there = self.value(key).is_some();
        let text = self.text(key);
        if there { text } else { self.needed(key, text) }
    }

    /// A number, if it is there.
    pub fn number(&mut self, key: &'static str) -> Option<f64> {
        let value = self.value(key)?;
        let number = number(value.get_ref());
        if number.is_none() {
            let found = kind(value.get_ref());
            self.wrong(key, value, format!("expected a number, found {found}"));
        }
        number
    }

    /// A truth; false where it is not there.
    pub fn truth(&mut self, key: &'static str) -> bool {
        let Some(value) = self.value(key) else { return false };
        match value.get_ref() {
            DeValue::Boolean(truth) => *truth,
            other => {
                self.wrong(key, value, format!("expected true or false, found {}", kind(other)));
                false
            }
        }
    }

    /// A list of numbers.
    pub fn numbers(&mut self, key: &str, value: Value<'_>) -> Option<Vec<f64>> {
        let list = value.get_ref().as_array();
        let numbers = list.and_then(|list| {
            list.iter().map(|one| number(one.get_ref())).collect::<Option<Vec<f64>>>()
        });
        if numbers.is_none() {
            self.wrong(key, value, "expected a list of numbers, as in [260, 270.5]");
        }
        numbers
    }

    /// A list of texts, if it is there; one text stands for a list of one.
    pub fn texts(&mut self, key: &'static str) -> Option<Vec<String>> {
        let value = self.value(key)?;
        let texts = match value.get_ref() {
            DeValue::String(text) => Some(vec![text.trim().to_owned()]),
            DeValue::Array(list) => {
                let text = |one: &Spanned<DeValue<'_>>| Some(one.get_ref().as_str()?.to_owned());
                list.iter().map(text).collect()
            }
            _ => None,
        };
        if texts.is_none() {
            self.wrong(key, value, "expected a list of texts, as in [\"sea\", \"land\"]");
        }
        texts
    }

    /// An expression, if it is there.
    pub fn expression(&mut self, key: &'static str) -> Option<Expression> {
        let value = self.value(key)?;
        self.expression_of(key, value)
    }

    /// An expression, or a list of them.
    pub fn expressions(&mut self, key: &'static str) -> Vec<Expression> {
        let Some(value) = self.value(key) else { return Vec::new() };
        let list = value.get_ref().as_array().map(|list| list.iter().collect());
        let list: Vec<Value<'d>> = list.unwrap_or_else(|| vec![value]);
        list.into_iter().filter_map(|one| self.expression_of(key, one)).collect()
    }

    /// An expression that must be there.
    pub fn needed_expression(&mut self, key: &'static str) -> Option<Expression> {
        let value = self.value(key);
        let value = self.needed(key, value)?;
        self.expression_of(key, value)
    }

    /// A value read as an expression.
    pub fn expression_of(&mut self, key: &str, value: Value<'_>) -> Option<Expression> {
        let Some(text) = value.get_ref().as_str() else {
            let found = kind(value.get_ref());
            self.wrong(key, value, format!("expected an expression in quotes, found {found}"));
            return None;
        };
        match Expression::parse(text) {
            Ok(expression) => Some(expression),
            Err(error) => {
                self.wrong(key, value, error.to_string());
                None
            }
        }
    }

    /// The tables of an array of tables such as `[[tests]]`.
    pub fn tables(&mut self, key: &'static str) -> Vec<(Range<usize>, &'d DeTable<'d>)> {
        let Some(value) = self.value(key) else { return Vec::new() };
        let Some(list) = value.get_ref().as_array() else {
            self.wrong(key, value, format!("expected tables headed [[{key}]]"));
            return Vec::new();
        };
        let mut tables = Vec::new();
        for one in list {
            match one.get_ref().as_table() {
                Some(table) => tables.push((one.span(), table)),
                None => self.wrong(key, one, format!("expected a table headed [[{key}]]")),
            }
        }
        tables
    }

    /// Numbers by name, if the key is there.
    pub fn numbers_by_name(&mut self, key: &'static str) -> Vec<(String, Range<usize>, f64)> {
        let Some(value) = self.value(key) else { return Vec::new() };
        self.named_numbers(key, value)
    }

    /// The numbers by name of a table such as `{ cloudy = -1.5 }`.
    pub fn named_numbers(
        &mut self,
        key: &str,
        value: Value<'_>,
    ) -> Vec<(String, Range<usize>, f64)> {
        let Some(table) = value.get_ref().as_table() else {
            self.wrong(key, value, "expected names with numbers, as in { cloudy = -1.5 }");
            return Vec::new();
        };
        let mut numbers = Vec::new();
        for (name, value) in table.iter() {
            match number(value.get_ref()) {
                Some(number) => numbers.push((name.get_ref().to_string(), name.span(), number)),
                None => self.wrong(key, value, format!("expected a number for {}", name.get_ref())),
            }
        }
        numbers
    }

    /// Notes the keys that nobody asked for.
    pub fn finish(self) {
        for (name, value) in self.table.iter() {
            let key = name.get_ref().as_ref();
            if self.asked.contains(&key) {
                continue;
            }
            let near = near_names(key, self.asked.iter().copied());
            let what = match near.first() {
                Some(near) => format!("unknown key; did you mean {near}?"),
                None => format!("unknown key; there are {}", self.asked.join(", ")),
            };
            let path = self.path_to(&clean_text(key));
            let span = if name.span().is_empty() { value.span() } else { name.span() };
            self.notebook.note(&span, &path, what);
        }
    }
}

/// A finite number.
fn number(value: &DeValue<'_>) -> Option<f64> {
    let number = match value {
        DeValue::Integer(number) if number.radix() == 10 => number.as_str().parse::<f64>().ok()?,
        DeValue::Float(number) => number.as_str().parse::<f64>().ok()?,
        _ => return None,
    };
    number.is_finite().then_some(number)
}

fn kind(value: &DeValue<'_>) -> &'static str {
    match value {
        DeValue::String(_) => "a text",
        DeValue::Integer(_) | DeValue::Float(_) => "a number",
        DeValue::Boolean(_) => "true or false",
        DeValue::Datetime(_) => "a date",
        DeValue::Array(_) => "a list",
        DeValue::Table(_) => "a table",
    }
}
