//! Where the beats are, which of them are alike, and whether they come regularly.
//!
//! Detection takes the spatial velocity of all leads together, as the CSE working party did (Eur
//! Heart J 1985;6:815) and Laguna et al. 1994 after them; thresholds follow the neighbourhood, so
//! that hours of recording are read as well as seconds. Classes are made by correlation over all
//! leads at once.

mod channels;
mod classes;
mod detect;
mod pacing;
mod regularity;
mod rhythm;

pub use channels::Channels;
pub use detect::median;
pub use rhythm::{Beat, Beats, ClassId, Rhythm, RrRange, WhyUncertain};

use crate::condition::Conditioned;
use crate::units::SampleIndex;

/// Finds all beats of a recording that went through the measurement chain.
pub fn find(measured: &Conditioned) -> Beats {
    let channels = Channels::of(measured);
    let spikes = pacing::spikes(&channels);
    let quiet = channels.bridged(&spikes);
    let detected = detect::qrs(&quiet, measured.rate);
    let sorted = classes::sort(&quiet, measured.rate, &detected);
    let all: Vec<Beat> = sorted
        .into_iter()
        .map(|(fiducial, class)| Beat {
            fiducial: SampleIndex(fiducial),
            class,
            paced: pacing::leads_into(&spikes, fiducial, measured.rate),
        })
        .collect();
    let rhythm = regularity::of(&all, measured.rate, &quiet.gaps);
    let spikes = spikes.into_iter().map(SampleIndex).collect();
    Beats { rate: measured.rate, all, rhythm, spikes }
}
