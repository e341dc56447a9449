//! NumPy archives (`.npz`): a zip of `.npy` files, stored or deflated. Only what the expected values need.

use flate2::read::DeflateDecoder;
use std::collections::BTreeMap;
use std::io::Read;
use std::path::Path;

/// The arrays of an archive by name; text as text, numbers as f64.
pub struct Npz(BTreeMap<String, Array>);

enum Array {
    Text(Vec<String>),
    Numbers(Vec<f64>),
}

impl Npz {
    /// Reads the whole archive. It panics on anything unexpected: it is a test that reads it.
    pub fn open(path: &Path) -> Self {
        let bytes = std::fs::read(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        let end = bytes.windows(4).rposition(|window| window == b"PK\x05\x06").expect("a zip directory");
        let mut arrays = BTreeMap::new();
        let mut entry = u32_at(&bytes, end + 16);
        for _ in 0..u16_at(&bytes, end + 10) {
            let (method, packed) = (u16_at(&bytes, entry + 10), u32_at(&bytes, entry + 20));
            let name_length = u16_at(&bytes, entry + 28);
            let name = String::from_utf8_lossy(&bytes[entry + 46..entry + 46 + name_length]).into_owned();
            let local = u32_at(&bytes, entry + 42);
            let data = local + 30 + u16_at(&bytes, local + 26) + u16_at(&bytes, local + 28);
            let data = &bytes[data..data + packed];
            let npy = match method {
                0 => data.to_vec(),
                8 => {
                    let mut npy = Vec::new();
                    DeflateDecoder::new(data).read_to_end(&mut npy).expect("deflated data");
                    npy
                }
                other => panic!("zip method {other}"),
            };
            arrays.insert(name.trim_end_matches(".npy").to_owned(), array(&npy));
            entry += 46 + name_length + u16_at(&bytes, entry + 30) + u16_at(&bytes, entry + 32);
        }
        Self(arrays)
    }

    /// An array of numbers, row by row.
    pub fn numbers(&self, name: &str) -> &[f64] {
        match self.0.get(name) {
            Some(Array::Numbers(numbers)) => numbers,
            _ => panic!("no numbers named {name}"),
        }
    }

    /// An array of texts.
    pub fn texts(&self, name: &str) -> &[String] {
        match self.0.get(name) {
            Some(Array::Text(texts)) => texts,
            _ => panic!("no text named {name}"),
        }
    }
}

fn array(npy: &[u8]) -> Array {
    assert_eq!(&npy[..6], b"\x93NUMPY");
    let start = 10 + u16_at(npy, 8);
    let header = String::from_utf8_lossy(&npy[10..start]).into_owned();
    let kind = header.split("'descr': '").nth(1).and_then(|rest| rest.split('\'').next()).expect("a type");
    let data = &npy[start..];
    let eight = data.chunks_exact(8).map(|word| <[u8; 8]>::try_from(word).expect("eight bytes"));
    match kind {
        "<f8" => Array::Numbers(by_rows(eight.map(f64::from_le_bytes).collect(), &header)),
        "<i8" => {
            Array::Numbers(by_rows(eight.map(|word| i64::from_le_bytes(word) as f64).collect(), &header))
        }
        "<i4" => {
            let four = data.chunks_exact(4).map(|word| <[u8; 4]>::try_from(word).expect("four bytes"));
            Array::Numbers(by_rows(four.map(|word| i32::from_le_bytes(word).into()).collect(), &header))
        }
        text => {
            let width: usize =
                text.strip_prefix("<U").and_then(|width| width.parse().ok()).expect("a text type");
            let letters = |item: &[u8]| {
                item.chunks_exact(4)
                    .filter_map(|c| char::from_u32(u32_at(c, 0) as u32))
                    .filter(|c| *c != '\0')
                    .collect()
            };
            Array::Text(data.chunks_exact(4 * width).map(letters).collect())
        }
    }
}

/// Turns an array that stands column by column.
fn by_rows(numbers: Vec<f64>, header: &str) -> Vec<f64> {
    if !header.contains("'fortran_order': True") {
        return numbers;
    }
    let shape = header.split("'shape': (").nth(1).and_then(|rest| rest.split(')').next()).expect("a shape");
    let rows: usize = shape.split(',').next().and_then(|rows| rows.trim().parse().ok()).expect("a count");
    (0..rows).flat_map(|row| numbers.iter().skip(row).step_by(rows).copied()).collect()
}

fn u16_at(bytes: &[u8], at: usize) -> usize {
    usize::from(bytes[at]) | usize::from(bytes[at + 1]) << 8
}

fn u32_at(bytes: &[u8], at: usize) -> usize {
    u16_at(bytes, at) | u16_at(bytes, at + 2) << 16
}
