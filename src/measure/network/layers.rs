//! The layers: sums in one fixed order and without fused steps, so that the width of a machine's vectors
//! changes nothing.

use std::array::from_fn;

/// Values of one lead over time, the channels of one time side by side.
#[derive(Clone, Debug)]
pub(super) struct Map {
    pub channels: usize,
    pub values: Vec<f32>,
}

impl Map {
    pub fn zero(times: usize, channels: usize) -> Self {
        Self { channels, values: vec![0.0; times * channels] }
    }

    pub fn times(&self) -> usize {
        self.values.len() / self.channels
    }

    pub fn add(&mut self, other: &Map) {
        for (own, more) in self.values.iter_mut().zip(&other.values) {
            *own += more;
        }
    }

    /// The same values, `factor` times side by side: the time is so much coarser.
    pub fn folded(mut self, factor: usize) -> Self {
        self.channels *= factor;
        self
    }

    pub fn relu(&self) -> Self {
        Self { channels: self.channels, values: self.values.iter().map(|value| value.max(0.0)).collect() }
    }

    /// Twice as many times, by straight lines: 3/4 of the own value and 1/4 of the neighbour's.
    pub fn doubled(&self) -> Self {
        let (channels, times) = (self.channels, self.times());
        let row = |time: usize| &self.values[time * channels..(time + 1) * channels];
        let mut values = Vec::with_capacity(2 * self.values.len());
        for time in 0..times {
            for neighbour in [time.saturating_sub(1), (time + 1).min(times - 1)] {
                values
                    .extend(row(time).iter().zip(row(neighbour)).map(|(own, next)| 0.75 * own + 0.25 * next));
            }
        }
        Self { channels, values }
    }
}

/// A convolution over time: `width` neighbours, zero outside.
#[derive(Clone, Debug)]
pub(super) struct Conv {
    pub width: usize,
    pub inputs: usize,
    pub outputs: usize,
    /// By output block of 8, then neighbour and input, then output within the block.
    weights: Vec<[f32; 8]>,
    bias: Vec<f32>,
}

/// Times that are computed together.
const TOGETHER: usize = 4;

impl Conv {
    /// `weights` by neighbour, input, output.
    pub fn new(width: usize, inputs: usize, outputs: usize, weights: &[f32], bias: &[f32]) -> Self {
        let blocks = outputs.div_ceil(8);
        let at = |row: usize, output: usize| {
            if output < outputs { weights[row * outputs + output] } else { 0.0 }
        };
        let weights = (0..blocks)
            .flat_map(|block| (0..width * inputs).map(move |row| from_fn(|place| at(row, block * 8 + place))))
            .collect();
        let mut bias = bias.to_vec();
        bias.resize(blocks * 8, 0.0);
        Self { width, inputs, outputs, weights, bias }
    }

    pub fn run(&self, input: &Map) -> Map {
        let times = input.times();
        let rows = self.width * self.inputs;
        let margin = self.width / 2 * self.inputs;
        let mut padded = vec![0.0f32; margin];
        padded.extend_from_slice(&input.values);
        // The last group of times may reach beyond the end.
        padded.resize(margin + input.values.len() + margin + TOGETHER * self.inputs, 0.0);
        let mut out = Map::zero(times, self.outputs);
        for (block, weights) in self.weights.chunks_exact(rows).enumerate() {
            let bias: [f32; 8] = from_fn(|place| self.bias[block * 8 + place]);
            let here = (self.outputs - block * 8).min(8);
            let mut time = 0;
            while time < times {
                let mut sums = [bias; TOGETHER];
                let from =
                    |step: usize| &padded[(time + step) * self.inputs..(time + step) * self.inputs + rows];
                let (a, b, c, d) = (from(0), from(1), from(2), from(3));
                let [mut s0, mut s1, mut s2, mut s3] = sums;
                for row in 0..rows {
                    let weight = &weights[row];
                    let (a, b, c, d) = (a[row], b[row], c[row], d[row]);
                    for place in 0..8 {
                        s0[place] += a * weight[place];
                        s1[place] += b * weight[place];
                        s2[place] += c * weight[place];
                        s3[place] += d * weight[place];
                    }
                }
                sums = [s0, s1, s2, s3];
                for (step, sum) in sums.iter().enumerate().take(times - time) {
                    let at = (time + step) * self.outputs + block * 8;
                    out.values[at..at + here].copy_from_slice(&sum[..here]);
                }
                time += TOGETHER;
            }
        }
        out
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: the definition of a convolution, computed by hand.
    #[test]
    fn a_convolution_is_zero_outside() {
        let conv = Conv::new(3, 1, 1, &[1.0, 10.0, 100.0], &[0.5]);
        let input = Map { channels: 1, values: vec![1.0, 2.0, 3.0, 4.0, 5.0] };
        assert_eq!(conv.run(&input).values, [210.5, 321.5, 432.5, 543.5, 54.5]);
    }

    #[test]
    fn twice_the_times_lie_on_straight_lines() {
        let input = Map { channels: 1, values: vec![0.0, 4.0] };
        assert_eq!(input.doubled().values, [0.0, 1.0, 3.0, 4.0]);
    }
}
