//! The same patient's sinus beat as the expected background.
//!
//! Both QRS complexes are laid over each other, each lead's gain is fitted over the QRS, and ST-T is read faster or
//! slower by one factor for all leads, as repolarisation follows the rate.

use super::linear::dot;
use super::window::Curves;
use crate::measure::Measurements;

/// Least correlation of the first part of both QRS complexes for a comparison (own choice).
pub(super) const LEAST_LIKENESS: f64 = 0.90;
/// Largest shift between the two QRS onsets as marked, in ms.
const LARGEST_SHIFT: i32 = 20;
/// Each lead's gain against the sinus beat stays inside this.
const GAIN: (f64, f64) = (0.8, 1.25);
/// The factor by which ST-T is read faster: first, last, step.
const FACTORS: (f64, f64, f64) = (1.0, 2.6, 0.08);

/// A sinus beat laid over a tachycardia beat.
pub(super) struct Overlay<'a> {
    sinus: &'a Curves,
    /// Which of the sinus curves stands for each lead, and its gain.
    leads: Vec<(usize, f64)>,
    /// What is added to a time before the sinus beat is read, in ms.
    shift: f64,
    /// QRS end and T end of the sinus beat, in ms from its QRS onset.
    qrs_end: f64,
    t_end: f64,
    /// Its P onset, before 0.
    p: Option<f64>,
    /// Behind this time the sinus beat is not read: the next P or the end.
    last: f64,
    /// Correlation over the first part of the QRS.
    pub likeness: f64,
}

/// The sinus beat's marks that are needed, in ms from its QRS onset.
#[derive(Clone, Copy, Debug)]
pub(super) struct Marks {
    pub qrs_end: f64,
    pub t_end: f64,
    /// P onset, before 0.
    pub p: Option<f64>,
    /// RR.
    pub rr: f64,
}

impl Marks {
    /// `None` when QRS or T are not marked.
    ///
    /// QRS onset counts as marked `late` ms late.
    pub fn of(measurements: &Measurements, late: f64) -> Option<Self> {
        let marks = measurements.representative.as_ref()?;
        let onset = marks.qrs.onset?;
        let from_onset = |time: crate::units::Seconds| (time - onset).ms() + late;
        Some(Self {
            qrs_end: from_onset(marks.qrs.offset),
            t_end: from_onset(marks.t.as_ref()?.offset),
            p: marks.p.as_ref().and_then(|p| p.onset).map(from_onset),
            rr: measurements.rr.value()?.ms(),
        })
    }
}

impl<'a> Overlay<'a> {
    /// Lays the beats over each other; `None` when a lead of the tachycardia is missing in sinus rhythm.
    pub fn of(tachycardia: &Curves, qrs_end: f64, sinus: &'a Curves, marks: &Marks) -> Option<Self> {
        let leads: Option<Vec<usize>> =
            tachycardia.leads.iter().map(|lead| sinus.leads.iter().position(|own| own == lead)).collect();
        let leads = leads?;
        let stretch = |curves: &Curves, from: f64, to: f64, shift: f64| -> Vec<Vec<f64>> {
            let times: Vec<f64> =
                (0..).map(|step| from + 2.0 * f64::from(step)).take_while(|time| *time < to).collect();
            let values: Vec<Vec<f64>> = times.iter().map(|time| curves.at(time + shift)).collect();
            (0..curves.leads.len()).map(|lead| centred(values.iter().map(|values| values[lead]))).collect()
        };
        let own = stretch(tachycardia, -16.0, 60.0, 0.0);
        let correlation = |shift: f64| {
            let other = stretch(sinus, -16.0, 60.0, shift);
            let (mut both, mut first, mut second) = (0.0, 0.0, 0.0);
            for (own, &place) in own.iter().zip(&leads) {
                both += dot(own, &other[place]);
                first += dot(own, own);
                second += dot(&other[place], &other[place]);
            }
            if first * second > 0.0 { both / (first * second).sqrt() } else { 0.0 }
        };
        let (likeness, shift) = (-LARGEST_SHIFT..=LARGEST_SHIFT)
            .map(|shift| (correlation(f64::from(shift)), f64::from(shift)))
            .max_by(|a, b| a.0.total_cmp(&b.0))?;
        let until = qrs_end.min(marks.qrs_end) - 15.0;
        let (own, other) = (stretch(tachycardia, -10.0, until, 0.0), stretch(sinus, -10.0, until, shift));
        let leads = own
            .iter()
            .zip(leads)
            .map(|(own, place)| {
                let energy = dot(&other[place], &other[place]);
                let gain = if energy > 0.0 { dot(own, &other[place]) / energy } else { 1.0 };
                (place, gain.clamp(GAIN.0, GAIN.1))
            })
            .collect();
        let next_p = marks.p.map_or(f64::INFINITY, |p| marks.rr + p);
        let last = (marks.t_end + 60.0).min(next_p - 10.0).min(sinus.end - 25.0);
        Some(Self {
            sinus,
            leads,
            shift,
            qrs_end: marks.qrs_end,
            t_end: marks.t_end,
            p: marks.p,
            last,
            likeness,
        })
    }

    /// The factors by which ST-T may be read faster, so that T still ends near the next QRS.
    pub fn factors(&self, rr: f64) -> impl Iterator<Item = f64> {
        let (first, last, step) = FACTORS;
        let count = ((last - first) / step).round() as u32;
        let st_t = self.t_end - self.qrs_end;
        let latest = rr + 40.0 - self.qrs_end;
        (0..count)
            .map(move |index| first + step * f64::from(index))
            .filter(move |factor| st_t / factor < latest)
    }

    /// The sinus beat's own P: its length in ms and, at times from its onset, the potentials over the line from its
    /// begin to QRS onset. `None` where no P is marked.
    pub fn p(&self) -> Option<(f64, impl Fn(f64) -> Vec<f64>)> {
        let onset = self.p?;
        let read = move |time: f64| {
            let values = self.sinus.at(time + self.shift);
            self.leads.iter().map(|(place, gain)| gain * values[*place]).collect::<Vec<f64>>()
        };
        let (first, last) = (read(onset - 4.0), read(0.0));
        let wave = move |time: f64| {
            let part = (time / -onset).clamp(0.0, 1.0);
            let line = first.iter().zip(&last).map(|(first, last)| first + part * (last - first));
            read(onset + time).iter().zip(line).map(|(value, line)| value - line).collect()
        };
        Some((-onset, wave))
    }

    /// What the tachycardia beat would show at each time without a P.
    pub fn at(&self, times: &[f64], factor: f64) -> Vec<Vec<f64>> {
        times
            .iter()
            .map(|&time| {
                let read =
                    if time < self.qrs_end { time } else { self.qrs_end + factor * (time - self.qrs_end) };
                let values = self.sinus.at(read.min(self.last) + self.shift);
                self.leads.iter().map(|(place, gain)| gain * values[*place]).collect()
            })
            .collect()
    }
}

fn centred(values: impl Iterator<Item = f64>) -> Vec<f64> {
    let mut values: Vec<f64> = values.collect();
    let mean = values.iter().sum::<f64>() / values.len().max(1) as f64;
    values.iter_mut().for_each(|value| *value -= mean);
    values
}
