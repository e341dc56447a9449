//! A small writer of EDF and BDF, from the public descriptions of the formats, for what no sample shows.

/// A file to be written. Texts stand in the header as they are given, also when they are wrong.
#[derive(Clone)]
pub struct Edf {
    /// 24 bit instead of 16.
    pub bdf: bool,
    pub patient: &'static str,
    pub recording: &'static str,
    pub start: [&'static str; 2],
    pub reserved: &'static str,
    pub records: &'static str,
    pub duration: &'static str,
    pub signals: Vec<EdfSignal>,
}

/// One signal.
#[derive(Clone)]
pub struct EdfSignal {
    pub label: &'static str,
    pub unit: &'static str,
    /// Physical minimum and maximum, digital minimum and maximum.
    pub limits: [&'static str; 4],
    pub prefilter: &'static str,
    pub samples: usize,
    /// The bytes of each data record; filled up with zeros.
    pub data: Vec<Vec<u8>>,
}

/// The text of one field.
type Text = fn(&EdfSignal) -> String;

impl EdfSignal {
    /// A lead in µV, 1 µV a count, with the counts of all data records.
    pub fn lead(label: &'static str, samples: usize, counts: &[i32], width: usize) -> Self {
        let bytes = |record: &[i32]| {
            record.iter().flat_map(|count| count.to_le_bytes()[..width].to_vec()).collect::<Vec<u8>>()
        };
        Self {
            label,
            unit: "uV",
            limits: ["-1000", "1000", "-1000", "1000"],
            prefilter: "",
            samples,
            data: counts.chunks(samples).map(bytes).collect(),
        }
    }

    /// The annotations of each data record.
    pub fn annotations(label: &'static str, records: &[&str]) -> Self {
        Self {
            label,
            unit: "",
            limits: ["-1", "1", "-32768", "32767"],
            prefilter: "",
            samples: 24,
            data: records.iter().map(|text| text.as_bytes().to_vec()).collect(),
        }
    }
}

impl Edf {
    /// A sound file of 1 s records.
    pub fn plus(reserved: &'static str, records: &'static str, signals: Vec<EdfSignal>) -> Self {
        Self {
            bdf: reserved.starts_with("BDF"),
            patient: "X X X X",
            recording: "Startdate 02-MAR-2021 X X X",
            start: ["02.03.21", "10.20.30"],
            reserved,
            records,
            duration: "1",
            signals,
        }
    }

    /// The bytes of the file.
    pub fn bytes(&self) -> Vec<u8> {
        let field = |text: &str, width: usize| format!("{text:<width$}").into_bytes();
        let mut bytes = if self.bdf { b"\xffBIOSEMI".to_vec() } else { field("0", 8) };
        let header = (256 * (1 + self.signals.len())).to_string();
        let count = self.signals.len().to_string();
        for (text, width) in [
            (self.patient, 80),
            (self.recording, 80),
            (self.start[0], 8),
            (self.start[1], 8),
            (&header, 8),
            (self.reserved, 44),
            (self.records, 8),
            (self.duration, 8),
            (&count, 4),
        ] {
            bytes.extend(field(text, width));
        }
        let columns: [(usize, Text); 10] = [
            (16, |signal| signal.label.to_owned()),
            (80, |_| String::new()),
            (8, |signal| signal.unit.to_owned()),
            (8, |signal| signal.limits[0].to_owned()),
            (8, |signal| signal.limits[1].to_owned()),
            (8, |signal| signal.limits[2].to_owned()),
            (8, |signal| signal.limits[3].to_owned()),
            (80, |signal| signal.prefilter.to_owned()),
            (8, |signal| signal.samples.to_string()),
            (32, |_| String::new()),
        ];
        for (width, text) in columns {
            self.signals.iter().for_each(|signal| bytes.extend(field(&text(signal), width)));
        }
        let width = if self.bdf { 3 } else { 2 };
        let held = self.signals.iter().map(|signal| signal.data.len()).max().unwrap_or(0);
        for record in 0..held {
            for signal in &self.signals {
                let mut data = signal.data.get(record).cloned().unwrap_or_default();
                data.resize(signal.samples * width, 0);
                bytes.extend(data);
            }
        }
        bytes
    }
}
