//! The twelve leads of real recordings.

use crate::support::shared;
use leadsheet::recording::{Channel, Lead, Recording};

#[test]
fn the_limb_leads_of_annotated_recordings_obey_einthoven_to_half_a_count() {
    let Some(folder) = shared("data/ludb") else { return };
    // Source: the lead identities of facts section 2; LUDB holds whole counts of 1 µV.
    let decoded = leadsheet::input::read(&folder.join("1.hea")).expect("LUDB 1 reads");
    let mut recording = Recording::from_decoded(decoded).expect("LUDB 1 has leads");
    let recorded = recording.leads.clone();
    assert!(recorded.iter().all(|(_, channel)| matches!(channel, Channel::Recorded(_))));
    for lead in [Lead::III, Lead::AVR, Lead::AVL, Lead::AVF] {
        recording.leads[lead] = Channel::Absent(leadsheet::recording::Absence::NotRecorded);
    }
    let value =
        |lead: Lead, index| recorded[lead].samples().and_then(|samples| samples.at(index)).expect("no gap");
    for index in 0..recording.length {
        let (one, two) = (value(Lead::I, index), value(Lead::II, index));
        for (lead, expected) in [
            (Lead::III, two - one),
            (Lead::AVR, -(one + two) / 2.0),
            (Lead::AVL, one - two / 2.0),
            (Lead::AVF, two - one / 2.0),
        ] {
            let off = (value(lead, index) - expected).abs();
            assert!(off < 0.000_501, "{lead} is off by {off} mV at sample {index}");
        }
    }
}
