//! The measurements as plain text for a terminal.

use crate::case::{CAUTION, Case, Entry, table};
use crate::findings::{Search, Suspected};
use crate::recording::Weight;
use std::fmt::Write;

/// A table of the measurements, the outcome of the search, the notes, the caution.
pub fn text(case: &Case) -> String {
    let mut out = String::new();
    let recording = &case.recording;
    // Writing to a String can't fail.
    let _ = writeln!(
        out,
        "{}  ({}, {:.1} s at {}/s)\n",
        recording.source.file,
        recording.source.format,
        recording.duration().get(),
        recording.rate.get()
    );
    for row in table(case) {
        let _ = match row.entry {
            Entry::Value { value, expected_error, over_beats } => {
                let sure = [
                    expected_error.map(|error| format!("± {error} expected error")),
                    over_beats.map(|spread| format!("SD {spread} over beats")),
                ];
                let sure = sure.into_iter().flatten().collect::<Vec<_>>().join(", ");
                let line = format!("{:<18}{value:>6} {:<6} {sure}", row.quantity, row.unit);
                writeln!(out, "{}", line.trim_end())
            }
            Entry::Reason(reason) => writeln!(out, "{:<18}{:>6} {reason}", row.quantity, "–"),
        };
    }
    out.push('\n');
    search(&mut out, &case.analysis.findings.retrograde_p);
    for seen in &case.analysis.findings.observations {
        let _ = writeln!(out, "Observed: {}", seen.what);
    }
    for note in &recording.notes {
        let word = if note.weight == Weight::Caution { "Caution" } else { "Note" };
        let _ = writeln!(out, "{word}: {}", note.text);
    }
    let _ = writeln!(out, "\n{CAUTION}");
    out
}

fn search(out: &mut String, search: &Search) {
    match search {
        Search::NotDone(why) => {
            let _ = writeln!(out, "Retrograde P: not searched, {why}");
        }
        Search::Done(done) if done.suspected.is_empty() => {
            let _ = writeln!(out, "Retrograde P: nothing separable, a normal result that excludes nothing");
        }
        Search::Done(done) => {
            for suspected in &done.suspected {
                let _ = writeln!(out, "Suspected, for a reader to confirm: {}", sentence(suspected));
            }
        }
    }
}

fn sentence(suspected: &Suspected) -> String {
    let leads: Vec<&str> = suspected.leads.iter().map(|lead| lead.name()).collect();
    let rp = match suspected.rp {
        Some(rp) => format!("RP {:.0} ms", rp.ms()),
        None => "begins inside the QRS".to_owned(),
    };
    let sinus = if suspected.needs_sinus_recording { "; sinus recording needed to call it" } else { "" };
    format!(
        "{} in {}, {rp}, {:.2} mV in {}, {} of {} beats{sinus}",
        suspected.sign.name(),
        leads.join(", "),
        suspected.amplitude.get(),
        suspected.clearest,
        suspected.evidence.showing,
        suspected.evidence.examined,
    )
}
