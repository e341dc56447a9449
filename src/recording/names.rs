//! From the many spellings of lead names to the twelve leads.

use super::Lead;

/// What a signal's name says.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Named {
    pub lead: Lead,
    /// Whether the name is that of a modified limb lead (`MLII`), whose electrodes sit on the torso.
    pub modified: bool,
}

const PREFIXES: [&str; 5] = ["mdc_ecg_elec_potl_", "mdc_ecg_lead_", "ecg", "ekg", "lead"];

/// The lead that a name means; `None` when it is none of the twelve. `-aVR` is another lead than aVR.
pub(super) fn lead_of(name: &str) -> Option<Named> {
    let folded = name.trim().to_lowercase();
    let bare = without_suffix(without_prefixes(&folded));
    let (bare, modified) = match bare {
        "mlii" | "ml2" => ("ii", true),
        other => (other, false),
    };
    let lead = Lead::ALL.into_iter().find(|lead| lead.name().eq_ignore_ascii_case(bare));
    let lead = lead.or(match bare {
        "di" | "d1" => Some(Lead::I),
        "dii" | "d2" => Some(Lead::II),
        "diii" | "d3" => Some(Lead::III),
        _ => None,
    });
    lead.map(|lead| Named { lead, modified })
}

/// Strips words like `ECG` and `Lead`, each with one separator at most: the minus of `ECG -aVR` stays.
fn without_prefixes(mut name: &str) -> &str {
    loop {
        let stripped = PREFIXES.iter().find_map(|prefix| {
            let rest = name.strip_prefix(prefix)?;
            let rest =
                if prefix.ends_with('_') { rest } else { rest.strip_prefix([' ', '_', ':', '-', '.'])? };
            (!rest.is_empty()).then_some(rest)
        });
        match stripped {
            Some(rest) => name = rest,
            None => return name,
        }
    }
}

/// Strips a reference (`V1-Ref`) and a remark in brackets (`I (Einthoven)`).
fn without_suffix(name: &str) -> &str {
    let name = match name.split_once('(') {
        Some((bare, remark)) if remark.ends_with(')') => bare,
        _ => name,
    };
    name.strip_suffix("-ref").unwrap_or(name).trim_end()
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: spellings met in open recordings (WFDB, DICOM, aECG, EDF), listed one by one.
    #[test]
    fn every_spelling_met_in_open_recordings_is_known() {
        for (name, lead) in [
            ("i", Lead::I),
            ("avr", Lead::AVR),
            ("AVL", Lead::AVL),
            ("aVF", Lead::AVF),
            ("ECG lead II", Lead::II),
            ("EKG II", Lead::II),
            ("Lead I (Einthoven)", Lead::I),
            ("MDC_ECG_LEAD_AVR", Lead::AVR),
            ("MDC_ECG_ELEC_POTL_V3", Lead::V3),
            ("ECG V1-Ref", Lead::V1),
            ("DIII", Lead::III),
            (" v6 ", Lead::V6),
        ] {
            assert_eq!(lead_of(name), Some(Named { lead, modified: false }), "{name}");
        }
        assert_eq!(lead_of("MLII"), Some(Named { lead: Lead::II, modified: true }));
    }

    #[test]
    fn what_is_no_lead_of_the_twelve_stays_none() {
        for name in [
            "-aVR",
            "ECG -aVR",
            "\u{2212}aVR",
            "V",
            "V7",
            "V3R",
            "vx",
            "MCL1",
            "ECG1",
            "ECG 1",
            "1",
            "",
            "ECG",
            "VR",
        ] {
            assert_eq!(lead_of(name), None, "{name}");
        }
    }
}
