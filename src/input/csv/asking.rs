//! How to ask for what a table leaves open.

use crate::input::Fault;

/// Names the sidecar in every question.
pub(super) struct Asking<'a> {
    /// File name of the sidecar.
    pub sidecar: &'a str,
    /// Whether there is one already.
    pub present: bool,
}

impl Asking<'_> {
    /// "to NAME.toml", which may have to be written first.
    fn place(&self) -> String {
        if self.present {
            format!("to {}", self.sidecar)
        } else {
            format!("to a text file {} beside the table", self.sidecar)
        }
    }

    pub fn names(&self, columns: usize) -> Fault {
        Fault::unsupported(
            format!("no header row names the {columns} columns"),
            format!(
                "for the names add such a row, as `I [mV],II [mV]`, or a line as `leads = [\"I\", \"II\"]` {}",
                self.place()
            ),
        )
    }

    pub fn rate(&self) -> Fault {
        Fault::unsupported(
            "no sampling rate is stated",
            format!(
                "for the rate add a column `time [s]`, or a line `rate = ` with the samples per second {}",
                self.place()
            ),
        )
    }

    pub fn time_unit(&self, column: &str) -> Fault {
        Fault::unsupported(
            format!("the time column `{column}` states no unit, so the sampling rate is not known"),
            format!("write its heading as `{column} [s]` or `{column} [ms]`"),
        )
    }

    /// `column` is the first of those without a unit; `None` when all are without.
    pub fn unit(&self, column: Option<&str>, heading: &str) -> Fault {
        let what = match column {
            Some(column) => format!("column `{column}` states no unit"),
            None => "no unit is stated".to_owned(),
        };
        let heading = if heading.is_empty() { "I" } else { heading };
        let advice = format!(
            "for the unit (mV, uV, V: whichever it is) write the heading as `{heading} [mV]`, or add a line as `unit = \"mV\"` {}",
            self.place()
        );
        Fault::unsupported(what, advice)
    }
}

/// Several questions as one.
pub(super) fn together(faults: Vec<Fault>) -> Fault {
    let (mut whats, mut advices) = (Vec::new(), Vec::new());
    for fault in faults {
        match fault {
            Fault::Unsupported { what, advice } => {
                whats.push(what);
                advices.push(advice);
            }
            other => return other,
        }
    }
    Fault::unsupported(whats.join(", "), advices.join("; "))
}
