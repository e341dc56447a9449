//! What the network says, as marks.
//!
//! The QRS and the T are the network's. The P is joined with the classical one, which errs by about as much in
//! different places. Where the network is unsure in a lead, the mark is not told there.

use super::network::{self, Estimate};
use super::shape::{Mark, Shape, WaveMarks, median};

/// How much of the P marks is the network's in recordings of many leads (chosen on records that the network
/// had not seen; with few leads the classical P only adds error).
const P_SHARE: f64 = 0.75;
/// Signals from which the leads agree on a classical P.
const MANY: usize = 8;
/// Log-odds from which the network sees a P (own choice, on records that it had not seen).
const P_SEEN: f64 = -1.0;
/// A mark is told in a lead when its distribution is no wider than this, in ms (standard deviation; chosen
/// so that about one mark in a hundred is left out).
const TOLD: [f64; 8] = [46.0, f64::INFINITY, 46.0, 32.0, f64::INFINITY, 50.0, 52.0, 62.0];

/// A beat as the network sees it, in samples of its window.
pub(super) struct Seen {
    marks: Vec<[Estimate; 8]>,
    /// Log-odds that a P stands before the QRS.
    pub p: f64,
    fiducial: f64,
    per_ms: f64,
}

impl Seen {
    pub fn of(shape: &Shape) -> Self {
        let seen = network::see(&network::windows(shape.beat), &shape.beat.names);
        Self { marks: seen.marks, p: seen.p, fiducial: shape.fiducial as f64, per_ms: shape.ms(1.0) }
    }

    /// The standard deviation of each mark over the places where it may stand, median over the signals, in ms.
    pub fn spreads(&self) -> [f64; 8] {
        std::array::from_fn(|mark| median(self.marks.iter().map(|marks| marks[mark].spread)))
    }

    /// Whether the network rather sees a P than none.
    pub fn sees_p(&self) -> bool {
        self.p >= P_SEEN
    }

    /// The P: the network's, in recordings of many leads joined with the classical one. `None` where neither
    /// has one.
    pub fn p(&self, classical: Option<WaveMarks>) -> Option<WaveMarks> {
        if !self.sees_p() {
            return classical.map(|classical| self.joined(classical));
        }
        let core = self.core(0, 2);
        let marks = classical.map(|classical| self.joined(classical));
        Some(marks.map_or_else(
            || WaveMarks { each: self.each(0).collect(), core },
            |marks| WaveMarks { core, ..marks },
        ))
    }

    /// The classical P with the network's part, and no other.
    pub fn joined(&self, classical: WaveMarks) -> WaveMarks {
        let share = if self.marks.len() >= MANY { P_SHARE } else { 1.0 };
        let each = classical.each.iter().zip(self.each(0));
        WaveMarks { each: each.map(|(own, seen)| own.towards(&seen, share)).collect(), ..classical }
    }

    /// The QRS; `core` is where the spatial velocity is high.
    pub fn qrs(&self, core: (usize, usize)) -> WaveMarks {
        WaveMarks { each: self.each(3).collect(), core }
    }

    /// The T, whose onset is not told; `core` is where the spatial velocity is high.
    pub fn t(&self, core: (usize, usize)) -> WaveMarks {
        let mark = |signal: &[Estimate; 8]| Mark {
            onset: None,
            peak: self.place(&signal[6]),
            offset: self.place(&signal[7]),
            told: [true, told(signal, 6), told(signal, 7)],
        };
        WaveMarks { each: self.marks.iter().map(mark).collect(), core }
    }

    fn place(&self, estimate: &Estimate) -> f64 {
        self.fiducial + self.per_ms * estimate.time
    }

    /// Onset, peak and offset of each signal from the mark `first` on.
    fn each(&self, first: usize) -> impl Iterator<Item = Mark> {
        self.marks.iter().map(move |signal| Mark {
            onset: Some(self.place(&signal[first])),
            peak: self.place(&signal[first + 1]),
            offset: self.place(&signal[first + 2]),
            told: std::array::from_fn(|place| told(signal, first + place)),
        })
    }

    /// From one mark to another, medians over the signals.
    fn core(&self, from: usize, to: usize) -> (usize, usize) {
        let middle = |mark: usize| median(self.marks.iter().map(|signal| self.place(&signal[mark])));
        let (from, to) = (middle(from).max(0.0) as usize, middle(to).max(0.0) as usize);
        (from, to.max(from + 2))
    }
}

fn told(signal: &[Estimate; 8], mark: usize) -> bool {
    signal[mark].spread <= TOLD[mark]
}
