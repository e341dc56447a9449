//! The codes of the header.

/// The name of a lead code; these are not the codes of other formats.
pub(super) fn lead(code: i16) -> String {
    let names = [
        "unknown", "bipolar", "X", "Y", "Z", "I", "II", "III", "aVR", "aVL", "aVF", "V1", "V2", "V3", "V4",
        "V5", "V6", "ES", "AS", "AI",
    ];
    match usize::try_from(code).ok().and_then(|code| names.get(code)) {
        Some(name) => (*name).to_owned(),
        None => format!("lead code {code}"),
    }
}

/// What a quality code says, if it is no good.
pub(super) fn poor_quality(code: i16) -> Option<&'static str> {
    match code {
        2 => Some("intermittent noise"),
        3 => Some("frequent noise"),
        4 => Some("intermittent disconnection"),
        5 => Some("frequent disconnection"),
        _ => None,
    }
}
