//! What the header states of one signal.

use super::field::Field;
use crate::input::Fault;
use crate::input::voltage::millivolts_per;
use crate::recording::Quantity;

/// One signal.
pub(super) struct SignalHeader {
    pub label: String,
    /// As written; empty when none is stated.
    pub unit: String,
    pub prefilter: String,
    /// Samples in each data record, at least 1.
    pub samples: u64,
    /// Whether it holds annotations instead of samples.
    pub annotations: bool,
    scale: Scale,
}

/// Two counts and what they stand for.
#[derive(Clone, Copy, Default)]
struct Scale {
    digital: [f64; 2],
    physical: f64,
    per_count: f64,
}

/// Widths of the fields, in their order: each stands for all signals, then the next.
const WIDTHS: [usize; 9] = [16, 80, 8, 8, 8, 8, 8, 80, 8];

/// Units per count of any converter; beyond, values could overflow or vanish.
const STEPS: std::ops::RangeInclusive<f64> = 1e-15..=1e12;

impl SignalHeader {
    /// Signal `index` of `count`. One that is labelled `special` holds annotations.
    pub fn parse(header: &[u8], index: usize, count: usize, special: Option<&str>) -> Result<Self, Fault> {
        let field = |number: usize| {
            let before: usize = WIDTHS.iter().take(number).sum();
            let width = WIDTHS.get(number).copied().unwrap_or_default();
            Field::of(header, 256 + count * before + index * width, width)
        };
        let label = field(0).text();
        let samples = field(8);
        let expected = "the samples of a data record, above 0";
        let samples = match samples.whole(expected)? {
            number if (1..=i64::from(i32::MAX)).contains(&number) => number as u64,
            _ => return Err(samples.wrong(expected)),
        };
        let annotations = special == Some(label.as_str());
        let scale = if annotations {
            Scale::default()
        } else {
            Scale::parse([field(3), field(4)], [field(5), field(6)])?
        };
        Ok(Self { label, unit: field(2).text(), prefilter: field(7).text(), samples, annotations, scale })
    }

    /// What is measured.
    pub fn quantity(&self) -> Quantity {
        match (millivolts_per(&self.unit), self.unit.as_str()) {
            (Some(_), _) => Quantity::Voltage,
            (None, "") => Quantity::Other(Quantity::NO_UNIT.to_owned()),
            (None, unit) => Quantity::Other(unit.to_owned()),
        }
    }

    /// The size of one count, in the unit of the samples.
    pub fn step(&self) -> f64 {
        (self.scale.per_count * self.factor()).abs()
    }

    /// A count as a value in the unit of the samples.
    pub fn value(&self, count: f64) -> f64 {
        let Scale { digital: [lowest, _], physical, per_count } = self.scale;
        ((count - lowest) * per_count + physical) * self.factor()
    }

    /// The smallest and largest count that the header allows.
    pub fn digital_limits(&self) -> [f64; 2] {
        self.scale.digital
    }

    fn factor(&self) -> f64 {
        millivolts_per(&self.unit).unwrap_or(1.0)
    }
}

impl Scale {
    /// A physical minimum above the maximum is legal, and turns the signal upside down.
    fn parse(physical: [Field; 2], digital: [Field; 2]) -> Result<Self, Fault> {
        let [low, high] =
            [digital[0].whole("the digital minimum")?, digital[1].whole("the digital maximum")?];
        if high <= low {
            return Err(digital[1].wrong(&format!("a digital maximum above the minimum of {low}")));
        }
        let [low, high] = [low as f64, high as f64];
        let from = physical[0].number("the physical minimum")?;
        let to = physical[1].number("the physical maximum")?;
        let per_count = (to - from) / (high - low);
        if !STEPS.contains(&per_count.abs()) {
            return Err(physical[1].wrong(&format!("a physical maximum other than the minimum of {from}")));
        }
        Ok(Self { digital: [low, high], physical: from, per_count })
    }
}
