//! The files of a demo recording, written without the program under test.

use super::scenario::Demo;
use crate::support::dipole::{Truth, Wave, WaveTruth, seen_in, twelve};
use std::fmt::Write as _;

const LEADS: [&str; 12] = ["I", "II", "III", "aVR", "aVL", "aVF", "V1", "V2", "V3", "V4", "V5", "V6"];

const INVENTED: &str = "Invented recording, not of a real person";
const NAME: &str = "Marigold Example";
const ID: &str = "INVENTED-0001";
const BIRTH_DATE: &str = "1988-02-29";
const PLACE: &str = "Invented Hospital, Port Nowhere";
const OPERATOR: &str = "Nobody";
const DEVICE: &str = "none: computed from a moving dipole";

/// Header and signal file in the WFDB formats of header(5) and signal(5), format 16.
pub fn wfdb(demo: &Demo) -> [(String, Vec<u8>); 2] {
    let name = demo.name;
    let counts = demo.strip.counts();
    let (date, time) = demo.start.split_once('T').expect("a date and a time");
    let date: Vec<&str> = date.split('-').rev().collect();
    let mut header = format!("{name} 12 {} {} {time} {}\n", demo.strip.rate, counts.len(), date.join("/"));
    for (index, lead) in LEADS.iter().enumerate() {
        let sum = counts.iter().fold(0i16, |sum, frame| sum.wrapping_add(frame[index]));
        let first = counts[0][index];
        let _ = writeln!(header, "{name}.dat 16 1000(0)/mV 16 0 {first} {sum} 0 {lead}");
    }
    for (key, value) in [
        ("name", NAME),
        ("id", ID),
        ("birth date", BIRTH_DATE),
        ("sex", "female"),
        ("place", PLACE),
        ("operator", OPERATOR),
        ("device", DEVICE),
    ] {
        let _ = writeln!(header, "# {key}: {value}");
    }
    for remark in [INVENTED, demo.title].iter().chain(demo.remarks) {
        let _ = writeln!(header, "# {remark}");
    }
    let data = counts.iter().flatten().flat_map(|count| count.to_le_bytes()).collect();
    [(format!("{name}.hea"), header.into_bytes()), (format!("{name}.dat"), data)]
}

/// The same as a table in mV with its sidecar.
pub fn csv(demo: &Demo) -> [(String, Vec<u8>); 2] {
    let name = demo.name;
    let mut table = LEADS.join(",") + "\n";
    for frame in demo.strip.counts() {
        let cells = frame.map(|count| format!("{}", f64::from(count) / 1000.0));
        table.push_str(&(cells.join(",") + "\n"));
    }
    let note: Vec<&str> = [INVENTED, demo.title].iter().chain(demo.remarks).copied().collect();
    let sidecar = format!(
        "rate = {}\nunit = \"mV\"\nresolution = 0.001\nstart = {}\nplace = \"{PLACE}\"\noperator = \"{OPERATOR}\"\n\
         device = \"{DEVICE}\"\nnote = \"\"\"\n{}\"\"\"\n\n[subject]\nname = \"{NAME}\"\nid = \"{ID}\"\n\
         birth_date = {BIRTH_DATE}\nsex = \"female\"\n",
        demo.strip.rate,
        demo.start,
        note.join("\n"),
    );
    [(format!("{name}.csv"), table.into_bytes()), (format!("{name}.toml"), sidecar.into_bytes())]
}

/// The truth of all recordings: numbers, P amplitudes and the marks of every beat.
pub fn truth(demos: &[Demo]) -> String {
    let mut text = String::from(
        "# True values of the invented recordings. Times in s from the first sample, durations in ms, potentials in mV.\n\
         # Marks are begin and end of a wave's support, as [onset, offset].\n",
    );
    for demo in demos {
        let _ = write!(text, "\n[{}]\n", demo.name);
        for (key, value) in &demo.numbers {
            let _ = writeln!(text, "{key} = {}", rounded(*value));
        }
        for (key, present, wave) in [
            ("p_peak_mv", demo.strip.beats.iter().any(|beat| beat.p.is_some()), Wave::sinus_p()),
            (
                "retrograde_p_peak_mv",
                demo.strip.beats.iter().any(|beat| beat.retrograde_p.is_some()),
                Wave::retrograde_p(),
            ),
        ] {
            if present {
                let peaks: Vec<String> = LEADS
                    .iter()
                    .zip(peaks(&wave))
                    .map(|(lead, peak)| format!("{lead} = {}", rounded(peak)))
                    .collect();
                let _ = writeln!(text, "{key} = {{ {} }}", peaks.join(", "));
            }
        }
        for truth in demo.strip.truth() {
            let _ = write!(text, "\n[[{}.beats]]\n", demo.name);
            for (key, wave) in marks(&truth) {
                let _ = writeln!(text, "{key} = [{}, {}]", rounded(wave.onset), rounded(wave.offset));
            }
        }
    }
    text
}

fn marks(truth: &Truth) -> impl Iterator<Item = (&'static str, WaveTruth)> {
    [("p", truth.p), ("qrs", truth.qrs), ("t", truth.t), ("retrograde_p", truth.retrograde_p)]
        .into_iter()
        .filter_map(|(key, wave)| Some((key, wave?)))
}

/// The largest deflection in each lead, signed.
fn peaks(wave: &Wave) -> [f64; 12] {
    let mut largest = [0.0f64; 12];
    for step in 0..=1000 {
        let vector = wave.at(wave.offset() * f64::from(step) / 1000.0);
        let leads = twelve([0, 1, 2, 3, 4, 5, 6, 7].map(|lead| seen_in(lead, vector)));
        for (slot, value) in largest.iter_mut().zip(leads) {
            if value.abs() > slot.abs() {
                *slot = value;
            }
        }
    }
    largest
}

/// Four decimals are enough: a tenth of a millisecond, a tenth of a microvolt.
fn rounded(value: f64) -> f64 {
    (value * 10_000.0).round() / 10_000.0
}
