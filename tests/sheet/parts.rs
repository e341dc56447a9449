//! Recordings that are shorter or longer than a sheet, or hold each lead for a part of the time only.

use super::geometry::texts;
use crate::support::sheets::{UNFILTERED, recording_by_hand};
use leadsheet::case::Case;
use leadsheet::recording::{Channel, Lead, Recording, Samples};
use leadsheet::sheet::{Layout, Page, Role, SheetOptions, compose};
use leadsheet::units::{PaperSpeed, Span, Spans};

fn pages(recording: Recording, speed: f64) -> Vec<Page> {
    let case = Case::analyse(recording, None, UNFILTERED).unwrap_or_else(|error| panic!("{error}"));
    let layout = Layout::load("standard").unwrap_or_else(|error| panic!("{error}"));
    let speed = PaperSpeed::new(speed).expect("finite");
    compose(&case, &layout, &SheetOptions { speed, ..SheetOptions::default() })
        .unwrap_or_else(|error| panic!("{error}"))
}

fn said(pages: &[Page]) -> String {
    let all: Vec<&str> = pages.iter().flat_map(texts).map(|text| text.text.as_str()).collect();
    all.join(" ")
}

fn figures(page: &Page) -> Vec<&str> {
    page.elements
        .iter()
        .filter_map(|element| match &element.role {
            Role::Figure { alt } => Some(alt.as_str()),
            _ => None,
        })
        .filter(|alt| alt.starts_with("Lead "))
        .collect()
}

#[test]
fn a_sheet_says_which_part_of_a_recording_it_shows() {
    let text = said(&pages(recording_by_hand(10.0), 25.0));
    assert!(text.contains("the whole recording of 10.0 s"), "{text}");
    let text = said(&pages(recording_by_hand(33.0), 25.0));
    assert!(text.contains("0.0 to 10.0 s of 33.0 s"), "{text}");
    let text = said(&pages(recording_by_hand(33.0), 12.5));
    assert!(text.contains("0.0 to 20.0 s of 33.0 s") && text.contains("5.0 s each"), "{text}");
    let text = said(&pages(recording_by_hand(3.0), 25.0));
    assert!(text.contains("all columns show the same 2.5 s"), "{text}");
}

#[test]
fn at_50_mm_a_second_every_lead_keeps_its_2_5_s_on_two_pages() {
    let pages = pages(recording_by_hand(10.0), 50.0);
    assert_eq!(pages.len(), 2);
    let (first, second) = (figures(&pages[0]), figures(&pages[1]));
    assert_eq!((first.len(), second.len()), (7, 7));
    assert!(first.contains(&"Lead aVR, 2.5 to 5.0 s, 50 mm/s, 10 mm/mV"), "{first:?}");
    assert!(second.contains(&"Lead V4, 7.5 to 10.0 s, 50 mm/s, 10 mm/mV"), "{second:?}");
    assert!(second.contains(&"Lead II, 5.0 to 10.0 s, 50 mm/s, 10 mm/mV"), "{second:?}");
}

#[test]
fn four_groups_of_2_5_s_with_gaps_between_them_print_every_lead() {
    let mut recording = recording_by_hand(10.0);
    let quarter = recording.length / 4;
    for lead in Lead::ALL {
        let Some(samples) = recording.samples(lead).filter(|_| lead != Lead::II) else { continue };
        let group = lead as usize / 3;
        let own = Spans::from_unordered(vec![Span { start: group * quarter, end: (group + 1) * quarter }]);
        let values = samples.values_with_gaps().to_vec();
        let grouped = Samples::new(samples.rate(), values, own.complement(recording.length));
        recording.leads[lead] = Channel::Recorded(grouped);
    }
    let pages = pages(recording, 25.0);
    assert_eq!(figures(&pages[0]).len(), 13);
    assert!(said(&pages).contains("gaps in I, III"), "{}", said(&pages));
}
