//! A steady rhythm by its numbers, for sweeps.

use super::{Beat, Breath, SplitMix64, Strip, Wave};

/// A steady rhythm. All durations are in s; what is `None` is left out.
#[derive(Clone, Copy, Debug)]
pub struct Recipe {
    /// Samples per second.
    pub sampling: f64,
    /// Length of the strip.
    pub seconds: f64,
    /// RR interval.
    pub rr: f64,
    /// Standard deviation of RR.
    pub rr_scatter: f64,
    /// P onset to QRS onset.
    pub pr: Option<f64>,
    /// QRS onset to the onset of the P behind it.
    pub rp: Option<f64>,
    /// QRS duration.
    pub qrs: f64,
    /// QRS onset to T end.
    pub qt: Option<f64>,
    /// Factor on the P before the QRS, whose largest lead (II) shows 0.15 mV at 1.
    pub p_gain: f64,
    /// Factor on the P behind the QRS, whose largest lead (III) shows −0.22 mV at 1.
    pub retrograde_gain: f64,
    /// Factor on the T wave.
    pub t_gain: f64,
    /// Breathing.
    pub breath: Breath,
    /// White noise in each lead, in µV.
    pub noise_uv: f64,
    /// Of noise and scatter.
    pub seed: u64,
}

impl Recipe {
    /// Sinus rhythm at 72/min, ten seconds at 500 samples per second, with little noise.
    pub const SINUS: Self = Self {
        sampling: 500.0,
        seconds: 10.0,
        rr: 0.833,
        rr_scatter: 0.010,
        pr: Some(0.160),
        rp: None,
        qrs: 0.092,
        qt: Some(0.380),
        p_gain: 1.0,
        retrograde_gain: 1.0,
        t_gain: 1.0,
        breath: Breath::QUIET,
        noise_uv: 6.0,
        seed: 1,
    };

    /// A tachycardia at 175/min with a P 110 ms behind each QRS onset.
    pub const TACHYCARDIA: Self = Self {
        rr: 0.343,
        rr_scatter: 0.0015,
        pr: None,
        rp: Some(0.110),
        qt: Some(0.276),
        t_gain: 0.8,
        ..Self::SINUS
    };

    /// A beat with its QRS onset at `at`.
    pub fn beat(&self, at: f64) -> Beat {
        let qrs = Wave::qrs().stretched(self.qrs / 0.100);
        // The ST segment rises into T from 15 ms behind the QRS on.
        let t_onset = self.qrs + 0.015;
        Beat {
            p: self.pr.map(|pr| (at - pr, Wave::sinus_p().scaled(self.p_gain))),
            qrs: Some((at, qrs)),
            t: self.qt.map(|qt| (at + t_onset, Wave::t(qt - t_onset).scaled(self.t_gain))),
            retrograde_p: self.rp.map(|rp| (at + rp, Wave::retrograde_p().scaled(self.retrograde_gain))),
        }
    }

    /// The strip.
    pub fn strip(&self) -> Strip {
        let mut random = SplitMix64::new(self.seed ^ 0x5EED);
        let mut beats = Vec::new();
        let mut at = 0.2137;
        while at < self.seconds {
            beats.push(self.beat(at));
            at += self.rr + self.rr_scatter * random.normal();
        }
        Strip {
            rate: self.sampling,
            seconds: self.seconds,
            beats,
            breath: self.breath,
            noise_uv: self.noise_uv,
            seed: self.seed,
        }
    }
}
