//! The weights, as the training writes them.

use super::layers::Conv;

/// Channels at 125, 62.5, 31.25 and 15.625 samples per second.
pub(super) const CHANNELS: [usize; 4] = [16, 16, 24, 32];
/// Marks of one lead: onset, peak and offset of P and of QRS, peak and offset of T.
pub(super) const MARKS: usize = 8;
/// The twelve leads and "none of them".
pub(super) const LEADS: usize = 13;

/// 32-bit floats, little-endian, in the order of [`Weights::take`]; one network after the other.
const BYTES: &[u8] = include_bytes!("weights.bin");

/// Two convolutions around a way past them.
pub(super) struct Block(pub Conv, pub Conv);

pub(super) struct Weights {
    pub stem: Conv,
    /// What is added for each lead.
    pub lead: Vec<Vec<f32>>,
    pub down: Vec<Conv>,
    pub down_block: Vec<Block>,
    pub down_fuse: Vec<Conv>,
    pub bottom: Block,
    pub bottom_fuse: Conv,
    pub there: Conv,
    pub up: Vec<Conv>,
    pub up_fuse: Vec<Conv>,
    pub up_block: Vec<Block>,
    pub head: Conv,
}

/// Hands out the floats one after the other.
struct Tape<'a>(std::slice::ChunksExact<'a, u8>);

impl Tape<'_> {
    /// `None` when fewer are left.
    fn take(&mut self, count: usize) -> Option<Vec<f32>> {
        let floats = self.0.by_ref().take(count);
        let floats: Vec<f32> =
            floats.map(|bytes| f32::from_le_bytes([bytes[0], bytes[1], bytes[2], bytes[3]])).collect();
        (floats.len() == count).then_some(floats)
    }

    fn conv(&mut self, width: usize, inputs: usize, outputs: usize) -> Option<Conv> {
        let weights = self.take(width * inputs * outputs)?;
        let bias = self.take(outputs)?;
        Some(Conv::new(width, inputs, outputs, &weights, &bias))
    }

    fn block(&mut self, channels: usize) -> Option<Block> {
        Some(Block(self.conv(5, channels, channels)?, self.conv(5, channels, channels)?))
    }
}

impl Weights {
    /// The program's own networks.
    pub fn own() -> Vec<Self> {
        Self::from_bytes(BYTES).expect("a test holds the size of the file")
    }

    /// All networks of a file; `None` when its size is not that of one or several.
    pub fn from_bytes(bytes: &[u8]) -> Option<Vec<Self>> {
        let mut tape = Tape(bytes.chunks_exact(4));
        let mut all = Vec::new();
        while tape.0.len() > 0 {
            all.push(Self::take(&mut tape)?);
        }
        (!all.is_empty()).then_some(all)
    }

    fn take(tape: &mut Tape) -> Option<Self> {
        let c = CHANNELS;
        Some(Self {
            stem: tape.conv(7, 4, c[0])?,
            lead: (0..LEADS).map(|_| tape.take(c[0])).collect::<Option<_>>()?,
            down: (1..4).map(|level| tape.conv(1, 2 * c[level - 1], c[level])).collect::<Option<_>>()?,
            down_block: c.iter().map(|&channels| tape.block(channels)).collect::<Option<_>>()?,
            down_fuse: (1..4).map(|level| tape.conv(1, c[level], c[level])).collect::<Option<_>>()?,
            bottom: tape.block(c[3])?,
            bottom_fuse: tape.conv(1, c[3], c[3])?,
            there: tape.conv(1, c[3], 2)?,
            up: (0..3).map(|level| tape.conv(1, c[level + 1], c[level])).collect::<Option<_>>()?,
            up_fuse: (1..3).map(|level| tape.conv(1, c[level], c[level])).collect::<Option<_>>()?,
            up_block: (0..3).map(|level| tape.block(c[level])).collect::<Option<_>>()?,
            head: tape.conv(1, c[0], MARKS)?,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_file_holds_whole_networks_of_finite_weights() {
        assert!(Weights::from_bytes(BYTES).is_some_and(|all| all.len() == 3));
        assert!(Weights::from_bytes(&BYTES[4..]).is_none());
        assert!(Weights::from_bytes(&[]).is_none());
        let mut tape = Tape(BYTES.chunks_exact(4));
        assert!(tape.take(BYTES.len() / 4).unwrap().iter().all(|weight| weight.is_finite()));
    }
}
