//! What an atrial wave looks like in the leads: a dipole seen through Dower's matrix.

use crate::recording::Lead;

/// A vector X (left), Y (down), Z (back), in mV.
pub(super) type Vector = [f64; 3];

/// What a lead sees of a heart vector: the rows of Dower's matrix, and for the limb leads that are derived
/// the same combinations of I and II as of the potentials.
pub(super) fn row(lead: Lead) -> Vector {
    const I: Vector = [0.632, -0.235, 0.059];
    const II: Vector = [0.235, 1.066, -0.132];
    let of_limbs = |of_i: f64, of_ii: f64| [0, 1, 2].map(|axis: usize| of_i * I[axis] + of_ii * II[axis]);
    match lead {
        Lead::I => I,
        Lead::II => II,
        Lead::III => of_limbs(-1.0, 1.0),
        Lead::AVR => of_limbs(-0.5, -0.5),
        Lead::AVL => of_limbs(1.0, -0.5),
        Lead::AVF => of_limbs(-0.5, 1.0),
        Lead::V1 => [-0.515, 0.157, -0.917],
        Lead::V2 => [0.044, 0.164, -1.387],
        Lead::V3 => [0.882, 0.098, -1.277],
        Lead::V4 => [1.213, 0.127, -0.601],
        Lead::V5 => [1.125, 0.127, -0.086],
        Lead::V6 => [0.831, 0.076, 0.230],
    }
}

/// A wave's vector as expected before looking: mean and standard deviation of each component.
#[derive(Clone, Copy, Debug)]
pub(super) struct Expected {
    pub mean: Vector,
    pub deviation: Vector,
}

/// A potential in any lead, from those in the independent ones; `None` where they don't tell.
pub(super) fn derived(lead: Lead, leads: &[Lead], potentials: &[f64]) -> Option<f64> {
    let of = |lead: Lead| leads.iter().position(|own| *own == lead).map(|place| potentials[place]);
    if let Some(own) = of(lead) {
        return Some(own);
    }
    let (i, ii) = (of(Lead::I)?, of(Lead::II)?);
    match lead {
        Lead::III => Some(ii - i),
        Lead::AVR => Some(-(i + ii) / 2.0),
        Lead::AVL => Some(i - ii / 2.0),
        Lead::AVF => Some(ii - i / 2.0),
        _ => None,
    }
}
