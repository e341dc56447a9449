//! Reading a table key by key, gathering every violation instead of stopping at the first.

use super::Violation;
use crate::sheet::Ink;
use std::ops::Range;
use toml::Spanned;
use toml::de::{DeTable, DeValue};

/// Where violations go; turns places in the text into lines.
pub(super) struct Report<'t> {
    text: &'t str,
    pub violations: Vec<Violation>,
}

impl<'t> Report<'t> {
    pub fn new(text: &'t str) -> Self {
        Self { text, violations: Vec::new() }
    }

    pub fn add(&mut self, place: &Range<usize>, what: impl Into<String>) {
        let before = self.text.get(..place.start).unwrap_or(self.text);
        let line = before.matches('\n').count() + 1;
        self.violations.push(Violation { line, what: what.into() });
    }
}

/// One table being read.
pub(super) struct Reader<'a> {
    path: String,
    place: Range<usize>,
    table: Option<&'a DeTable<'a>>,
    known: Vec<&'static str>,
}

impl<'a> Reader<'a> {
    pub fn root(table: &'a Spanned<DeTable<'a>>) -> Self {
        Self { path: String::new(), place: 0..0, table: Some(table.get_ref()), known: Vec::new() }
    }

    /// The place of the table itself.
    pub fn place(&self) -> Range<usize> {
        self.place.clone()
    }

    /// The place of a key's value, or of the table where it is missing.
    pub fn place_of(&self, key: &str) -> Range<usize> {
        self.table.and_then(|table| table.get(key)).map_or(self.place(), |value| value.span())
    }

    fn name(&self, key: &str) -> String {
        if self.path.is_empty() { key.to_owned() } else { format!("{}.{key}", self.path) }
    }

    /// The value of a key, which must be there; a table that is itself missing has been reported.
    pub fn value(&mut self, key: &'static str, report: &mut Report) -> Option<&'a Spanned<DeValue<'a>>> {
        self.known.push(key);
        let found = self.table?.get(key);
        if found.is_none() {
            report.add(&self.place, format!("`{}` is missing", self.name(key)));
        }
        found
    }

    pub fn text(&mut self, key: &'static str, report: &mut Report) -> Option<&'a str> {
        let value = self.value(key, report)?;
        let text = value.get_ref().as_str();
        if text.is_none() {
            report.add(&value.span(), format!("`{}` must be a text in quotes", self.name(key)));
        }
        text
    }

    /// A number within `range`.
    pub fn number(&mut self, key: &'static str, range: Range<f64>, report: &mut Report) -> f64 {
        let fallback = range.start;
        let Some(value) = self.value(key, report) else { return fallback };
        let number = match value.get_ref() {
            DeValue::Integer(integer) if integer.radix() == 10 => integer.as_str().parse::<f64>().ok(),
            DeValue::Float(float) => float.as_str().parse().ok(),
            _ => None,
        };
        let name = self.name(key);
        match number.filter(|number| number.is_finite()) {
            None => report.add(&value.span(), format!("`{name}` must be a number of mm")),
            Some(number) if number < range.start || number > range.end => report.add(
                &value.span(),
                format!("`{name}` must be {} to {} mm, found {number}", range.start, range.end),
            ),
            Some(number) => return number,
        }
        fallback
    }

    /// A colour written `#rrggbb`.
    pub fn ink(&mut self, key: &'static str, report: &mut Report) -> Ink {
        let black = Ink { r: 0, g: 0, b: 0 };
        let Some(text) = self.text(key, report) else { return black };
        let digits = text.strip_prefix('#').filter(|digits| digits.len() == 6);
        match digits.and_then(|digits| u32::from_str_radix(digits, 16).ok()) {
            Some(rgb) => {
                let [_, r, g, b] = rgb.to_be_bytes();
                Ink { r, g, b }
            }
            None => {
                let name = self.name(key);
                report.add(
                    &self.place_of(key),
                    format!("`{name}` must be a colour like \"#e09a8b\", found {text:?}"),
                );
                black
            }
        }
    }

    /// A table inside; an empty one where it is missing, so that reading goes on.
    pub fn table(&mut self, key: &'static str, report: &mut Report) -> Reader<'a> {
        let path = self.name(key);
        let value = self.value(key, report);
        let table = value.and_then(|value| value.get_ref().as_table());
        if let (Some(value), None) = (value, table) {
            report.add(&value.span(), format!("`{path}` must be a table"));
        }
        Reader { path, place: self.place_of(key), table, known: Vec::new() }
    }

    /// Reports every key that was not asked for.
    pub fn finish(self, report: &mut Report) {
        for key in self.table.into_iter().flat_map(|table| table.keys()) {
            if !self.known.contains(&key.get_ref().as_ref()) {
                let known = self.known.join(", ");
                report.add(
                    &key.span(),
                    format!("`{}` is not known; known are {known}", self.name(key.get_ref())),
                );
            }
        }
    }
}
