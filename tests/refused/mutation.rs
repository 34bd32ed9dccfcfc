//! Mutated scans: whatever stands in a file, reading it ends with a scan or an error, never a panic.

use super::cases;
use parabound::scan::read::{ReadSettings, read_scan};
use parabound::units::{EnergyUnit, LengthUnit};
use std::path::Path;

/// The same inputs on every run.
const SEED: u64 = 0x9e37_79b9_7f4a_7c15;
const INPUTS: usize = 20_000;

/// Pieces that mean something to the reader.
const PIECES: [&[u8]; 24] = [
    b"\n",
    b"\r",
    b"\r\n",
    b",",
    b";",
    b"\t",
    b"  ",
    b"#",
    b"!",
    b"\"",
    b"-",
    b"e",
    b"D+999",
    b"NaN",
    b"(",
    b"]",
    b"/",
    b"_A",
    b"E_hartree",
    b"\xff\xfe",
    b"\xef\xbb\xbf",
    b"\xc3",
    b"\xe2\x88\x92",
    b"0,5",
];

/// Generator of pseudo-random numbers (G. Marsaglia, Xorshift RNGs, J. Stat. Softw. 8 (14), 2003).
struct Xorshift(u64);

impl Xorshift {
    fn below(&mut self, limit: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % limit.max(1) as u64) as usize
    }
}

fn mutate(bytes: &mut Vec<u8>, random: &mut Xorshift) {
    let at = random.below(bytes.len() + 1);
    let end = (at + random.below(12)).min(bytes.len());
    match random.below(6) {
        0 => drop(bytes.drain(at..end)),
        1 => drop(bytes.splice(at..at, PIECES[random.below(PIECES.len())].iter().copied())),
        2 => drop(bytes.splice(at..end, PIECES[random.below(PIECES.len())].iter().copied())),
        3 => {
            if let Some(byte) = bytes.get_mut(at) {
                *byte = random.below(256) as u8;
            }
        }
        4 => {
            let copy = bytes[at..end].to_vec();
            let to = random.below(bytes.len() + 1);
            drop(bytes.splice(to..to, copy));
        }
        _ => bytes.truncate(at),
    }
}

#[test]
fn mutated_files_never_panic() {
    let bytes = |folder: &str| cases(folder).into_iter().map(|case| case.bytes).collect::<Vec<_>>();
    let (bad, mut good) = (bytes("scans"), bytes("accepted"));
    for folder in ["sample-scans", "tests/scans"] {
        let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join(folder);
        let mut paths: Vec<_> =
            std::fs::read_dir(folder).expect("the folder").map(|e| e.expect("an entry").path()).collect();
        paths.sort();
        good.extend(paths.iter().map(|p| std::fs::read(p).expect("readable")));
    }
    let stated = ReadSettings {
        length_unit: Some(LengthUnit::Angstrom),
        energy_unit: Some(EnergyUnit::Hartree),
        bond: Some([1, 2]),
        ..ReadSettings::default()
    };
    let mut random = Xorshift(SEED);
    let (mut read, mut refused) = (0, 0);
    for _ in 0..INPUTS {
        // Good files mostly: a bad one is refused whatever else is done to it.
        let seeds = if random.below(4) == 0 { &bad } else { &good };
        let mut bytes = seeds[random.below(seeds.len())].clone();
        for _ in 0..=random.below(5) {
            mutate(&mut bytes, &mut random);
        }
        let settings = if random.below(2) == 0 { ReadSettings::default() } else { stated.clone() };
        match read_scan("mutated", &bytes, &settings) {
            Ok(scan) => {
                read += 1;
                assert!(scan.checked().is_ok());
            }
            Err(error) => {
                refused += 1;
                assert!(error.to_string().len() < 2_000, "a message too long to read: {error}");
            }
        }
    }
    // Both ways must be well trodden for the run to mean anything.
    assert!(read > INPUTS / 10 && refused > INPUTS / 10, "{read} read, {refused} refused");
}
