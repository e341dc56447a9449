//! Small pieces of PDF.

use super::Error;
use flate2::Compression;
use flate2::write::ZlibEncoder;
use lopdf::{Dictionary, Object, Stream, StringFormat};
use std::io::Write;

/// A real number.
pub(super) fn real(value: f64) -> Object {
    Object::Real(value as f32)
}

/// A sheet's content takes 2.2 ms; level 6 takes 5.4 ms and saves 2 %, level 9 takes 18 ms and saves 3 %.
const LEVEL: Compression = Compression::new(4);

/// A stream, packed once, here.
pub(super) fn compressed(mut dictionary: Dictionary, bytes: &[u8]) -> Result<Stream, Error> {
    let mut packer = ZlibEncoder::new(Vec::with_capacity(bytes.len() / 3), LEVEL);
    let packed = packer
        .write_all(bytes)
        .and_then(|()| packer.finish())
        .map_err(|error| Error::Document(error.to_string()))?;
    dictionary.set("Filter", "FlateDecode");
    Ok(Stream::new(dictionary, packed).with_compression(false))
}

/// A text string: ASCII as it is, anything else as UTF-16 with its mark (ISO 32000-1, 7.9.2.2).
pub(super) fn text(text: &str) -> Object {
    if text.is_ascii() {
        return Object::String(text.as_bytes().to_vec(), StringFormat::Literal);
    }
    let mut bytes = vec![0xFE, 0xFF];
    bytes.extend(text.encode_utf16().flat_map(u16::to_be_bytes));
    Object::String(bytes, StringFormat::Hexadecimal)
}
