//! How samples stand in a signal file, after signal(5).

use super::super::{At, Fault};

/// A storage format.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Storage {
    /// 0: no file, no samples.
    Null,
    /// 16: two's complement, 16 bit, low byte first.
    Bits16,
    /// 24: two's complement, 24 bit, low byte first.
    Bits24,
    /// 32: two's complement, 32 bit, low byte first.
    Bits32,
    /// 61: as 16, high byte first.
    Bits16HighFirst,
    /// 80: 8 bit, offset by 128.
    Offset8,
    /// 160: 16 bit, low byte first, offset by 32768.
    Offset16,
    /// 212: two samples of 12 bit in three bytes.
    Packed12,
}

impl Storage {
    pub fn of(format: u32, at: At) -> Result<Self, Fault> {
        Ok(match format {
            0 => Self::Null,
            16 => Self::Bits16,
            24 => Self::Bits24,
            32 => Self::Bits32,
            61 => Self::Bits16HighFirst,
            80 => Self::Offset8,
            160 => Self::Offset16,
            212 => Self::Packed12,
            8 | 310 | 311 | 508 | 516 | 524 => {
                return Err(Fault::unsupported(
                    format!("{at}: storage format {format} is not read yet"),
                    "store the record in format 16, 24, 32, 61, 80, 160 or 212",
                ));
            }
            _ => {
                return Err(Fault::malformed(
                    at,
                    "storage format 16, 24, 32, 61, 80, 160 or 212",
                    format!("`{format}`"),
                    "correct the signal line, as signal(5) of WFDB describes it",
                ));
            }
        })
    }

    /// Bits of one sample.
    pub fn bits(self) -> u32 {
        match self {
            Self::Null => 0,
            Self::Offset8 => 8,
            Self::Packed12 => 12,
            Self::Bits16 | Self::Bits16HighFirst | Self::Offset16 => 16,
            Self::Bits24 => 24,
            Self::Bits32 => 32,
        }
    }

    /// The code for "no sample": the smallest that the format holds.
    pub fn invalid(self) -> i32 {
        (-1i64 << self.bits().max(1).saturating_sub(1)) as i32
    }

    /// Bytes of so many samples; a last incomplete group counts as far as it is needed.
    pub fn bytes_of(self, samples: u64) -> u64 {
        (samples.saturating_mul(u64::from(self.bits()))).div_ceil(8)
    }

    /// Whole samples in so many bytes.
    pub fn samples_in(self, bytes: u64) -> u64 {
        match self.bits() {
            0 => 0,
            bits => bytes.saturating_mul(8) / u64::from(bits),
        }
    }

    /// Up to `count` samples, as many as the bytes hold.
    pub fn decode(self, bytes: &[u8], count: usize) -> Vec<i32> {
        let mut samples: Vec<i32> = Vec::with_capacity(count);
        match self {
            Self::Null => {}
            Self::Bits16 => samples.extend(words(bytes, count, |[a, b]| i16::from_le_bytes([a, b]).into())),
            Self::Bits16HighFirst => {
                samples.extend(words(bytes, count, |[a, b]| i16::from_be_bytes([a, b]).into()));
            }
            Self::Offset16 => {
                samples.extend(words(bytes, count, |[a, b]| i32::from(u16::from_le_bytes([a, b])) - 32768));
            }
            Self::Bits24 => {
                samples.extend(words(bytes, count, |[a, b, c]| i32::from_le_bytes([0, a, b, c]) >> 8));
            }
            Self::Bits32 => samples.extend(words(bytes, count, i32::from_le_bytes)),
            Self::Offset8 => samples.extend(words(bytes, count, |[a]| i32::from(a) - 128)),
            Self::Packed12 => {
                for group in bytes.chunks(3).take(count.div_ceil(2)) {
                    if let [low, high, ..] = *group {
                        samples.push(signed12(low, high & 0x0f));
                    }
                    if let [_, high, low] = *group {
                        samples.push(signed12(low, high >> 4));
                    }
                }
                samples.truncate(count);
            }
        }
        samples
    }
}

fn words<const N: usize>(
    bytes: &[u8],
    count: usize,
    value: impl Fn([u8; N]) -> i32,
) -> impl Iterator<Item = i32> {
    bytes.as_chunks::<N>().0.iter().take(count).map(move |&word| value(word))
}

fn signed12(low: u8, high: u8) -> i32 {
    i32::from((i16::from(high) << 8 | i16::from(low)) << 4 >> 4)
}
