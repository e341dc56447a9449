//! Every accuracy figure anew: printed, and filed in the README between its two marks.

use super::judges::numbers;
use super::{INTERVALS, artificial, calibration, judges, noise};
use crate::support::project;
use std::collections::BTreeMap;
use std::fs;

const BEGIN: &str =
    "<!-- accuracy: written by `cargo test --release -- --ignored --nocapture accuracy` -->\n";
const END: &str = "<!-- accuracy: end -->\n";

#[test]
#[ignore = "minutes; writes the README's accuracy section"]
fn accuracy_figures_are_measured_anew_and_filed_in_the_readme() {
    let cells = artificial::cells();
    println!("artificial beats, errors in ms\n{}\n", artificial::table(&cells));
    let rows = calibration::rows();
    println!("calibration ECG, errors in ms\n{}\n", calibration::table(&rows));
    let counts = noise::counts(1);
    if let Some(counts) = &counts {
        println!("LUDB with muscle noise and drift, recordings\n{}", noise::table(counts));
    }
    let (Some(counts), Some(said)) = (counts, judges::all()) else {
        println!("the README is left as it is: the recordings or the judges are not here");
        return;
    };
    let section = [readers(&said), tachycardias(&said), built(&cells), stability(&rows), muscle(&counts)];
    let path = project().join("README.md");
    let readme = fs::read_to_string(&path).expect("the README");
    let (before, rest) = readme.split_once(BEGIN).expect("the README holds the first mark");
    let (_, after) = rest.split_once(END).expect("the README holds the second mark");
    let text = format!("{before}{BEGIN}\n{}\n{END}{after}", section.join("\n"));
    fs::write(&path, text).expect("the README can be written");
}

/// A table of Markdown.
fn markdown(heading: &[&str], rows: &[Vec<String>]) -> String {
    let line =
        |cells: &mut dyn Iterator<Item = String>| format!("| {} |\n", cells.collect::<Vec<_>>().join(" | "));
    let mut text = line(&mut heading.iter().map(|cell| (*cell).to_owned()));
    text += &format!("|{}\n", "---|".repeat(heading.len()));
    text.extend(rows.iter().map(|row| line(&mut row.iter().cloned())));
    text
}

fn signed(value: f64) -> String {
    let text = format!("{value:.1}");
    if text == "-0.0" { "0.0".to_owned() } else { text.replace('-', "−") }
}

fn spread(mean: f64, deviation: f64) -> String {
    format!("{} ± {deviation:.1}", signed(mean))
}

/// Against manual marks, beside what is published.
fn readers(said: &BTreeMap<&str, String>) -> String {
    // Published: 12 leads, wavelets, and networks (both LUDB, 2020); one lead, wavelets (Martínez 2004, from memory).
    let ludb = [
        ("P", "onset", "97.4; −2.7 ± 10.2", "–"),
        ("P", "offset", "0.4 ± 11.4", "–"),
        ("QRS", "onset", "99.7; −8.1 ± 7.7", "99.9; 2.1 ± 9.8"),
        ("QRS", "offset", "99.7; 3.8 ± 8.8", "–"),
        ("T", "offset", "98.4; 5.7 ± 15.5", "99.2; −0.3 ± 22.9"),
    ];
    let rows: Vec<Vec<String>> = ludb
        .iter()
        .map(|(wave, mark, wavelets, networks)| {
            let found = numbers(&said["waves"], &[wave, mark]);
            let own = format!("{:.1}; {}", found[3], spread(found[4], found[5]));
            vec![format!("{wave} {mark}"), own, (*wavelets).to_owned(), (*networks).to_owned()]
        })
        .collect();
    let mut text = "Each lead's marks against manual ones (LUDB 1.0.1, 100 recordings): F1 in %; mean ± SD in ms. Each recording is marked by a network that was trained without it (`held_out`, four folds).\n\n"
        .to_owned();
    text += &markdown(&["mark", "leadsheet", "published, wavelets 2020", "published, networks 2020"], &rows);

    let limits = [
        ("p_duration", "P", "±10 / 15"),
        ("pr", "PR", "±10 / 10"),
        ("qrs", "QRS", "±10 / 10"),
        ("qt", "QT", "±25 / 30"),
    ];
    let rows: Vec<Vec<String>> = limits
        .iter()
        .map(|(key, name, limit)| {
            let found = numbers(&said["global"], &[key]);
            let missed = format!("{:.0} of {:.0}", found[7], found[0] + found[7]);
            let own = spread(found[1], found[2]);
            vec![(*name).to_owned(), own, spread(found[3], found[4]), missed, (*limit).to_owned()]
        })
        .collect();
    text += "\nGlobal intervals against the third earliest and third latest manual mark over twelve leads (LUDB), ms. Limits of \
             IEC 60601-2-25:2011 for another set of real recordings, as we understand them: mean / SD, four outliers left out.\n\n";
    text += &markdown(
        &["interval", "mean ± SD", "without the four largest errors", "not given", "limits"],
        &rows,
    );

    let qtdb = [
        ("P", "onset", "2.0 ± 14.8"),
        ("QRS", "onset", "4.6 ± 7.7"),
        ("QRS", "offset", "0.8 ± 8.7"),
        ("T", "offset", "−1.6 ± 18.1"),
    ];
    let rows: Vec<Vec<String>> = qtdb
        .iter()
        .map(|(wave, mark, published)| {
            let found = numbers(&said["qtdb"], &[wave, mark]);
            let own = spread(found[4], found[5]);
            vec![format!("{wave} {mark}"), format!("{:.1}", found[1]), own, (*published).to_owned()]
        })
        .collect();
    text += "\nTwo leads, 15 minutes (QT Database 1.0.0, 26 recordings), against manual marks q1c, beat by beat, ms. Published: \
             Martínez 2004, the better lead of each beat (from memory).\n\n";
    text += &markdown(&["mark", "found, %", "mean ± SD", "published"], &rows);

    let beats = numbers(&said["beats"], &["all:"]);
    text + &format!(
        "\nBeats of 7 half-hour recordings (MIT-BIH Arrhythmia 1.0.0): sensitivity {:.2} %, precision {:.2} %; published: above 99.8 %.\n",
        beats[0], beats[1]
    )
}

/// The retrograde P and the onset, on built recordings; nothing is published to set beside them.
fn tachycardias(said: &BTreeMap<&str, String>) -> String {
    let (alone, compared) =
        said["retro"].split_once("with the sinus recording").expect("the judge tells of both ways");
    let kinds = [
        ("terminal", "inside or at the end of the QRS"),
        ("short", "in ST"),
        ("mid", "in T"),
        ("long", "behind T"),
        ("no-p", "none built: false suspicions"),
    ];
    let rows: Vec<Vec<String>> = kinds
        .iter()
        .map(|(kind, name)| {
            let [alone, compared] = [alone, compared].map(|text| {
                let found = numbers(text, &[kind]);
                let count = format!("{:.0} of {:.0}", found[2], found[0]);
                if *kind == "no-p" { count } else { format!("{count}; {}", spread(found[4], found[5])) }
            });
            vec![(*name).to_owned(), alone, compared]
        })
        .collect();
    let mut text = "A retrograde P built into tachycardias of LUDB beats, on which the network was trained, with muscle noise: suspected at the right place; error of RP, \
                    mean ± SD in ms.\n\n"
        .to_owned();
    text += &markdown(&["retrograde P", "alone", "with the sinus recording"], &rows);
    let onset = &said["onset"];
    let line = |ending: &str| onset.lines().find(|line| line.contains(ending)).expect("a line").to_owned();
    let found = numbers(&line("with a tachycardia"), &[]);
    let false_ones = numbers(&line("premature beats only"), &[]);
    text + &format!(
        "\nBuilt recordings (of LUDB beats too) in which a tachycardia starts and ends: {:.0} of {:.0} found, start and end within a beat {:.0} and {:.0}, \
         last wave {:.0}, premature P within 30 ms {:.0}, PR jump within 25 ms {:.0}; {:.0} false in {:.0} with premature beats only.\n",
        found[1], found[0], found[2], found[3], found[4], found[6], found[8], false_ones[1], false_ones[0]
    )
}

fn built(cells: &[artificial::Cell]) -> String {
    let constants = artificial::Constants::of(cells);
    let bands: [(&str, f64, f64); 3] =
        [("40–100/min", 40.0, 100.0), ("120–140/min", 120.0, 140.0), ("160–220/min", 160.0, 220.0)];
    let mut rows = vec![vec!["constant taken off".to_owned()]];
    rows[0].extend(constants.intervals.iter().map(|constant| signed(*constant)));
    for (name, from, to) in bands {
        let band: Vec<_> = cells.iter().filter(|cell| (from..=to).contains(&cell.rate)).collect();
        let mut row = vec![name.to_owned()];
        row.extend((0..4).map(|index| {
            let errors: Vec<f64> = band
                .iter()
                .filter_map(|cell| cell.intervals[index])
                .map(|e| (e - constants.intervals[index]).abs())
                .collect();
            let largest = errors.iter().copied().fold(0.0, f64::max);
            match errors.len() {
                0 => "not given".to_owned(),
                given if given == band.len() => format!("{largest:.1}"),
                given => format!("{largest:.1} ({given} of {} given)", band.len()),
            }
        }));
        rows.push(row);
    }
    let mut heading = vec!["rate"];
    heading.extend(INTERVALS);
    "Artificial beats of known marks, without noise, at 250, 360, 500, 1000 and 2000 samples per second: largest error in ms. \
     T begins 15 ms behind the QRS; from 180/min on P lies on T.\n\n"
        .to_owned()
        + &markdown(&heading, &rows)
}

fn stability(rows: &[calibration::Row]) -> String {
    let lines: Vec<Vec<String>> = rows
        .iter()
        .map(|row| {
            let mut line = vec![row.noise.name()];
            line.extend(row.errors.iter().map(|errors| spread(errors.mean(), errors.deviation())));
            line
        })
        .chain([std::iter::once("limits, mean / SD".to_owned())
            .chain(calibration::LIMITS.iter().map(|(mean, deviation)| format!("±{mean} / {deviation}")))
            .collect()])
        .collect();
    let mut heading = vec!["noise"];
    heading.extend(INTERVALS);
    let (given, runs) =
        rows.iter().fold((0, 0), |sum, row| (sum.0 + row.errors[0].count(), sum.1 + row.runs));
    format!(
        "An artificial calibration ECG of our own (I, II and V1–V6 identical, waves with corners), 43 to 150/min, with the noise of \
         IEC 60601-2-51 annex II: mean ± SD of the error in ms; P is given in {given} of {runs}. Limits of IEC 60601-2-25:2011 for \
         artificial recordings, as we understand them. Means beyond the limits are a known gap.\n\n"
    ) + &markdown(&heading, &lines)
}

fn muscle(counts: &[[noise::Count; 4]]) -> String {
    let rows: Vec<Vec<String>> = noise::LEVELS
        .iter()
        .zip(counts)
        .map(|(level, row)| {
            let cell = |count: &noise::Count| format!("{} / {} / {}", count.given, count.off, count.unsaid);
            std::iter::once(format!("{level} µV")).chain(row.iter().map(cell)).collect()
        })
        .collect();
    let clean: Vec<String> = counts[0].iter().map(|count| count.clean.to_string()).collect();
    let mut heading = vec!["muscle noise, RMS"];
    heading.extend(INTERVALS);
    format!(
        "Muscle noise (MIT-BIH Noise Stress Test) and a drift of five times its size mixed into LUDB: given / off by more than 40 ms from the \
         clean value / of these without a caution. Given clean: {}. The network was trained on these recordings without noise, and the caution's threshold was set on them.\n\n",
        clean.join(", ")
    ) + &markdown(&heading, &rows)
}
