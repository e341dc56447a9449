//! The limb leads that follow from I and II: derived where the source lacks them, checked where it holds them.

use super::{Lead, Note, PerLead, Samples};

/// The four leads that follow from I and II.
pub(super) const DEPENDENT: [Lead; 4] = [Lead::III, Lead::AVR, Lead::AVL, Lead::AVF];

/// A recorded lead may differ from what follows by two steps of the source, or this much in mV, whichever is
/// more (own rule: rounding each lead makes one step and a half at most; recordings that were converted from
/// a step of 5 µV to a finer one keep the coarser rounding).
const TOLERATED_STEPS: f64 = 2.0;
const TOLERATED: f64 = 0.005;

/// Differences up to this are information, above it a caution: the smallest wave that experts identify is
/// 0.02 mV high (IEC 60601-2-25 annex FF.5).
const CAUTION_ABOVE: f64 = 0.02;

/// How little may be left, as a part of the lead's own swing, for one lead to look like another (own choice).
const ALIKE: f64 = 0.1;

/// III = II − I, aVR = −(I + II)/2, aVL = I − II/2, aVF = II − I/2 (Einthoven and Goldberger), and I and II
/// themselves, as factors of I and II; `None` for a chest lead.
const fn weights(lead: Lead) -> Option<(f64, f64)> {
    match lead {
        Lead::I => Some((1.0, 0.0)),
        Lead::II => Some((0.0, 1.0)),
        Lead::III => Some((-1.0, 1.0)),
        Lead::AVR => Some((-0.5, -0.5)),
        Lead::AVL => Some((1.0, -0.5)),
        Lead::AVF => Some((-0.5, 1.0)),
        _ => None,
    }
}

/// A limb lead from I and II, sample by sample where both are valid; `None` for a chest lead.
///
/// Both have one rate and one length.
pub(super) fn derive(lead: Lead, one: &Samples, two: &Samples) -> Option<Samples> {
    let (of_one, of_two) = weights(lead)?;
    let values = one.values_with_gaps().iter().zip(two.values_with_gaps());
    let values = values.map(|(one, two)| of_one * one + of_two * two).collect();
    let saturated = one.saturated().union(two.saturated());
    Some(Samples::new(one.rate(), values, one.gaps().union(two.gaps())).with_saturated(saturated))
}

/// Compares every recorded dependent lead with what follows from I and II. `step` is the largest step of
/// the source, in mV.
pub(super) fn check(recorded: &PerLead<Option<&Samples>>, step: Option<f64>) -> Option<Note> {
    let (one, two) = (recorded[Lead::I]?, recorded[Lead::II]?);
    let tolerance = (TOLERATED_STEPS * step.unwrap_or(0.0)).max(TOLERATED);
    let mut findings = Vec::new();
    let mut largest = 0.0f64;
    for lead in DEPENDENT {
        let Some(samples) = recorded[lead] else { continue };
        let Some(expected) = derive(lead, one, two) else { continue };
        let Some(most) = largest_difference(samples, &expected).filter(|most| *most > tolerance) else {
            continue;
        };
        largest = largest.max(most);
        let likeness = if most > CAUTION_ABOVE { likeness(lead, samples, one, two) } else { None };
        findings.push(match likeness {
            Some(likeness) => format!("{lead} {likeness}"),
            None => format!("{lead} by up to {most:.3} mV"),
        });
    }
    if findings.is_empty() {
        return None;
    }
    let text = format!(
        "recorded limb leads differ from what follows from I and II by more than {tolerance:.3} mV: {}",
        findings.join(", ")
    );
    Some(if largest > CAUTION_ABOVE {
        Note::caution(format!("{text}; labels may be swapped or a lead wrongly scaled"))
    } else {
        Note::information(text)
    })
}

/// Over all samples that both have.
fn largest_difference(recorded: &Samples, expected: &Samples) -> Option<f64> {
    let gaps = recorded.gaps().union(expected.gaps());
    let (recorded, expected) = (recorded.values_with_gaps(), expected.values_with_gaps());
    let runs = gaps.complement(recorded.len().min(expected.len()));
    let differences = runs.iter().flat_map(|run| {
        recorded[run.start..run.end].iter().zip(&expected[run.start..run.end]).map(|(a, b)| (a - b).abs())
    });
    differences.reduce(f64::max)
}

/// What a recorded lead looks like instead, when it is one of the limb leads, turned or scaled.
fn likeness(lead: Lead, recorded: &Samples, one: &Samples, two: &Samples) -> Option<String> {
    let own = Fit::of(recorded, &derive(lead, one, two)?);
    if let Some(Fit { factor, .. }) = own.filter(Fit::is_close) {
        return Some(match factor {
            factor if (factor + 1.0).abs() < 0.05 => "has the opposite sign".to_owned(),
            factor if (factor - 1.0).abs() < 0.02 => "is shifted".to_owned(),
            factor => format!("is {factor:.2} times as large"),
        });
    }
    for other in Lead::ALL.into_iter().filter(|other| other.is_limb() && *other != lead) {
        let fit = derive(other, one, two).and_then(|expected| Fit::of(recorded, &expected));
        match fit.filter(Fit::is_close) {
            Some(fit) if (fit.factor - 1.0).abs() < 0.05 => return Some(format!("looks like {other}")),
            Some(fit) if (fit.factor + 1.0).abs() < 0.05 => {
                return Some(format!("looks like \u{2212}{other}"));
            }
            _ => {}
        }
    }
    None
}

/// The least-squares fit of one lead by another, offsets aside.
struct Fit {
    factor: f64,
    /// What is left, as a part of the fitted lead's own swing (both as standard deviations).
    left: f64,
}

impl Fit {
    fn of(recorded: &Samples, expected: &Samples) -> Option<Self> {
        let gaps = recorded.gaps().union(expected.gaps());
        let (recorded, expected) = (recorded.values_with_gaps(), expected.values_with_gaps());
        let (mut count, mut sums) = (0.0, [0.0; 5]);
        for run in gaps.complement(recorded.len().min(expected.len())).iter() {
            for (r, e) in recorded[run.start..run.end].iter().zip(&expected[run.start..run.end]) {
                count += 1.0;
                for (sum, term) in sums.iter_mut().zip([*r, *e, r * r, e * e, r * e]) {
                    *sum += term;
                }
            }
        }
        let [r, e, rr, ee, re] = sums.map(|sum| sum / count);
        let (of_recorded, of_expected, shared) = (rr - r * r, ee - e * e, re - r * e);
        let factor = shared / of_expected;
        let left = ((of_recorded - factor * shared).max(0.0) / of_recorded).sqrt();
        (factor.is_finite() && left.is_finite()).then_some(Self { factor, left })
    }

    fn is_close(&self) -> bool {
        self.left < ALIKE
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::recording::Weight;
    use crate::units::{SampleRate, Spans};

    fn samples(value: impl Fn(f64) -> f64) -> Samples {
        let rate = SampleRate::new(500.0).expect("a rate");
        Samples::new(rate, (0..1000).map(|index| value(f64::from(index) / 50.0)).collect(), Spans::none())
    }

    /// The note on a recording whose leads are `sources` of a true one.
    fn note(sources: &[(Lead, Lead, f64)]) -> Option<Note> {
        let (one, two) = (samples(|t| t.sin()), samples(|t| (1.7 * t + 0.4).sin() * 1.3));
        let made: Vec<(Lead, Samples)> = sources
            .iter()
            .map(|&(lead, source, factor)| {
                let truth = derive(source, &one, &two).expect("a limb lead");
                (
                    lead,
                    truth.with_values(truth.values_with_gaps().iter().map(|value| value * factor).collect()),
                )
            })
            .collect();
        let recorded =
            PerLead::from_fn(|lead| made.iter().find(|(own, _)| *own == lead).map(|(_, samples)| samples));
        check(&recorded, Some(0.001))
    }

    // Source: the identities themselves; the lead mix-ups are computed from them.
    #[test]
    fn mixed_up_limb_leads_are_told_apart() {
        let sound = Lead::ALL.map(|lead| (lead, lead, 1.0));
        assert_eq!(note(&sound[..6]), None);
        let text = |sources: &[_]| {
            let note = note(sources).expect("a note");
            assert_eq!(note.weight, Weight::Caution);
            note.text
        };
        let mut flipped = sound;
        flipped[2].2 = -1.0;
        assert!(text(&flipped[..6]).contains("III has the opposite sign;"), "{}", text(&flipped[..6]));
        let mut scaled = sound;
        scaled[5].2 = 2.0;
        assert!(text(&scaled[..6]).contains("aVF is 2.00 times as large;"));
        let mut swapped = sound;
        (swapped[0].1, swapped[1].1) = (Lead::II, Lead::I);
        let text = text(&swapped[..6]);
        assert!(
            text.contains("III has the opposite sign, aVL looks like aVF, aVF looks like aVL;"),
            "{text}"
        );
    }
}
