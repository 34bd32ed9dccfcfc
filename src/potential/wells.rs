//! What the closed-form wells share: where their inner wall turns over, if it does.

use super::Potential;

/// Steps from r_e towards r = 0 in which a turn-over is looked for.
const STEPS: u32 = 200;

/// The nearest bond length (bohr) below r_e at which V stops rising towards r = 0; zero when it never does.
pub(crate) fn inner_edge_bohr(potential: &dyn Potential) -> f64 {
    let r_e = potential.minimum_bohr();
    let rises = |r: f64| potential.derivatives_hartree(r)[1] < 0.0;
    let place = |k: u32| r_e * (1.0 - f64::from(k) / f64::from(STEPS));
    // The first step is inside the rounding of V′ at the minimum for no molecule, but skip it to be safe.
    let Some(k) = (2..STEPS).find(|&k| !rises(place(k))) else { return 0.0 };
    let (mut falling, mut rising) = (place(k), place(k - 1));
    loop {
        let middle = 0.5 * (falling + rising);
        if middle <= falling || middle >= rising {
            return rising;
        }
        if rises(middle) {
            rising = middle;
        } else {
            falling = middle;
        }
    }
}

/// The lower of the asymptote and the top of a turned-over inner wall, in hartree.
pub(crate) fn limit_hartree(potential: &dyn Potential, asymptote_hartree: f64) -> f64 {
    let edge = inner_edge_bohr(potential);
    if edge > 0.0 { asymptote_hartree.min(potential.energy_hartree(edge)) } else { asymptote_hartree }
}
