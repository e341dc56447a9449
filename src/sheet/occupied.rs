//! Where a page is already drawn on, so that no text is set on a trace.

use super::layout::Area;

/// Width of a bin, in mm.
const BIN: f64 = 0.5;

/// Heights that are taken, bin by bin along x.
pub(super) struct Occupied {
    left: f64,
    bins: Vec<Vec<(f64, f64)>>,
}

impl Occupied {
    /// Nothing taken from `left` to `right`.
    pub fn new(left: f64, right: f64) -> Self {
        let count = ((right - left) / BIN).ceil().max(0.0) as usize + 1;
        Self { left, bins: vec![Vec::new(); count] }
    }

    fn bin(&self, x: f64) -> usize {
        (((x - self.left) / BIN).max(0.0) as usize).min(self.bins.len() - 1)
    }

    /// A line drawn through points that go right, `reach` to either side of it.
    pub fn line(&mut self, points: &[(f64, f64)], reach: f64) {
        for pair in points.windows(2) {
            let ((x0, y0), (x1, y1)) = (pair[0], pair[1]);
            let (low, high) = (y0.min(y1) - reach, y0.max(y1) + reach);
            let last = self.bin(x1 + reach);
            for bin in self.bin(x0 - reach)..=last {
                // The same line's edges in one bin become one stretch.
                match self.bins[bin].last_mut() {
                    Some(taken) if low <= taken.1 && taken.0 <= high => {
                        *taken = (taken.0.min(low), taken.1.max(high));
                    }
                    _ => self.bins[bin].push((low, high)),
                }
            }
        }
    }

    /// A box, such as that of a text.
    pub fn area(&mut self, area: Area) {
        for bin in self.bin(area.left)..=self.bin(area.right()) {
            self.bins[bin].push((area.top, area.bottom()));
        }
    }

    /// How many bins of the area are taken somewhere between its top and bottom.
    pub fn taken(&self, area: Area) -> usize {
        (self.bin(area.left)..=self.bin(area.right()))
            .filter(|&bin| self.bins[bin].iter().any(|&(low, high)| low < area.bottom() && area.top < high))
            .count()
    }
}
