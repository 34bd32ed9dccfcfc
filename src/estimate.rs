//! A number with its standard error, in whatever unit the name of the field that holds it says.

/// How a standard error was obtained.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ErrorSource {
    /// Least squares covariance.
    Fit,
    /// Least squares covariance of residuals that are smooth misfit, not noise.
    Misfit,
    /// Spread between admissible interpolations of the scan.
    Interpolation,
    /// Spread between admissible continuations beyond the scan.
    Tail,
    /// Propagated noise of the energies.
    Noise,
    /// Published uncertainty (masses, constants).
    Published,
    /// Spread over repeats of a fit with resampled residuals.
    Bootstrap,
}

impl ErrorSource {
    /// The short word written as `method` in a findings file.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Fit => "fit",
            Self::Misfit => "misfit",
            Self::Interpolation => "interpolation",
            Self::Tail => "tail",
            Self::Noise => "noise",
            Self::Published => "published",
            Self::Bootstrap => "bootstrap",
        }
    }
}

/// A value with its standard error, where one is known.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// The value.
    pub value: f64,
    /// Standard error in the unit of the value.
    pub std_error: Option<f64>,
    /// Where the standard error comes from.
    pub source: Option<ErrorSource>,
}

impl Estimate {
    /// A value without a standard error.
    pub const fn exact(value: f64) -> Self {
        Self { value, std_error: None, source: None }
    }

    /// A value with a standard error; an error that is not finite or is negative is dropped.
    pub fn with_error(value: f64, std_error: f64, source: ErrorSource) -> Self {
        if std_error.is_finite() && std_error >= 0.0 {
            Self { value, std_error: Some(std_error), source: Some(source) }
        } else {
            Self::exact(value)
        }
    }

    /// Combines independent interpolation and noise errors, sqrt(i² + n²); the source names the larger.
    pub fn from_spread_and_noise(value: f64, interpolation: Option<f64>, noise: Option<f64>) -> Self {
        let (i, n) = (interpolation.unwrap_or(0.0), noise.unwrap_or(0.0));
        if interpolation.is_none() && noise.is_none() {
            return Self::exact(value);
        }
        let source = if n > i { ErrorSource::Noise } else { ErrorSource::Interpolation };
        Self::with_error(value, i.hypot(n), source)
    }

    /// Combines independent errors in quadrature; the source names the largest, and with none there is no error.
    pub fn from_parts(value: f64, parts: &[(f64, ErrorSource)]) -> Self {
        let Some(largest) = parts.iter().max_by(|a, b| a.0.total_cmp(&b.0)) else {
            return Self::exact(value);
        };
        Self::with_error(value, parts.iter().fold(0.0, |sum: f64, part| sum.hypot(part.0)), largest.1)
    }

    /// Value and error multiplied by a constant (a change of unit).
    pub fn scaled(self, factor: f64) -> Self {
        Self {
            value: self.value * factor,
            std_error: self.std_error.map(|e| e * factor.abs()),
            source: self.source,
        }
    }
}
