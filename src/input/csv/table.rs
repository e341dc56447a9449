//! Text to rows of numbers.

use super::number::{Number, parse};
use crate::input::limits::{MAX_SAMPLES, MAX_SIGNALS, at_most};
use crate::input::voltage::millivolts_per;
use crate::input::{At, Fault};
use ::csv::{ByteRecord, ReaderBuilder, Trim};

/// The numbers of a table, column by column, with its headings as written.
#[derive(Debug)]
pub(super) struct Table {
    /// The header row; `None` when the first row holds numbers.
    pub headings: Option<Vec<String>>,
    /// The row of units below the header row.
    pub units: Option<Vec<String>>,
    pub columns: Vec<Cells>,
    /// The line of each row of numbers.
    pub lines: Vec<u32>,
}

/// The numbers of one column.
#[derive(Debug, Default)]
pub(super) struct Cells {
    /// NaN for an empty cell.
    pub values: Vec<f64>,
    /// The most digits behind the decimal mark.
    pub decimals: u32,
}

/// Whether most cells of the first rows are numbers, or a lonely header row states units.
pub(super) fn looks_like_one(head: &str) -> bool {
    let delimiter = delimiter(head);
    let mut rows = head.lines().filter(|line| !line.trim().is_empty() && !line.starts_with('#'));
    let first = rows.next().unwrap_or_default();
    if rows.clone().next().is_none() {
        return first.to_lowercase().contains("v]");
    }
    // A recording may open with a gap longer than the head.
    let empty = |row: &&str| row.chars().all(|c| c == char::from(delimiter) || matches!(c, '"' | ' ' | '\r'));
    let mut filled = rows.filter(|row| !empty(row)).peekable();
    if filled.peek().is_none() {
        return first.contains(']');
    }
    let (mut numbers, mut cells) = (0, 0);
    for cell in filled.take(20).flat_map(|row| row.split(char::from(delimiter))) {
        let cell = cell.trim().trim_matches('"');
        cells += usize::from(!cell.is_empty());
        numbers += usize::from(parse(cell.as_bytes(), delimiter != b',').is_some());
    }
    numbers > 0 && 2 * numbers >= cells
}

/// The semicolon or tab that splits the first rows, or else the comma.
fn delimiter(text: &str) -> u8 {
    let mut rows = text.lines().filter(|line| !line.trim().is_empty() && !line.starts_with('#')).take(3);
    let first = rows.next().unwrap_or_default();
    let everywhere = |mark: char| first.contains(mark) && rows.clone().all(|row| row.contains(mark));
    match () {
        () if everywhere(';') => b';',
        () if everywhere('\t') => b'\t',
        () => b',',
    }
}

impl Table {
    pub fn parse(text: &str) -> Result<Self, Fault> {
        let delimiter = delimiter(text);
        let mut reader = ReaderBuilder::new()
            .delimiter(delimiter)
            .has_headers(false)
            .flexible(true)
            .trim(Trim::All)
            .comment(Some(b'#'))
            .from_reader(text.as_bytes());
        let mut rows = Rows { comma: delimiter != b',', mark: None };
        let mut table = Self { headings: None, units: None, columns: Vec::new(), lines: Vec::new() };
        let mut record = ByteRecord::new();
        while reader.read_byte_record(&mut record).map_err(unreadable)? {
            let line = record.position().map_or(0, ::csv::Position::line);
            if table.columns.is_empty() {
                at_most(MAX_SIGNALS, "columns in the table", record.len() as u64)?;
                table.columns.resize_with(record.len(), Cells::default);
                if rows.is_header(&record) {
                    table.headings = Some(texts(&record));
                    continue;
                }
            }
            table.same_width(&record, line)?;
            let first = table.columns.first().is_none_or(|column| column.values.is_empty());
            if first && table.headings.is_some() && table.units.is_none() && is_unit_row(&record) {
                table.units = Some(texts(&record));
                continue;
            }
            rows.append(&record, line, &mut table.columns)?;
            table.lines.push(u32::try_from(line).unwrap_or(u32::MAX));
        }
        table.drop_trailing();
        let length = table.columns.first().map_or(0, |column| column.values.len());
        if length == 0 {
            return Err(Fault::unsupported(
                "the table holds no rows of numbers",
                "check that it was copied whole",
            ));
        }
        Ok(table)
    }

    fn same_width(&self, record: &ByteRecord, line: u64) -> Result<(), Fault> {
        if record.len() == self.columns.len() {
            return Ok(());
        }
        Err(Fault::malformed(
            At::Line(line),
            format!("{} cells, as in the first row", self.columns.len()),
            record.len().to_string(),
            "a cell without a value stays empty between its delimiters; check that the file was copied whole",
        ))
    }

    /// A delimiter at the end of every row makes an empty column without a heading.
    fn drop_trailing(&mut self) {
        let unnamed = self.headings.as_ref().is_none_or(|names| names.last().is_some_and(String::is_empty));
        let empty =
            self.columns.last().is_some_and(|column| column.values.iter().all(|value| value.is_nan()));
        if self.columns.len() > 1 && unnamed && empty {
            self.columns.pop();
            for names in [&mut self.headings, &mut self.units].into_iter().flatten() {
                names.pop();
            }
        }
    }
}

/// What holds for all rows.
struct Rows {
    /// Whether a decimal comma may be.
    comma: bool,
    /// The decimal mark of the first number that has one.
    mark: Option<u8>,
}

impl Rows {
    /// A header row holds text; words that stand for a missing number make none.
    fn is_header(&self, record: &ByteRecord) -> bool {
        const MISSING: [&[u8]; 5] = [b"nan", b"na", b"n/a", b"inf", b"-"];
        record.iter().any(|cell| {
            let word = cell.to_ascii_lowercase();
            !cell.is_empty() && parse(cell, self.comma).is_none() && !MISSING.contains(&word.as_slice())
        })
    }

    fn append(&mut self, record: &ByteRecord, line: u64, columns: &mut [Cells]) -> Result<(), Fault> {
        for (index, (cell, column)) in record.iter().zip(columns.iter_mut()).enumerate() {
            if cell.is_empty() {
                column.values.push(f64::NAN);
                continue;
            }
            let number = parse(cell, self.comma).filter(|number| self.same_mark(number));
            let Some(number) = number else { return Err(self.no_number(cell, line, index)) };
            column.values.push(number.value);
            column.decimals = column.decimals.max(number.decimals);
        }
        let rows = columns.first().map_or(0, |column| column.values.len());
        at_most(MAX_SAMPLES, "samples in the table", rows as u64 * columns.len() as u64)
    }

    fn same_mark(&mut self, number: &Number) -> bool {
        match number.mark {
            Some(mark) => *self.mark.get_or_insert(mark) == mark,
            None => true,
        }
    }

    fn no_number(&self, cell: &[u8], line: u64, index: usize) -> Fault {
        let expected = match self.mark {
            Some(b',') => {
                "a number with a decimal comma, as above, or an empty cell where nothing was recorded"
            }
            _ => "a number, or an empty cell where nothing was recorded",
        };
        let shown: String = String::from_utf8_lossy(cell).chars().take(40).collect();
        Fault::malformed(
            At::Cell { line, column: index as u64 + 1 },
            expected,
            format!("`{shown}`"),
            "correct the cell, or empty it",
        )
    }
}

fn is_unit_row(record: &ByteRecord) -> bool {
    let known = |cell: &[u8]| {
        let text = String::from_utf8_lossy(cell);
        cell.is_empty() || millivolts_per(&text).is_some() || ["s", "ms"].contains(&text.as_ref())
    };
    record.iter().any(|cell| !cell.is_empty()) && record.iter().all(known)
}

fn texts(record: &ByteRecord) -> Vec<String> {
    record.iter().map(|cell| String::from_utf8_lossy(cell).into_owned()).collect()
}

fn unreadable(error: ::csv::Error) -> Fault {
    let line = error.position().map_or(1, ::csv::Position::line);
    Fault::malformed(At::Line(line), "a row of cells", error.to_string(), "correct the row")
}
