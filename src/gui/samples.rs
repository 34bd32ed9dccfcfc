//! The bundled sample scans, so that the window has something to show at once.

/// A bundled scan.
#[derive(Debug)]
pub struct Sample {
    /// What it is, for a menu.
    pub title: &'static str,
    /// Its file name.
    pub file_name: &'static str,
    /// The file.
    pub bytes: &'static [u8],
}

macro_rules! sample {
    ($title:literal, $file:literal) => {
        Sample {
            title: $title,
            file_name: $file,
            bytes: include_bytes!(concat!("../../sample-scans/", $file)),
        }
    };
}

/// All samples; the first one is opened where no file is named.
pub const SAMPLES: &[Sample] = &[
    sample!("LiH, two states", "lih_X_A.csv"),
    sample!("H₂, full CI", "h2_fci.csv"),
    sample!("CO near its minimum", "co_ccsdt_bohr.dat"),
    sample!("N₂, two methods", "n2_casscf_nevpt2.tsv"),
    sample!("HF, three methods", "hf_rhf_mp2_ccsdt.csv"),
    sample!("HCl, as it came", "hcl_messy.txt"),
    sample!("O–H bond of water", "water_oh_relaxed.csv"),
];
