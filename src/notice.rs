//! Remarks that stop nothing: what was repaired, assumed or found doubtful. Every front end shows the
//! same list; the findings file carries it.

use crate::units::to_angstrom;

/// How much a notice matters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// Worth knowing.
    Info,
    /// Look at it before a number is used.
    Caution,
    /// The study could not be done.
    Stop,
}

impl Severity {
    /// The word used in findings files.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Info => "info",
            Self::Caution => "caution",
            Self::Stop => "stop",
        }
    }
}

/// The stable short name of a kind of notice, as listed with the findings format.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
#[allow(missing_docs)] // the codes are documented one by one in the findings format page
pub enum Code {
    Resorted,
    RepeatedGeometry,
    UnitFromComment,
    EmptyCells,
    TextEncoding,
    OffCurve,
    Kink,
    Jump,
    Noise,
    NoMinimum,
    MinimumAtEnd,
    SecondMinimum,
    Hump,
    TurnsOver,
    CoarseGrid,
    FewPoints,
    NarrowWindow,
    WideWindow,
    AtBound,
    IllConditioned,
    NotConverged,
    Misfit,
    LeansOnTail,
    AssumedTail,
    HardWall,
    DerivativeSpread,
    ImplausibleUnit,
    ImplausibleMass,
    NoMass,
    SetAside,
    NoBase,
    NotFinite,
    ManyLevels,
    Wiggles,
    RoundedEnergies,
    ShortRange,
    TextColumn,
    AtomsFromComment,
    UnitContradicted,
    TemperatureRange,
    ThermalLevels,
    /// A rotational quantum number was asked for that the state does not have.
    NoSuchRotation,
    /// V_inf or C_n of the tail was fitted to the outermost points, or could not be.
    FittedTail,
}

impl Code {
    /// The short name written to findings files.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Resorted => "resorted",
            Self::RepeatedGeometry => "repeated-geometry",
            Self::UnitFromComment => "unit-from-comment",
            Self::EmptyCells => "empty-cells",
            Self::TextEncoding => "text-encoding",
            Self::OffCurve => "off-curve",
            Self::Kink => "kink",
            Self::Jump => "jump",
            Self::Noise => "noise",
            Self::NoMinimum => "no-minimum",
            Self::MinimumAtEnd => "minimum-at-end",
            Self::SecondMinimum => "second-minimum",
            Self::Hump => "hump",
            Self::TurnsOver => "turns-over",
            Self::CoarseGrid => "coarse-grid",
            Self::FewPoints => "few-points",
            Self::NarrowWindow => "narrow-window",
            Self::WideWindow => "wide-window",
            Self::AtBound => "at-bound",
            Self::IllConditioned => "ill-conditioned",
            Self::NotConverged => "not-converged",
            Self::Misfit => "misfit",
            Self::LeansOnTail => "leans-on-tail",
            Self::AssumedTail => "assumed-tail",
            Self::HardWall => "hard-wall",
            Self::DerivativeSpread => "derivative-spread",
            Self::ImplausibleUnit => "implausible-unit",
            Self::ImplausibleMass => "implausible-mass",
            Self::NoMass => "no-mass",
            Self::SetAside => "set-aside",
            Self::NoBase => "no-base",
            Self::NotFinite => "not-finite",
            Self::ManyLevels => "many-levels",
            Self::Wiggles => "wiggles",
            Self::RoundedEnergies => "rounded-energies",
            Self::ShortRange => "short-range",
            Self::TextColumn => "text-column",
            Self::AtomsFromComment => "atoms-from-comment",
            Self::UnitContradicted => "unit-contradicted",
            Self::TemperatureRange => "temperature-range",
            Self::ThermalLevels => "thermal-levels",
            Self::NoSuchRotation => "no-such-rotation",
            Self::FittedTail => "fitted-tail",
        }
    }
}

/// One remark: how much it matters, what kind it is, what it says, and where on the scan.
#[derive(Clone, Debug, PartialEq)]
pub struct Notice {
    /// How much it matters.
    pub severity: Severity,
    /// The kind, a stable short name.
    pub code: Code,
    /// One or two plain sentences with values, units and, where there is one, the remedy.
    pub text: String,
    /// The bond lengths it is about, in bohr; empty when it is about the whole scan.
    pub at_bohr: Vec<f64>,
}

impl Notice {
    /// An info notice about the whole scan.
    pub fn info(code: Code, text: impl Into<String>) -> Self {
        Self { severity: Severity::Info, code, text: text.into(), at_bohr: Vec::new() }
    }

    /// A caution about the whole scan.
    pub fn caution(code: Code, text: impl Into<String>) -> Self {
        Self { severity: Severity::Caution, code, text: text.into(), at_bohr: Vec::new() }
    }

    /// A notice that says why the study is impossible.
    pub fn stop(code: Code, text: impl Into<String>) -> Self {
        Self { severity: Severity::Stop, code, text: text.into(), at_bohr: Vec::new() }
    }

    /// The same notice tied to bond lengths (bohr).
    pub fn at(mut self, at_bohr: impl IntoIterator<Item = f64>) -> Self {
        self.at_bohr = at_bohr.into_iter().collect();
        self
    }

    /// The bond lengths it is about, in angstrom.
    pub fn at_angstrom(&self) -> Vec<f64> {
        self.at_bohr.iter().map(|&r| to_angstrom(r)).collect()
    }
}
