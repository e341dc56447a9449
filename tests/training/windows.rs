//! Writes what the network is trained on: every beat of the annotated recordings, as the program sees it.
//!
//!     cargo bench --bench windows -- DATA OUT

use leadsheet::average::representative;
use leadsheet::beats::{Beats, Channels, ClassId, find};
use leadsheet::condition::{MEASUREMENT, apply};
use leadsheet::measure::network::windows;
use leadsheet::recording::Recording;
use std::fs;
use std::io::Write;
use std::path::Path;

fn main() {
    let mut arguments = std::env::args().skip(1).filter(|argument| argument != "--bench");
    let (data, out) = (arguments.next().expect("DATA"), arguments.next().expect("OUT"));
    fs::create_dir_all(&out).expect("OUT can be made");
    for set in ["ludb", "qtdb"] {
        let folder = Path::new(&data).join(set);
        let mut names: Vec<_> = fs::read_dir(&folder)
            .expect("DATA holds the set")
            .map(|entry| entry.expect("an entry").path())
            .filter(|path| path.extension().is_some_and(|extension| extension == "hea"))
            .collect();
        names.sort();
        let mut index = fs::File::create(format!("{out}/{set}.csv")).expect("index");
        let mut values = Vec::new();
        for path in names {
            let annotated = annotated(&path, set);
            write(&path, annotated, &mut index, &mut values);
        }
        let bytes: Vec<u8> = values.iter().flat_map(|value: &f32| value.to_le_bytes()).collect();
        fs::write(format!("{out}/{set}.f32"), bytes).expect("values");
    }
}

/// From the first to the last annotation of a long recording, in s; all of a short one.
fn annotated(path: &Path, set: &str) -> (f64, f64) {
    if set == "ludb" {
        return (0.0, f64::INFINITY);
    }
    let marks = leadsheet::input::marks(&path.with_extension("q1c")).expect("annotations").marks;
    let at = |mark: Option<&leadsheet::recording::Mark>| mark.map_or(0.0, |mark| mark.tick as f64 / 250.0);
    (at(marks.first()), at(marks.last()))
}

fn write(path: &Path, (first, last): (f64, f64), index: &mut fs::File, values: &mut Vec<f32>) {
    let recording = Recording::from_decoded(leadsheet::input::read(path).expect("read")).expect("leads");
    let measured = apply(&recording, MEASUREMENT).expect("chain");
    let beats = find(&measured);
    let spikes: Vec<usize> = beats.spikes.iter().map(|spike| spike.0).collect();
    let channels = Channels::of(&measured).bridged(&spikes);
    let record = path.file_stem().unwrap().to_string_lossy().into_owned();
    let mut single = beats.clone();
    for (number, beat) in single.all.iter_mut().enumerate() {
        beat.class = ClassId(number);
    }
    let wanted = |at: f64| first - 12.0 <= at && at <= last + 12.0;
    for (number, beat) in beats.all.iter().enumerate() {
        let at = beats.rate.time_of(beat.fiducial).get();
        if !wanted(at) {
            continue;
        }
        let Some(own) = representative(&channels, &single, ClassId(number)) else { continue };
        line(index, values, &record, "beat", number, &beats, at, &own);
    }
    if last.is_infinite() {
        let classes = beats.all.iter().map(|beat| beat.class.0 + 1).max().unwrap_or(0);
        for class in 0..classes {
            let Some(own) = representative(&channels, &beats, ClassId(class)) else { continue };
            line(index, values, &record, "class", class, &beats, 0.0, &own);
        }
    }
}

#[allow(clippy::too_many_arguments)]
fn line(
    index: &mut fs::File,
    values: &mut Vec<f32>,
    record: &str,
    kind: &str,
    number: usize,
    beats: &Beats,
    at: f64,
    own: &leadsheet::average::RepresentativeBeat,
) {
    let windows = windows(own);
    let names: Vec<String> = own
        .names
        .iter()
        .map(|name| name.map_or_else(|| "-".to_owned(), |lead| lead.name().to_owned()))
        .collect();
    let (class, paced) =
        if kind == "beat" { (beats.all[number].class.0, beats.all[number].paced) } else { (number, false) };
    writeln!(
        index,
        "{record},{kind},{number},{at:.6},{class},{},{},{},{},{},{}",
        u8::from(paced),
        own.time_of(own.valid.start).get(),
        own.time_of(own.valid.end).get(),
        own.used.len(),
        names.join(" "),
        values.len(),
    )
    .expect("index");
    for window in windows {
        values.extend(window);
    }
}
