//! A small writer of ISHNE Holter files, from the public description of the format.

/// A file to be written.
#[derive(Clone)]
pub struct Ishne {
    /// The count of samples that the header states.
    pub stated: i32,
    pub text: Vec<u8>,
    /// Code, quality and nV per count.
    pub leads: Vec<[i16; 3]>,
    pub rate: i16,
    /// Day, month, year; hour, minute, second.
    pub start: [i16; 6],
    pub birth: [i16; 3],
    pub sex: i16,
    pub pacemaker: i16,
    /// Interleaved.
    pub counts: Vec<i16>,
}

impl Ishne {
    /// A sound file of two leads, 2.5 µV a count.
    pub fn two_leads(counts: Vec<i16>) -> Self {
        Self {
            stated: counts.len() as i32 / 2,
            text: Vec::new(),
            leads: vec![[5, 1, 2500], [11, 1, 2500]],
            rate: 500,
            start: [2, 3, 2021, 10, 20, 30],
            birth: [-9; 3],
            sex: 0,
            pacemaker: 0,
            counts,
        }
    }

    /// The bytes of the file.
    pub fn bytes(&self) -> Vec<u8> {
        let mut header = vec![0u8; 522 + self.text.len()];
        let mut put = |at: usize, bytes: &[u8]| header[at..at + bytes.len()].copy_from_slice(bytes);
        put(0, b"ISHNE1.0");
        put(10, &(self.text.len() as i32).to_le_bytes());
        put(14, &self.stated.to_le_bytes());
        put(18, &522i32.to_le_bytes());
        put(22, &(522 + self.text.len() as i32).to_le_bytes());
        put(26, &1i16.to_le_bytes());
        put(28, b"Marigold");
        put(68, b"Example");
        put(108, b"INVENTED-7");
        put(232, b"digital");
        put(522, &self.text);
        let mut word = |at: usize, value: i16| put(at, &value.to_le_bytes());
        word(128, self.sex);
        word(156, self.leads.len() as i16);
        word(230, self.pacemaker);
        word(272, self.rate);
        (0..3).for_each(|at| word(132 + 2 * at, self.birth[at]));
        (0..3).for_each(|at| word(138 + 2 * at, self.start[at]));
        (0..3).for_each(|at| word(150 + 2 * at, self.start[3 + at]));
        for (at, [code, quality, resolution]) in self.leads.iter().enumerate() {
            word(158 + 2 * at, *code);
            word(182 + 2 * at, *quality);
            word(206 + 2 * at, *resolution);
        }
        let checksum = checksum(&header[10..]);
        header[8..10].copy_from_slice(&checksum.to_le_bytes());
        header.extend(self.counts.iter().flat_map(|count| count.to_le_bytes()));
        header
    }
}

/// CRC-CCITT by long division, bit by bit.
fn checksum(bytes: &[u8]) -> u16 {
    let mut register = 0xffffu32;
    for bit in bytes.iter().flat_map(|byte| (0..8).rev().map(move |at| u32::from(byte >> at & 1))) {
        let out = register >> 15 & 1;
        register = register << 1 & 0xffff;
        if out != bit {
            register ^= 0x1021;
        }
    }
    register as u16
}
