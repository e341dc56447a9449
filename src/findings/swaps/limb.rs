//! The limb electrodes.

use super::super::Observation;
use super::{Beat, correlation, observation, swing};
use crate::measure::Amplitudes;
use crate::recording::{Lead, PerLead};

/// A limb lead whose swing is below this part of the largest one is almost flat (own choice on one half of LUDB).
const FLAT: f64 = 0.12;
/// From this correlation with V6 down I or II runs against it: where its P is inverted too, and where no P speaks
/// for either side (own choice on one half of LUDB).
const AGAINST_WITH_P: f64 = -0.4;
const AGAINST: f64 = -0.75;
/// P in I over P in II from which they may be exchanged (own choice on one half of LUDB; above 1 by the source).
const P_RATIO: f64 = 1.1;
/// I and II as the chest leads foretell them, from QRS onset to the end of T: a regression on one half of LUDB,
/// V1 to V6 in mV.
const FROM_CHEST: [[f64; 6]; 2] =
    [[-0.766, 0.468, 0.009, -0.101, -0.010, 0.381], [-0.135, -0.114, 0.124, 0.220, -0.234, 0.649]];

/// A limb electrode in the right leg's place: the two legs have nearly one potential, so one lead is almost flat
/// (Batchvarov, Malik and Camm, Europace 2007;9:1081).
pub(super) fn near_flat(beat: &Beat) -> Option<Observation> {
    let swings =
        [Lead::I, Lead::II, Lead::III].map(|lead| beat.lead(lead).map(|values| (lead, swing(&values))));
    let [one, two, three] = swings;
    let swings = [one?, two?, three?];
    let largest = swings.iter().map(|(_, swing)| *swing).fold(0.0, f64::max);
    let (lead, least) = swings.into_iter().min_by(|a, b| a.1.total_cmp(&b.1))?;
    if largest < super::SMALLEST || least > FLAT * largest {
        return None;
    }
    let electrodes = match lead {
        Lead::I => "arm and leg electrodes",
        Lead::II => "right arm and right leg electrodes",
        _ => "left arm and right leg electrodes",
    };
    Some(observation(
        &format!(
            "{electrodes} suspected swapped, for a reader to confirm (one of I, II, III almost flat, Batchvarov 2007)"
        ),
        &[lead],
        (100.0 * least / largest).round(),
        "% of the largest of the three",
    ))
}

/// The limb leads against the chest leads, which such a swap leaves as they are.
pub(super) fn against_chest(
    beat: &Beat,
    chest: &[Vec<f64>; 6],
    amplitudes: &PerLead<Option<Amplitudes>>,
) -> Option<Observation> {
    let limb = [beat.lead(Lead::I)?, beat.lead(Lead::II)?];
    let p = [Lead::I, Lead::II].map(|lead| amplitudes[lead].and_then(|found| found.p).map(|p| p.get()));
    inverted(&limb, &chest[5], p).or_else(|| exchanged(&limb, chest, p))
}

/// Right arm swapped with left arm or left leg: P-QRS inverted in I or II and opposite to V6 (Batchvarov 2007).
fn inverted(limb: &[Vec<f64>; 2], v6: &[f64], p: [Option<f64>; 2]) -> Option<Observation> {
    let with_v6 = |[of_one, of_two]: [f64; 2]| {
        let lead: Vec<f64> = limb[0].iter().zip(&limb[1]).map(|(i, ii)| of_one * i + of_two * ii).collect();
        correlation(&lead, v6)
    };
    let (one, two) = ([1.0, 0.0], [0.0, 1.0]);
    let runs_against = |along: f64, p: Option<f64>| match p {
        Some(p) => p < 0.0 && along <= AGAINST_WITH_P,
        None => along <= AGAINST,
    };
    if !runs_against(with_v6(one), p[0]) && !runs_against(with_v6(two), p[1]) {
        return None;
    }
    // I and II as they would be without either swap: the likelier one brings both nearer to V6.
    let arms = with_v6([-1.0, 0.0]) + with_v6([-1.0, 1.0]);
    let arm_and_leg = with_v6([1.0, -1.0]) + with_v6([0.0, -1.0]);
    let (electrodes, lead, along) = if arms >= arm_and_leg {
        ("right arm and left arm", Lead::I, with_v6(one))
    } else {
        ("right arm and left leg", Lead::II, with_v6(two))
    };
    Some(observation(
        &format!(
            "{electrodes} electrodes suspected swapped, for a reader to confirm (opposite to V6, Batchvarov 2007)"
        ),
        &[lead],
        along,
        "correlation with V6",
    ))
}

/// Left arm swapped with left leg exchanges I and II: P is larger in I than in II (Abdollah and Milliken, Am J Cardiol
/// 1997;80:1247), which alone is little specific (Ohlsson 1999), and the chest leads, from which a limb lead can be
/// foretold, fit them better when exchanged (Kors and van Herpen, Am J Cardiol 2001;88:396; all three from memory).
fn exchanged(limb: &[Vec<f64>; 2], chest: &[Vec<f64>; 6], p: [Option<f64>; 2]) -> Option<Observation> {
    let ratio = p[0]? / p[1]?.max(0.001);
    if ratio < P_RATIO || p[0]? <= 0.0 {
        return None;
    }
    let foretold = FROM_CHEST.map(|factors| -> Vec<f64> {
        let sum = |index: usize| {
            factors.iter().zip(chest).map(|(factor, lead)| factor * lead.get(index).unwrap_or(&0.0)).sum()
        };
        (0..limb[0].len()).map(sum).collect()
    });
    let misfit = |one: &[f64], two: &[f64]| -> f64 {
        let square = |(a, b): (&f64, &f64)| (a - b).powi(2);
        one.iter().zip(&foretold[0]).map(square).sum::<f64>()
            + two.iter().zip(&foretold[1]).map(square).sum::<f64>()
    };
    (misfit(&limb[1], &limb[0]) < misfit(&limb[0], &limb[1])).then(|| {
        observation(
            "left arm and left leg electrodes suspected swapped, for a reader to confirm (I and II fit the chest leads \
             better when exchanged, and P is larger in I, Abdollah 1997, Kors 2001)",
            &[Lead::I, Lead::II],
            ratio,
            "P of I over P of II",
        )
    })
}
