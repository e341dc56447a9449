//! A small sRGB profile (ICC.1:2001-04, version 2.1), computed here so that no file has to be carried.

/// The profile's bytes.
pub(super) fn srgb() -> Vec<u8> {
    // Primaries of IEC 61966-2-1 adapted to D50, as s15Fixed16 (published values of the sRGB profile).
    let tags: [(&[u8; 4], Vec<u8>); 9] = [
        (b"desc", description("sRGB")),
        (b"cprt", text("No copyright, use freely")),
        (b"wtpt", xyz([0.9642, 1.0, 0.8249])),
        (b"rXYZ", xyz([0.4360, 0.2225, 0.0139])),
        (b"gXYZ", xyz([0.3851, 0.7169, 0.0971])),
        (b"bXYZ", xyz([0.1431, 0.0606, 0.7141])),
        (b"rTRC", curve()),
        (b"gTRC", curve()),
        (b"bTRC", curve()),
    ];
    let mut table = (tags.len() as u32).to_be_bytes().to_vec();
    let mut data = Vec::new();
    let first = 128 + 4 + 12 * tags.len();
    let mut last_curve = None;
    for (name, bytes) in &tags {
        // The three curves are one.
        let place = match last_curve {
            Some(place) if name.ends_with(b"TRC") => place,
            _ => {
                let place = first + data.len();
                data.extend_from_slice(bytes);
                data.resize(data.len().next_multiple_of(4), 0);
                place
            }
        };
        if name.ends_with(b"TRC") {
            last_curve = Some(place);
        }
        table.extend_from_slice(*name);
        table.extend_from_slice(&(place as u32).to_be_bytes());
        table.extend_from_slice(&(bytes.len() as u32).to_be_bytes());
    }
    let size = 128 + table.len() + data.len();
    let mut profile = header(size as u32);
    profile.extend(table);
    profile.extend(data);
    profile
}

fn header(size: u32) -> Vec<u8> {
    let mut header = Vec::with_capacity(128);
    header.extend_from_slice(&size.to_be_bytes());
    header.extend_from_slice(&[0; 4]);
    header.extend_from_slice(&0x0210_0000_u32.to_be_bytes());
    header.extend_from_slice(b"mntrRGB XYZ ");
    for part in [2026_u16, 1, 1, 0, 0, 0] {
        header.extend_from_slice(&part.to_be_bytes());
    }
    header.extend_from_slice(b"acsp");
    header.resize(68, 0);
    for part in [0.9642, 1.0, 0.8249] {
        header.extend_from_slice(&fixed(part));
    }
    header.resize(128, 0);
    header
}

fn fixed(value: f64) -> [u8; 4] {
    ((value * 65536.0).round() as i32).to_be_bytes()
}

fn xyz(values: [f64; 3]) -> Vec<u8> {
    let mut tag = b"XYZ \0\0\0\0".to_vec();
    tag.extend(values.into_iter().flat_map(fixed));
    tag
}

fn text(words: &str) -> Vec<u8> {
    let mut tag = b"text\0\0\0\0".to_vec();
    tag.extend_from_slice(words.as_bytes());
    tag.push(0);
    tag
}

fn description(words: &str) -> Vec<u8> {
    let mut tag = b"desc\0\0\0\0".to_vec();
    tag.extend_from_slice(&(words.len() as u32 + 1).to_be_bytes());
    tag.extend_from_slice(words.as_bytes());
    tag.push(0);
    // No Unicode and no ScriptCode description: their counts, and the fixed 67 bytes.
    tag.extend_from_slice(&[0; 4 + 4 + 2 + 1 + 67]);
    tag
}

/// The sRGB transfer curve in 256 steps (IEC 61966-2-1). No step lies so near to a half that another
/// machine's `powf` could round it elsewhere.
fn curve() -> Vec<u8> {
    let mut tag = b"curv\0\0\0\0".to_vec();
    tag.extend_from_slice(&256_u32.to_be_bytes());
    for step in 0..256 {
        tag.extend_from_slice(&(linear(step).round() as u16).to_be_bytes());
    }
    tag
}

/// Of 65535.
fn linear(step: u16) -> f64 {
    let encoded = f64::from(step) / 255.0;
    let linear = if encoded <= 0.04045 { encoded / 12.92 } else { ((encoded + 0.055) / 1.055).powf(2.4) };
    linear * 65535.0
}

#[cfg(test)]
mod tests {
    #[test]
    fn no_step_of_the_curve_is_near_a_rounding_tie() {
        for step in 0..256 {
            let part = super::linear(step).fract();
            assert!((part - 0.5).abs() > 1e-3, "step {step}: {part}");
        }
    }
}
