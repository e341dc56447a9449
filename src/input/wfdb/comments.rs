//! What the comment lines of a header state, and how the same is written as comments.
//!
//! Known keys, in any case, with or without `<>`: age, sex, name, id, birth date, zone, place, operator,
//! device, placement, manoeuvre, drug, low cut, high cut, mains (Hz), caution, remark; and for signals,
//! counted from 1, `not calibrated: 1 2` and `clipped: 1 20-25 40-40` with the first and last sample of
//! each span. Every other comment is a remark as it stands.

use crate::input::stated::{age_of, date_of, says_nothing, sex_of, zone_of};
use crate::recording::{Note, Occasion, Subject};
use crate::units::{Hertz, Span, Spans};
use chrono::FixedOffset;

/// What all comments together state.
#[derive(Debug, Default, PartialEq)]
pub(super) struct Stated {
    pub subject: Subject,
    /// Without the start, which stands on the record line.
    pub occasion: Occasion,
    pub zone: Option<FixedOffset>,
    pub notes: Vec<Note>,
    /// Signals whose scale is not calibrated, counted from 0.
    pub uncalibrated: Vec<usize>,
    /// Clipped spans of signals, counted from 0. When there are any, they are all.
    pub clipped: Vec<(usize, Spans)>,
}

impl Stated {
    pub fn of(comments: &[String]) -> Self {
        let mut stated = Self::default();
        for comment in comments {
            for piece in pieces(comment) {
                if !stated.take(piece) {
                    stated.occasion.remarks.push(piece.to_owned());
                }
            }
        }
        stated
    }

    /// Adds what a segment's header says: its subject where there is none yet, remarks and cautions once.
    pub fn add(&mut self, segment: Self) {
        if self.subject == Subject::default() {
            self.subject = segment.subject;
        }
        for remark in segment.occasion.remarks {
            if !self.occasion.remarks.contains(&remark) {
                self.occasion.remarks.push(remark);
            }
        }
        for note in segment.notes {
            if !self.notes.contains(&note) {
                self.notes.push(note);
            }
        }
    }

    /// Takes a comment of a known key; `false` leaves it to the remarks. What was stated first stays.
    fn take(&mut self, comment: &str) -> bool {
        let Some((key, value)) = comment.split_once(':') else { return self.take_age_and_sex(comment) };
        let (key, value) = (key.trim().trim_matches(['<', '>']).to_lowercase(), value.trim());
        let (subject, occasion) = (&mut self.subject, &mut self.occasion);
        let filters = &mut occasion.filters;
        match key.as_str() {
            "remark" => {
                occasion.remarks.push(value.to_owned());
                true
            }
            _ if says_nothing(value) && !value.is_empty() => true,
            "age" => set(&mut subject.age, age_of(value)),
            "sex" => set(&mut subject.sex, sex_of(value)),
            "name" => set(&mut subject.name, text(value)),
            "id" => set(&mut subject.id, text(value)),
            "birth date" => set(&mut subject.birth_date, date_of(value)),
            "zone" => set(&mut self.zone, zone_of(value)),
            "place" => set(&mut occasion.place, text(value)),
            "operator" => set(&mut occasion.operator, text(value)),
            "device" => set(&mut occasion.device, text(value)),
            "placement" => set(&mut occasion.placement, text(value)),
            "manoeuvre" => set(&mut occasion.manoeuvre, text(value)),
            "drug" => set(&mut occasion.drug, text(value)),
            "low cut" => set(&mut filters.low_cut, hertz(value)),
            "high cut" => set(&mut filters.high_cut, hertz(value)),
            "mains" => set(&mut filters.mains, hertz(value)),
            "caution" if !value.is_empty() => {
                self.notes.push(Note::caution(value));
                true
            }
            "not calibrated" => self.take_uncalibrated(value).is_some(),
            "clipped" => self.take_clipped(value).is_some(),
            _ => false,
        }
    }

    /// `69 M`, as the oldest open database has it; where more follows, the line stays a remark too.
    fn take_age_and_sex(&mut self, comment: &str) -> bool {
        let mut words = comment.split_ascii_whitespace();
        let (Some(age), Some(sex @ ("M" | "F"))) = (words.next(), words.next()) else { return false };
        if age.parse::<i32>().is_err() {
            return false;
        }
        set(&mut self.subject.age, age_of(age));
        set(&mut self.subject.sex, sex_of(sex));
        words.next().is_none()
    }

    fn take_uncalibrated(&mut self, value: &str) -> Option<()> {
        let signals: Option<Vec<usize>> = value.split_ascii_whitespace().map(signal_index).collect();
        self.uncalibrated.extend(signals?);
        Some(())
    }

    fn take_clipped(&mut self, value: &str) -> Option<()> {
        let mut words = value.split_ascii_whitespace();
        let signal = signal_index(words.next()?)?;
        let spans: Option<Vec<Span>> = words
            .map(|word| {
                let (first, last) = word.split_once('-')?;
                Some(Span { start: first.parse().ok()?, end: last.parse::<usize>().ok()?.checked_add(1)? })
            })
            .collect();
        self.clipped.push((signal, Spans::from_unordered(spans?)));
        Some(())
    }
}

/// One comment line may hold several statements: `<age>: 25  <sex>: M`, or `Age: 56 #Sex: Female`.
fn pieces(comment: &str) -> Vec<&str> {
    if comment.starts_with('<') && comment.matches(">:").count() > 1 {
        let starts: Vec<usize> = comment.match_indices('<').map(|(at, _)| at).collect();
        let ends = starts.iter().skip(1).copied().chain([comment.len()]);
        return starts.iter().zip(ends).map(|(&start, end)| comment[start..end].trim()).collect();
    }
    let split: Vec<&str> = comment.split(" #").map(str::trim).collect();
    if split.iter().all(|piece| piece.contains(':')) { split } else { vec![comment] }
}

/// Fills what is still empty; `false` when there is nothing to fill it with, or it is full.
fn set<T>(place: &mut Option<T>, value: Option<T>) -> bool {
    if place.is_some() || value.is_none() {
        return false;
    }
    *place = value;
    true
}

fn text(value: &str) -> Option<String> {
    (!value.is_empty()).then(|| value.to_owned())
}

fn hertz(value: &str) -> Option<Hertz> {
    let number = value.strip_suffix("Hz").unwrap_or(value).trim();
    number.parse().ok().and_then(Hertz::new).filter(|frequency| frequency.get() >= 0.0)
}

fn signal_index(word: &str) -> Option<usize> {
    word.parse::<usize>().ok()?.checked_sub(1)
}

/// The comments that [`Stated::of`] reads as `stated`.
pub(super) fn written(stated: &Stated) -> Vec<String> {
    let Stated { subject, occasion, zone, notes, uncalibrated, clipped } = stated;
    let mut lines = Vec::new();
    let mut line = |key: &str, value: Option<String>| {
        // A value over several lines would end the comment.
        let value = value.map(|value| value.lines().collect::<Vec<_>>().join(" "));
        lines.extend(value.map(|value| format!("{key}: {value}")));
    };
    let in_hertz = |frequency: Option<Hertz>| frequency.map(|frequency| format!("{} Hz", frequency.get()));
    line("name", subject.name.clone());
    line("id", subject.id.clone());
    line("birth date", subject.birth_date.map(|date| date.to_string()));
    line("sex", subject.sex.as_ref().map(ToString::to_string));
    line("age", subject.age.map(|age| age.years.to_string()));
    line("zone", zone.map(|zone| zone.to_string()));
    line("place", occasion.place.clone());
    line("operator", occasion.operator.clone());
    line("device", occasion.device.clone());
    line("placement", occasion.placement.clone());
    line("manoeuvre", occasion.manoeuvre.clone());
    line("drug", occasion.drug.clone());
    line("low cut", in_hertz(occasion.filters.low_cut));
    line("high cut", in_hertz(occasion.filters.high_cut));
    line("mains", in_hertz(occasion.filters.mains));
    for note in notes {
        line("caution", Some(note.text.clone()));
    }
    if !uncalibrated.is_empty() {
        let numbers: Vec<String> = uncalibrated.iter().map(|index| (index + 1).to_string()).collect();
        line("not calibrated", Some(numbers.join(" ")));
    }
    for (signal, spans) in clipped {
        let spans: Vec<String> =
            spans.iter().map(|span| format!("{}-{}", span.start, span.end - 1)).collect();
        // Old readers take lines of up to 255 characters.
        for part in spans.chunks(10) {
            line("clipped", Some(format!("{} {}", signal + 1, part.join(" "))));
        }
    }
    for remark in occasion.remarks.iter().flat_map(|remark| remark.lines()).map(str::trim) {
        let alone = Stated::of(&[remark.to_owned()]);
        let plain = alone == Stated::only_remark(remark) && !remark.starts_with('#');
        lines.push(if plain { remark.to_owned() } else { format!("remark: {remark}") });
    }
    lines
}

impl Stated {
    fn only_remark(remark: &str) -> Self {
        let occasion = Occasion { remarks: vec![remark.to_owned()], ..Occasion::default() };
        Self { occasion, ..Self::default() }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::recording::Sex;

    fn stated(lines: &[&str]) -> Stated {
        Stated::of(&lines.iter().map(|line| (*line).to_owned()).collect::<Vec<_>>())
    }

    // Source: comment lines of LUDB, the PhysioNet challenges, PTB, MIT-BIH and MIMIC headers.
    #[test]
    fn age_and_sex_in_every_spelling_met() {
        for (lines, age, sex) in [
            (&["<age>: 51", "<sex>: F", "<diagnoses>:"][..], Some(51.0), Some(Sex::Female)),
            (&["Age: 74", "Sex: Male", "Dx: RBBB"], Some(74.0), Some(Sex::Male)),
            (&["age: 81", "sex: female", "Smoker: no"], Some(81.0), Some(Sex::Female)),
            (
                &["<age>: 25  <sex>: M  <diagnoses>: (none)  <medications>: (none)"],
                Some(25.0),
                Some(Sex::Male),
            ),
            (&["Age: 56 #Sex: Female #Dx: 426783006"], Some(56.0), Some(Sex::Female)),
            (&["69 M 1085 1629 x1"], Some(69.0), Some(Sex::Male)),
            (&["-1 M 742 654 x1"], None, Some(Sex::Male)),
            (&["<age>: ?? <sex>: ?"], None, None),
            (&["Age: NaN", "Sex: Unknown"], None, None),
        ] {
            let subject = stated(lines).subject;
            assert_eq!((subject.age.map(|age| age.years), subject.sex), (age, sex), "{lines:?}");
        }
    }

    #[test]
    fn what_states_nothing_is_dropped_and_the_rest_stays_a_remark() {
        let lines =
            ["Rx: Unknown", "Left ventricular hypertrophy.", "Age: 300", "69 M 1085 1629 x1", "<diagnoses>:"];
        let remarks = stated(&lines).occasion.remarks;
        assert_eq!(
            remarks,
            ["Left ventricular hypertrophy.", "Age: 300", "69 M 1085 1629 x1", "<diagnoses>:"]
        );
    }

    #[test]
    fn what_is_written_reads_back_the_same() {
        let lines = [
            "name: Ἑλένη Παπαδοπούλου",
            "id: A: 17",
            "birth date: 1970-12-31",
            "sex: intersex",
            "age: 0.25",
            "zone: -03:30",
            "place: ward 3",
            "low cut: 0.05 Hz",
            "mains: 50 Hz",
            "caution: the checksum does not match",
            "not calibrated: 2",
            "clipped: 1 3-3 7-9",
            "remark: age: about thirty",
            "remark: Rx: Unknown",
            "remark: # 5",
            "plain words: 5",
        ];
        let once = stated(&lines);
        assert_eq!(once.occasion.remarks, ["age: about thirty", "Rx: Unknown", "# 5", "plain words: 5"]);
        assert_eq!(Stated::of(&written(&once)), once);
        assert_eq!(once.clipped.len() + once.uncalibrated.len() + once.notes.len(), 3);
    }
}
