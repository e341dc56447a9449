//! Suspected swaps of electrodes: rare on recordings as made, and how many are seen when leads are exchanged.
//!
//! An exchange is computed from the leads. Source of the formulas: Einthoven's and Wilson's definitions, as in
//! Krasteva, Jekova and Schmid, Sensors 2019;19:2920; an electrode on the right leg is taken to have the potential
//! of the left leg but for a twentieth. Source of the recordings: LUDB 1.0.1; PhysioNet/CinC Challenge 2020–21.

use super::recording;
use crate::support::{headers, shared};
use leadsheet::average::representative;
use leadsheet::beats::{Beats, Channels, find};
use leadsheet::condition::{MEASUREMENT, apply};
use leadsheet::findings::{Subject, search};
use leadsheet::measure::measure;
use leadsheet::recording::{Channel, Lead, Recording, Weight};
use rayon::prelude::*;
use std::path::PathBuf;

const CHEST: [Lead; 6] = [Lead::V1, Lead::V2, Lead::V3, Lead::V4, Lead::V5, Lead::V6];

#[derive(Clone, Copy, Debug, PartialEq)]
enum Swap {
    None,
    Arms,
    RightArmLeftLeg,
    LeftArmLeftLeg,
    RightArmRightLeg,
    LeftArmRightLeg,
    Chest(usize, usize),
}

const SWAPS: [Swap; 14] = [
    Swap::None,
    Swap::Arms,
    Swap::RightArmLeftLeg,
    Swap::LeftArmLeftLeg,
    Swap::RightArmRightLeg,
    Swap::LeftArmRightLeg,
    Swap::Chest(1, 2),
    Swap::Chest(2, 3),
    Swap::Chest(3, 4),
    Swap::Chest(4, 5),
    Swap::Chest(5, 6),
    Swap::Chest(1, 3),
    Swap::Chest(2, 4),
    Swap::Chest(1, 6),
];

impl Swap {
    /// The recording as it would have been made.
    fn of(self, recording: &Recording) -> Recording {
        let mut swapped = recording.clone();
        let (i, ii) = match self {
            Swap::None => return swapped,
            Swap::Chest(first, second) => {
                let (first, second) = (CHEST[first - 1], CHEST[second - 1]);
                swapped.leads[first] = recording.leads[second].clone();
                swapped.leads[second] = recording.leads[first].clone();
                return swapped;
            }
            Swap::Arms => ([-1.0, 0.0], [-1.0, 1.0]),
            Swap::RightArmLeftLeg => ([1.0, -1.0], [0.0, -1.0]),
            Swap::LeftArmLeftLeg => ([0.0, 1.0], [1.0, 0.0]),
            Swap::RightArmRightLeg => ([1.0, -0.95], [0.0, 0.05]),
            Swap::LeftArmRightLeg => ([0.05, 0.95], [0.0, 1.0]),
        };
        let mut set = |lead: Lead, of_i: f64, of_ii: f64, own: f64| {
            let values = |lead| recording.samples(lead).expect("all twelve leads").values_with_gaps();
            let mixed: Vec<f64> = (0..recording.length)
                .map(|at| of_i * values(Lead::I)[at] + of_ii * values(Lead::II)[at] + own * values(lead)[at])
                .collect();
            let samples = recording.samples(lead).expect("all twelve leads").with_values(mixed);
            swapped.leads[lead] = Channel::Recorded(samples);
        };
        set(Lead::I, i[0], i[1], 0.0);
        set(Lead::II, ii[0], ii[1], 0.0);
        set(Lead::III, ii[0] - i[0], ii[1] - i[1], 0.0);
        set(Lead::AVR, -(i[0] + ii[0]) / 2.0, -(i[1] + ii[1]) / 2.0, 0.0);
        set(Lead::AVL, i[0] - ii[0] / 2.0, i[1] - ii[1] / 2.0, 0.0);
        set(Lead::AVF, ii[0] - i[0] / 2.0, ii[1] - i[1] / 2.0, 0.0);
        // Wilson's terminal moves by a third of what the moved electrode gains: II, or III.
        let moved = match self {
            Swap::RightArmRightLeg => [0.0, -0.95 / 3.0],
            Swap::LeftArmRightLeg => [0.95 / 3.0, -0.95 / 3.0],
            _ => return swapped,
        };
        for lead in CHEST {
            set(lead, moved[0], moved[1], 1.0);
        }
        swapped
    }

    /// What a note names.
    fn name(self) -> String {
        match self {
            Swap::None => "as recorded".to_owned(),
            Swap::Arms => "right arm and left arm".to_owned(),
            Swap::RightArmLeftLeg => "right arm and left leg".to_owned(),
            Swap::LeftArmLeftLeg => "left arm and left leg".to_owned(),
            Swap::RightArmRightLeg => "right arm and right leg".to_owned(),
            Swap::LeftArmRightLeg => "left arm and right leg".to_owned(),
            Swap::Chest(first, second) => format!("V{first}, V{second}"),
        }
    }
}

/// The swaps that the program suspects, each by the name of [`Swap::name`].
fn suspected(recording: &Recording) -> Vec<String> {
    let measured = apply(recording, MEASUREMENT).expect("the measurement chain fits every rate");
    let beats = find(&measured);
    let spikes: Vec<usize> = beats.spikes.iter().map(|spike| spike.0).collect();
    let channels = Channels::of(&measured).bridged(&spikes);
    let average = representative(&channels, &beats, Beats::DOMINANT);
    let measurements = measure(&channels, &beats, average.as_ref());
    let subject = Subject {
        channels: &channels,
        beats: &beats,
        representative: average.as_ref(),
        measurements: &measurements,
        standard_placement: recording.occasion.placement.is_none(),
    };
    let notes = search(&subject, None).observations;
    let swaps = notes.iter().filter(|note| note.what.contains("suspected swapped"));
    swaps
        .map(|note| {
            assert_eq!(note.weight, Weight::Caution);
            assert!(note.what.contains("for a reader to confirm"), "{}", note.what);
            match note.what.split_once(" electrodes suspected") {
                Some(("chest", _)) => {
                    note.leads.iter().map(|lead| lead.name()).collect::<Vec<_>>().join(", ")
                }
                Some((limb, _)) => limb.to_owned(),
                None => panic!("{}", note.what),
            }
        })
        .collect()
}

/// Per swap, whether there is a note and whether it is the right one; and the notes as recorded.
type Outcome = (Vec<(bool, bool)>, Option<String>);

/// How many recordings bring a note, and how many the right one, per swap; and the notes as recorded.
fn counted(headers: &[PathBuf], swaps: &[Swap]) -> (Vec<(usize, usize)>, Vec<String>) {
    let outcomes: Vec<Outcome> = headers
        .par_iter()
        .map(|header| {
            let recording = recording(header);
            let mut as_recorded = None;
            let outcome = swaps.iter().map(|swap| {
                let found = suspected(&swap.of(&recording));
                if *swap == Swap::None && !found.is_empty() {
                    let stem = header.file_stem().expect("a name").to_string_lossy();
                    as_recorded = Some(format!("{stem}: {}", found.join(" and ")));
                }
                (!found.is_empty(), found.contains(&swap.name()))
            });
            (outcome.collect(), as_recorded)
        })
        .collect();
    let count = |index: usize, which: fn(&(bool, bool)) -> bool| {
        outcomes.iter().filter(|(outcome, _)| which(&outcome[index])).count()
    };
    let counts = (0..swaps.len()).map(|index| (count(index, |o| o.0), count(index, |o| o.1))).collect();
    (counts, outcomes.into_iter().filter_map(|(_, as_recorded)| as_recorded).collect())
}

#[test]
fn swapped_leads_are_noted_and_recordings_as_made_hardly_ever() {
    let Some(folder) = shared("data/ludb") else { return };
    let mut all = headers(&folder);
    all.sort_by_key(|header| {
        header.file_stem().and_then(|stem| stem.to_str()).and_then(|stem| stem.parse::<u32>().ok())
    });
    // The thresholds come from every other recording; the others tell.
    let halves: [Vec<PathBuf>; 2] =
        [0, 1].map(|half| all.iter().skip(half).step_by(2).cloned().collect::<Vec<_>>());
    let mut told = Vec::new();
    for (half, name) in halves.iter().zip(["A (thresholds chosen)", "B"]) {
        let (counts, as_recorded) = counted(half, &SWAPS);
        println!("LUDB, half {name}, {} recordings; notes as recorded: {as_recorded:?}", half.len());
        for (swap, (any, right)) in SWAPS.iter().zip(&counts) {
            println!("{:<26} noted {any:>3}, named rightly {right:>3}", swap.name());
        }
        told = counts;
    }
    let share = |index: usize| told[index].1 as f64 / halves[1].len() as f64;
    // One in fifty of a kind; two kinds have one.
    assert!(told[0].0 * 25 <= halves[1].len(), "{} false notes", told[0].0);
    for (index, least) in [(1, 0.8), (2, 0.8), (3, 0.4), (4, 0.9), (5, 0.9)] {
        assert!(share(index) >= least, "{}: {:.2}", SWAPS[index].name(), share(index));
    }
    for (index, swap) in SWAPS.iter().enumerate().skip(6) {
        let least = if *swap == Swap::Chest(5, 6) { 0.55 } else { 0.8 };
        assert!(share(index) >= least, "{}: {:.2}", swap.name(), share(index));
    }
}

#[test]
fn recordings_of_other_rhythms_and_makers_hardly_ever_bring_a_swap_note() {
    let Some(folder) = shared("data/rhythms") else { return };
    let all = headers(&folder);
    let (_, as_recorded) = counted(&all, &[Swap::None]);
    println!("{} recordings; notes as recorded: {as_recorded:?}", all.len());
    assert!(as_recorded.len() * 20 <= all.len(), "{as_recorded:?}");
}

#[test]
fn no_swap_is_suspected_where_the_source_names_another_placement() {
    let Some(folder) = shared("data/ludb") else { return };
    let mut swapped = Swap::Arms.of(&recording(&folder.join("1.hea")));
    assert_eq!(suspected(&swapped), [Swap::Arms.name()]);
    swapped.occasion.placement = Some("right-sided chest leads".to_owned());
    assert!(suspected(&swapped).is_empty());
}
