//! What the closed-form wells share: an energy, a place and a depth, and where their inner wall turns over, if it does.

use super::{LocalShape, ModelFault, ParameterUnit, Parametric, Potential};

/// A well that dissociates: V(r) = e_min + D_e f(r) with f(r_e) = 0 and f → 1 at separation.
///
/// A family says what f is and how it moves; what follows for [`Potential`] and [`Parametric`] is the same for all.
pub(crate) trait Well: Sync {
    /// Whether the inner wall may turn over towards r = 0, which then bounds the well.
    const MAY_TURN_OVER: bool;

    /// e_min in hartree, r_e in bohr, D_e in hartree; [`well_base`] writes it.
    fn base(&self) -> [f64; 3];

    /// Puts others in their place.
    fn set_base(&mut self, base: [f64; 3]);

    /// Names, units and values (atomic units) of the further parameters.
    fn range_parameters(&self) -> Vec<(String, ParameterUnit, f64)>;

    /// Puts other values in their place, in that order.
    fn set_range_parameters(&mut self, values: &[f64]);

    /// f(r), free of cancellation near r_e.
    fn shape(&self, r_bohr: f64) -> f64;

    /// f and its first four derivatives by r, in 1/bohrⁿ; the first entry is not used.
    fn shape_derivatives(&self, r_bohr: f64) -> [f64; 5];

    /// f(r); fills ∂f/∂r_e and ∂f/∂p of the further parameters.
    fn shape_gradient(&self, r_bohr: f64, by_r_e: &mut f64, by_range: &mut [f64]) -> f64;

    /// What keeps the further parameters from making a well, where depth and bond length do not.
    fn range_fault(&self) -> Option<ModelFault>;

    /// Starting values, the likeliest first.
    fn first_guesses(shape: &LocalShape) -> Vec<Self>
    where
        Self: Sized;
}

/// Writes [`Well::base`] and [`Well::set_base`] for the fields that all wells have.
macro_rules! well_base {
    () => {
        fn base(&self) -> [f64; 3] {
            [self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree]
        }
        fn set_base(&mut self, base: [f64; 3]) {
            [self.e_min_hartree, self.r_e_bohr, self.well_depth_hartree] = base;
        }
    };
}
pub(crate) use well_base;

impl<W: Well> Potential for W {
    fn derivatives_hartree(&self, r_bohr: f64) -> [f64; 5] {
        let [e_min, _, depth] = self.base();
        let mut derivatives = self.shape_derivatives(r_bohr).map(|d| depth * d);
        derivatives[0] = e_min + depth * self.shape(r_bohr);
        derivatives
    }
    fn energy_hartree(&self, r_bohr: f64) -> f64 {
        let [e_min, _, depth] = self.base();
        e_min + depth * self.shape(r_bohr)
    }
    fn range_bohr(&self) -> (f64, f64) {
        (if W::MAY_TURN_OVER { inner_edge_bohr(self) } else { 0.0 }, f64::INFINITY)
    }
    fn limit_hartree(&self) -> f64 {
        let [e_min, _, depth] = self.base();
        // The lower of the asymptote and the top of a turned-over inner wall.
        let edge = if W::MAY_TURN_OVER { inner_edge_bohr(self) } else { 0.0 };
        if edge > 0.0 { (e_min + depth).min(self.energy_hartree(edge)) } else { e_min + depth }
    }
    fn minimum_bohr(&self) -> f64 {
        self.base()[1]
    }
}

impl<W: Well> Parametric for W {
    fn parameter_names(&self) -> Vec<(String, ParameterUnit)> {
        let mut list = super::named(&[
            ("e_min", ParameterUnit::TotalEnergy),
            ("r_e", ParameterUnit::Length),
            ("d_e", ParameterUnit::Wavenumber),
        ]);
        list.extend(self.range_parameters().into_iter().map(|(name, unit, _)| (name, unit)));
        list
    }
    fn values(&self) -> Vec<f64> {
        let mut values = self.base().to_vec();
        values.extend(self.range_parameters().into_iter().map(|(_, _, value)| value));
        values
    }
    fn set_values(&mut self, values: &[f64]) {
        self.set_base([values[0], values[1], values[2]]);
        self.set_range_parameters(&values[3..]);
    }
    fn gradient(&self, r_bohr: f64, gradient: &mut [f64]) -> f64 {
        let [e_min, _, depth] = self.base();
        let mut by_r_e = 0.0;
        let f = self.shape_gradient(r_bohr, &mut by_r_e, &mut gradient[3..]);
        gradient[3..].iter_mut().for_each(|g| *g *= depth);
        (gradient[0], gradient[1], gradient[2]) = (1.0, depth * by_r_e, f);
        e_min + depth * f
    }
    fn fault(&self) -> Option<ModelFault> {
        let [_, r_e, depth] = self.base();
        ModelFault::unless_positive(ModelFault::WellDepth, depth)
            .or_else(|| ModelFault::unless_positive(ModelFault::BondLength, r_e))
            .or_else(|| self.range_fault())
    }
    fn starts(shape: &LocalShape) -> Vec<Self> {
        Self::first_guesses(shape)
    }
}

/// Steps from r_e towards r = 0 in which a turn-over is looked for.
const STEPS: u32 = 200;

/// The nearest bond length (bohr) below r_e at which V stops rising towards r = 0; zero when it never does.
fn inner_edge_bohr(potential: &dyn Potential) -> f64 {
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
