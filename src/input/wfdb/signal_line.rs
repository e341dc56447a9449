//! A signal line: `file format[xSPF][:skew][+offset] [gain[(baseline)][/units] [resolution [zero [initial
//! [checksum [block [description]]]]]]]`.

use crate::input::{At, Fault};

/// What a signal line states; `None` is "not stated".
#[derive(Debug)]
pub(super) struct SignalLine {
    /// The line, for messages.
    pub at: At,
    pub file: String,
    pub format: u32,
    pub samples_per_frame: u32,
    /// Frames by which the signal lags in the file.
    pub skew: u64,
    /// Bytes before the first sample.
    pub offset: u64,
    /// Counts per unit; `None` when absent or 0: not calibrated.
    pub gain: Option<f64>,
    /// The count that stands for 0 of the unit.
    pub baseline: i64,
    pub unit: Option<String>,
    /// Bits of the converter.
    pub converter_bits: Option<u32>,
    pub converter_zero: i64,
    pub initial: Option<i64>,
    pub checksum: Option<i64>,
    /// Empty when absent.
    pub description: String,
}

impl SignalLine {
    pub fn parse(line: &str, number: u64) -> Result<Self, Fault> {
        let at = At::Line(number);
        let mut rest = line;
        let file = token(&mut rest).unwrap_or_default().to_owned();
        let layout = token(&mut rest).ok_or_else(|| wrong(at, "a storage format", "the end of the line"))?;
        let Layout { format, samples_per_frame, skew, offset } = Layout::parse(layout, at)?;
        let (gain, baseline, unit) = match token(&mut rest) {
            Some(text) => scale_of(text, at)?,
            None => (None, None, None),
        };
        let converter_bits = integer(&mut rest, "the converter's resolution in bits", at)?;
        let converter_zero = integer(&mut rest, "the converter's zero", at)?.unwrap_or(0);
        let initial = integer(&mut rest, "the first sample", at)?;
        let checksum = integer(&mut rest, "a checksum", at)?;
        integer(&mut rest, "a block size", at)?;
        Ok(Self {
            at,
            file,
            format,
            samples_per_frame,
            skew,
            offset,
            gain,
            baseline: baseline.unwrap_or(converter_zero),
            unit,
            converter_bits: converter_bits.and_then(|bits| u32::try_from(bits).ok()).filter(|bits| *bits > 0),
            converter_zero,
            initial,
            checksum,
            description: rest.trim().to_owned(),
        })
    }
}

struct Layout {
    format: u32,
    samples_per_frame: u32,
    skew: u64,
    offset: u64,
}

impl Layout {
    fn parse(text: &str, at: At) -> Result<Self, Fault> {
        let bad = || {
            let form = "a storage format such as `16`, `16x4`, `212:3` or `16+24`";
            wrong(at, form, &format!("`{text}`"))
        };
        let mut rest = text;
        let format = digits(&mut rest).ok_or_else(bad)?;
        let mut layout = Self {
            format: u32::try_from(format).map_err(|_| bad())?,
            samples_per_frame: 1,
            skew: 0,
            offset: 0,
        };
        while let Some(mark) = rest.chars().next() {
            rest = &rest[mark.len_utf8()..];
            let value = digits(&mut rest).ok_or_else(bad)?;
            match mark {
                'x' if value > 0 => layout.samples_per_frame = u32::try_from(value).map_err(|_| bad())?,
                ':' => layout.skew = value,
                '+' => layout.offset = value,
                _ => return Err(bad()),
            }
        }
        Ok(layout)
    }
}

/// Counts per unit of any converter and unit; beyond, values could overflow.
const GAINS: std::ops::RangeInclusive<f64> = 1e-9..=1e15;

type Scale = (Option<f64>, Option<i64>, Option<String>);

fn scale_of(text: &str, at: At) -> Result<Scale, Fault> {
    let bad = || wrong(at, "a gain such as `1000`, `1000/mV` or `200(1024)/mV`", &format!("`{text}`"));
    let (number, unit) = match text.split_once('/') {
        Some((number, unit)) => (number, Some(unit.to_owned()).filter(|unit| !unit.is_empty())),
        None => (text, None),
    };
    let (gain, baseline) = match number.split_once('(') {
        Some((gain, baseline)) => {
            let baseline = baseline.strip_suffix(')').ok_or_else(bad)?;
            (gain, Some(baseline.parse().map_err(|_| bad())?))
        }
        None => (number, None),
    };
    let gain: f64 = gain.parse().map_err(|_| bad())?;
    if !(gain == 0.0 || GAINS.contains(&gain.abs())) {
        return Err(bad());
    }
    Ok((Some(gain).filter(|gain| *gain != 0.0), baseline, unit))
}

/// The next word; what follows it stays in `rest`.
fn token<'a>(rest: &mut &'a str) -> Option<&'a str> {
    let text = rest.trim_start();
    let end = text.find(|c: char| c.is_ascii_whitespace()).unwrap_or(text.len());
    let (word, after) = text.split_at(end);
    *rest = after;
    (!word.is_empty()).then_some(word)
}

fn digits(rest: &mut &str) -> Option<u64> {
    let end = rest.find(|c: char| !c.is_ascii_digit()).unwrap_or(rest.len());
    let (number, after) = rest.split_at(end);
    *rest = after;
    number.parse().ok()
}

fn integer(rest: &mut &str, expected: &str, at: At) -> Result<Option<i64>, Fault> {
    match token(rest) {
        Some(text) => match text.parse() {
            Ok(number) => Ok(Some(number)),
            Err(_) => Err(wrong(at, expected, &format!("`{text}`"))),
        },
        None => Ok(None),
    }
}

fn wrong(at: At, expected: &str, found: &str) -> Fault {
    Fault::malformed(at, expected, found, "correct the signal line, as header(5) of WFDB describes it")
}
