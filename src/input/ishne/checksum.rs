//! The checksum of the header.

/// CRC-CCITT: polynomial 0x1021, start 0xffff, not reflected.
pub(super) fn crc_ccitt(bytes: &[u8]) -> u16 {
    bytes.iter().fold(0xffff, |crc: u16, &byte| {
        (0..8).fold(
            crc ^ u16::from(byte) << 8,
            |crc, _| {
                if crc & 0x8000 == 0 { crc << 1 } else { crc << 1 ^ 0x1021 }
            },
        )
    })
}

#[cfg(test)]
mod tests {
    // Source: the check value that is published for CRC-16 with these parameters.
    #[test]
    fn the_check_value_is_the_published_one() {
        assert_eq!(super::crc_ccitt(b"123456789"), 0x29b1);
    }
}
