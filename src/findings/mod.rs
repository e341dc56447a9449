//! The search for a retrograde P and what else the beats show.
//!
//! A suspicion here can't say "confirmed": that word is a reader's.

mod background;
mod candidate;
mod dipole;
mod ending;
mod episodes;
mod evidence;
mod gate;
mod linear;
mod noise;
mod ordinary_p;
mod premature;
mod retrograde;
mod search;
mod sinus;
mod stretch;
mod suspicion;
mod swaps;
mod window;

pub use gate::{BROAD, BROAD_MARGIN, FEWEST_BEATS, FEWEST_LEADS, LARGEST_NOISE_UV, SLOWEST};
pub use search::{
    Evidence, Findings, Observation, PBefore, Polarity, RpClass, Search, SearchDone, Sign, Suspected,
    Tachycardia, WaveAtEnd, WhyNot,
};

use crate::average::RepresentativeBeat;
use crate::beats::{Beats, Channels};
use crate::measure::Measurements;
use crate::recording::Weight;

/// What is searched.
#[derive(Clone, Copy, Debug)]
pub struct Subject<'a> {
    /// The signals behind the measurement chain.
    pub channels: &'a Channels,
    /// Beats and rhythm.
    pub beats: &'a Beats,
    /// The representative beat of the dominant class.
    pub representative: Option<&'a RepresentativeBeat>,
    /// Intervals and marks.
    pub measurements: &'a Measurements,
    /// Whether the source names no other electrode placement than the standard one.
    pub standard_placement: bool,
}

/// Searches a recording, against the same patient's sinus beat and its marks where there are any.
pub fn search(subject: &Subject, sinus: Option<(&RepresentativeBeat, &Measurements)>) -> Findings {
    let retrograde_p = match gate::passed(subject) {
        Err(why) => Search::NotDone(why),
        Ok(gate) => Search::Done(Box::new(retrograde::search(subject, sinus, gate))),
    };
    let mut observations: Vec<Observation> = noise::observed(subject).into_iter().collect();
    observations.extend(swaps::suspected(subject));
    if matches!(&retrograde_p, Search::Done(done) if sinus.is_some() && !done.compared) {
        observations.push(Observation {
            weight: Weight::Information,
            what: "the sinus recording was not compared: its QRS is not that of the tachycardia, its T is \
                   not marked, or leads are missing"
                .to_owned(),
            leads: Vec::new(),
            value: None,
            evidence: None,
        });
    }
    let tachycardias = episodes::find(subject);
    observations.extend(tachycardias.iter().filter_map(episodes::observed));
    Findings { retrograde_p, tachycardias, observations }
}
