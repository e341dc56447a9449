//! How samples stand in a signal file, after signal(5).

use crate::input::{At, Fault};

/// A storage format.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Storage {
    /// 0: no file, no samples.
    Null,
    /// 8: first differences of 8 bit, from the initial value in the header.
    Differences8,
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
    /// 310: three samples of 10 bit in two words of 16 bit, the third in the words' high bits.
    Packed10InWords,
    /// 311: three samples of 10 bit, from the low end of 32 bit.
    Packed10,
    /// 508: 8 bit, in a FLAC stream with one channel for each signal.
    Flac8,
    /// 516: 16 bit in a FLAC stream.
    Flac16,
    /// 524: 24 bit in a FLAC stream.
    Flac24,
}

/// The formats that are read, as messages list them.
pub(super) const READ: &str = "8, 16, 24, 32, 61, 80, 160, 212, 310, 311, 508, 516 or 524";

impl Storage {
    /// By the number in the header.
    pub fn of(format: u32, at: At) -> Result<Self, Fault> {
        Ok(match format {
            0 => Self::Null,
            8 => Self::Differences8,
            16 => Self::Bits16,
            24 => Self::Bits24,
            32 => Self::Bits32,
            61 => Self::Bits16HighFirst,
            80 => Self::Offset8,
            160 => Self::Offset16,
            212 => Self::Packed12,
            310 => Self::Packed10InWords,
            311 => Self::Packed10,
            508 => Self::Flac8,
            516 => Self::Flac16,
            524 => Self::Flac24,
            _ => {
                return Err(Fault::malformed(
                    at,
                    format!("storage format {READ}"),
                    format!("`{format}`"),
                    "correct the signal line, as signal(5) of WFDB describes it",
                ));
            }
        })
    }

    /// Whether the samples stand in a FLAC stream, whose bytes say nothing of their count.
    pub fn is_flac(self) -> bool {
        matches!(self, Self::Flac8 | Self::Flac16 | Self::Flac24)
    }

    /// Bits of one sample's value.
    pub fn bits(self) -> u32 {
        match self {
            Self::Null => 0,
            Self::Offset8 | Self::Flac8 => 8,
            Self::Packed10 | Self::Packed10InWords => 10,
            Self::Packed12 => 12,
            // Differences add up to a value of the usual size.
            Self::Bits16 | Self::Bits16HighFirst | Self::Offset16 | Self::Differences8 | Self::Flac16 => 16,
            Self::Bits24 | Self::Flac24 => 24,
            Self::Bits32 => 32,
        }
    }

    /// The code for "no sample": the smallest value that the format holds.
    pub fn invalid(self) -> Option<i32> {
        match self {
            Self::Null | Self::Differences8 => None,
            _ => Some((-1i64 << (self.bits() - 1)) as i32),
        }
    }

    /// Samples and bytes of one group: the smallest count that fills whole bytes; 0 bytes where none is
    /// backed by a fixed number of them.
    fn group(self) -> (u64, u64) {
        match self {
            Self::Null | Self::Flac8 | Self::Flac16 | Self::Flac24 => (1, 0),
            Self::Differences8 | Self::Offset8 => (1, 1),
            Self::Bits16 | Self::Bits16HighFirst | Self::Offset16 => (1, 2),
            Self::Bits24 => (1, 3),
            Self::Bits32 => (1, 4),
            Self::Packed12 => (2, 3),
            Self::Packed10 | Self::Packed10InWords => (3, 4),
        }
    }

    /// Bytes that the first `samples` of a group need; fewer than a group may stand at the end of a file.
    fn started_group(self, samples: u64) -> u64 {
        match self {
            Self::Packed10InWords => 2 * samples,
            _ => (samples * u64::from(self.bits())).div_ceil(8),
        }
    }

    /// Bytes of so many samples.
    pub fn bytes_of(self, samples: u64) -> u64 {
        let (count, bytes) = self.group();
        (samples / count).saturating_mul(bytes).saturating_add(match samples % count {
            0 => 0,
            rest => self.started_group(rest),
        })
    }

    /// Whole samples in so many bytes.
    pub fn samples_in(self, bytes: u64) -> u64 {
        let (count, group) = self.group();
        if group == 0 {
            return 0;
        }
        let rest = bytes % group;
        let started = (1..count).take_while(|&samples| self.started_group(samples) <= rest).count() as u64;
        (bytes / group).saturating_mul(count).saturating_add(started)
    }

    /// Up to `count` samples, as many as the bytes hold. Differences are not yet summed.
    pub fn decode(self, bytes: &[u8], count: usize) -> Vec<i32> {
        let mut samples: Vec<i32> =
            Vec::with_capacity(count.min(self.samples_in(bytes.len() as u64) as usize));
        match self {
            Self::Null | Self::Flac8 | Self::Flac16 | Self::Flac24 => {}
            Self::Differences8 => samples.extend(words(bytes, count, |[a]| i32::from(a as i8))),
            Self::Offset8 => samples.extend(words(bytes, count, |[a]| i32::from(a) - 128)),
            Self::Bits16 => samples.extend(words(bytes, count, |pair| i16::from_le_bytes(pair).into())),
            Self::Bits16HighFirst => {
                samples.extend(words(bytes, count, |pair| i16::from_be_bytes(pair).into()));
            }
            Self::Offset16 => {
                samples.extend(words(bytes, count, |pair| i32::from(u16::from_le_bytes(pair)) - 32768));
            }
            Self::Bits24 => {
                samples.extend(words(bytes, count, |[a, b, c]| i32::from_le_bytes([0, a, b, c]) >> 8));
            }
            Self::Bits32 => samples.extend(words(bytes, count, i32::from_le_bytes)),
            Self::Packed12 => {
                for group in bytes.chunks(3).take(count.div_ceil(2)) {
                    if let [low, high, ..] = *group {
                        samples.push(signed(u32::from(low) | u32::from(high & 0x0f) << 8, 12));
                    }
                    if let [_, high, low] = *group {
                        samples.push(signed(u32::from(low) | u32::from(high >> 4) << 8, 12));
                    }
                }
            }
            Self::Packed10InWords => {
                for group in bytes.chunks(4).take(count.div_ceil(3)) {
                    let word = |first: usize| match group.get(first..first + 2) {
                        Some(&[low, high]) => Some(u32::from(low) | u32::from(high) << 8),
                        _ => None,
                    };
                    let (one, two) = (word(0), word(2));
                    samples.extend([one, two].into_iter().flatten().map(|word| signed(word >> 1, 10)));
                    if let (Some(one), Some(two)) = (one, two) {
                        samples.push(signed(one >> 11 | two >> 11 << 5, 10));
                    }
                }
            }
            Self::Packed10 => {
                for group in bytes.chunks(4).take(count.div_ceil(3)) {
                    let mut word = [0; 4];
                    word[..group.len()].copy_from_slice(group);
                    let word = u32::from_le_bytes(word);
                    let whole = [2, 3, 4].into_iter().filter(|&needed| needed <= group.len()).count();
                    samples
                        .extend([0, 10, 20].into_iter().take(whole).map(|shift| signed(word >> shift, 10)));
                }
            }
        }
        samples.truncate(count);
        samples
    }
}

/// Up to `count` words of `N` bytes each.
fn words<const N: usize>(
    bytes: &[u8],
    count: usize,
    value: impl Fn([u8; N]) -> i32,
) -> impl Iterator<Item = i32> {
    bytes.as_chunks::<N>().0.iter().take(count).map(move |&word| value(word))
}

/// The low `bits` as two's complement.
fn signed(word: u32, bits: u32) -> i32 {
    let unused = 32 - bits;
    ((word << unused) as i32) >> unused
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: signal(5), the layouts of formats 212, 310 and 311 in words (r); the samples are chosen by hand.
    #[test]
    fn packed_samples_unpack_with_their_signs() {
        assert_eq!(Storage::Packed12.decode(&[0x01, 0xf8, 0xff], 2), [-2047, -1]);
        assert_eq!(Storage::Packed10.decode(&[0xff, 0x03, 0x00, 0x20], 3), [-1, 0, -512]);
        assert_eq!(Storage::Packed10InWords.decode(&[0xfe, 0x07, 0x02, 0x80], 3), [-1, 1, -512]);
    }

    #[test]
    fn a_started_group_at_the_end_counts_as_far_as_it_goes() {
        for storage in [Storage::Packed12, Storage::Packed10, Storage::Packed10InWords, Storage::Bits24] {
            for samples in 0..20 {
                let bytes = storage.bytes_of(samples);
                assert!(storage.samples_in(bytes) >= samples, "{storage:?} {samples}");
                assert!(bytes == 0 || storage.samples_in(bytes - 1) < samples, "{storage:?} {samples}");
                let decoded = storage.decode(&vec![0; bytes as usize], samples as usize);
                assert_eq!(decoded.len() as u64, samples, "{storage:?}");
            }
        }
        assert_eq!(Storage::Packed10.bytes_of(1019), 1359);
        assert_eq!(Storage::Packed10InWords.bytes_of(1018), 1358);
    }
}
