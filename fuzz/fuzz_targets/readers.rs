//! Every reader on any bytes: a scan or an error, never a panic. `cargo fuzz run readers`, with the files of
//! `tests/refused` as seeds.
#![no_main]

use libfuzzer_sys::fuzz_target;
use parabound::scan::read::{LinePatterns, Match, ReadSettings, read_logs, read_scan};
use parabound::units::{EnergyUnit, LengthUnit};

fuzz_target!(|bytes: &[u8]| {
    let stated = ReadSettings {
        length_unit: Some(LengthUnit::Angstrom),
        energy_unit: Some(EnergyUnit::Hartree),
        bond: Some([1, 2]),
        lines: Some(LinePatterns { length: r"r\D*(\S+)".into(), energy: r"E\D*(\S+)".into(), which: Match::Last }),
        ..ReadSettings::default()
    };
    for settings in [ReadSettings::default(), stated.clone()] {
        if let Ok(scan) = read_scan("fuzzed", bytes, &settings) {
            assert!(scan.checked().is_ok());
        }
    }
    let _ = read_logs("fuzzed", [("fuzzed.log", bytes)], &stated);
});
