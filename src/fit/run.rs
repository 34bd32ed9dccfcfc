//! One fit from request to result.

use super::data::Data;
use super::nonlinear::IterationSettings;
use super::{
    DEFAULT_POWER, Family, Fit, FitEnd, FitError, FitPoint, FitRequest, Parameter, Variable, Variance,
    Window, families, guess, polynomial, statistics,
};
use crate::estimate::{ErrorSource, Estimate};
use crate::notice::{Code, Notice};
use crate::potential::{ExtendedMorse, Harmonic, Model, Morse, Parametric, Polynomial, Potential};

/// Degree of a polynomial when none is asked for.
const DEFAULT_DEGREE: u32 = 6;
/// Degrees offered.
const DEGREES: (u32, u32) = (2, 12);
/// Order of an extended Morse exponent when none is asked for.
const DEFAULT_ORDER: u32 = 4;
/// Orders offered.
const ORDERS: (u32, u32) = (0, 12);
/// Powers offered.
const POWERS: (u32, u32) = (1, 10);

/// Starts come from the scan, so a few hundred evaluations suffice; more would be felt while dragging.
const SETTINGS: IterationSettings =
    IterationSettings { most_evaluations: 600, ..IterationSettings::THOROUGH };

/// What a family's own fit hands on; energies count from the zero of the data.
struct Solved {
    model: Model,
    degree: Option<u32>,
    /// (Jᵀ W J)⁻¹ of the parameters.
    unit_covariance: Vec<Vec<f64>>,
    leave_one_out_rms_hartree: Option<f64>,
    reciprocal_condition: Option<f64>,
    end: FitEnd,
    notices: Vec<Notice>,
}

/// Fits one model to the points given (those inside the window).
///
/// Minimises S = Σ w d²; covariance s² (Jᵀ W J)⁻¹ with s² = S/(n − p). Points of weight 0 are left out;
/// the order of the points does not matter.
///
/// # Errors
/// [`FitError`] when there are too few points, no convergence, no minimum, dependent parameters, or
/// numbers that are not finite.
pub fn fit(request: FitRequest, points: &[FitPoint], window: Window) -> Result<Fit, FitError> {
    fit_with(request, points, window, Variance::FromResiduals)
}

/// The same, with what is known of the variance: [`Variance::Declared`] sets s² = 1.
///
/// # Errors
/// As [`fit`].
pub fn fit_with(
    request: FitRequest,
    points: &[FitPoint],
    window: Window,
    variance: Variance,
) -> Result<Fit, FitError> {
    let data = Data::new(points, 3)?;
    Ok(finish(&data, solve(&data, request, LeaveOneOut::Yes)?, window, variance))
}

/// The same without leave-one-out errors, and for iterated families from a fit to nearly the same points where that
/// leads somewhere: for many fits in a row.
///
/// # Errors
/// As [`fit`].
pub(crate) fn fit_for_study(
    request: FitRequest,
    points: &[FitPoint],
    window: Window,
    variance: Variance,
    near: Option<&Model>,
) -> Result<Fit, FitError> {
    let data = Data::new(points, 3)?;
    let direct = matches!(request.family, Family::Harmonic | Family::Polynomial);
    let warm = near.filter(|_| !direct).and_then(|near| {
        let mut start = near.clone();
        start.shift_energy_hartree(-data.zero_hartree);
        families::refit_with_covariance(&data, &start)
    });
    let solved = match warm {
        Some((model, solution)) => Solved {
            degree: request.degree.filter(|_| request.family == Family::ExtendedMorse),
            unit_covariance: solution.unit_covariance,
            reciprocal_condition: Some(solution.reciprocal_condition),
            leave_one_out_rms_hartree: None,
            end: solution.end,
            notices: Vec::new(),
            model,
        },
        None => solve(&data, request, LeaveOneOut::No)?,
    };
    Ok(finish(&data, solved, window, variance))
}

/// Whether the leave-one-out errors of iterated families, a refit a point, are wanted.
#[derive(Clone, Copy, PartialEq, Eq)]
enum LeaveOneOut {
    Yes,
    No,
}

fn solve(data: &Data, request: FitRequest, loo: LeaveOneOut) -> Result<Solved, FitError> {
    match request.family {
        Family::Harmonic => harmonic(data),
        Family::Polynomial => {
            let variable = request.variable.unwrap_or(Variable::X);
            power_series(data, variable, request.degree.unwrap_or(DEFAULT_DEGREE), loo)
        }
        Family::Morse => {
            let shape = guess::local_shape(data)?;
            iterated(data, &families::morse_starts(data, &shape), loo)
        }
        Family::ExtendedMorse => extended_morse(data, request, loo),
        family => iterated(data, &family.starts(&guess::well_shape(data)?), loo),
    }
}

/// The Morse function through the points given, equal weights, for the base of the curve.
///
/// The same core as [`fit`] without its statistics; the caller chooses the points.
///
/// # Errors
/// [`FitError`], as for [`fit`].
pub fn morse_for_base(points: &[FitPoint]) -> Result<Morse, FitError> {
    let data = Data::new(points, 4)?;
    let shape = guess::local_shape(&data)?;
    let (mut morse, _) =
        families::fit(&data, &families::morse_starts(&data, &shape), IterationSettings::QUICK)?;
    morse.e_min_hartree += data.zero_hartree;
    Ok(morse)
}

fn harmonic(data: &Data) -> Result<Solved, FitError> {
    let fit = polynomial::fit(data, Variable::X, 2)?;
    let model = Harmonic {
        e_min_hartree: fit.values[0],
        r_e_bohr: fit.values[1],
        force_constant_hartree_per_bohr2: 2.0 * fit.values[2],
    };
    let mut jacobian = fit.jacobian.clone();
    jacobian[2].iter_mut().for_each(|d| *d *= 2.0);
    Ok(linear_solved(data, model.into(), None, &jacobian, &fit))
}

fn power_series(data: &Data, variable: Variable, asked: u32, loo: LeaveOneOut) -> Result<Solved, FitError> {
    let (lowest, highest) = DEGREES;
    if !(lowest..=highest).contains(&asked) {
        return Err(FitError::Degree { asked, lowest, highest });
    }
    // Two points more than coefficients, so that there is an error to speak of; a parabola needs only its three.
    let degree = asked.min((data.len() as u32).saturating_sub(3).max(lowest));
    // The Ogilvie variable is not affine in anything fixed; the fit in z is its start.
    let linear_variable = if variable == Variable::Ogilvie { Variable::Z } else { variable };
    let fit = polynomial::fit(data, linear_variable, degree as usize)?;
    let model = Polynomial::new(linear_variable, fit.values[0], fit.values[1], &fit.values[2..]);
    let mut solved = if variable == Variable::Ogilvie {
        // To leading orders z = w − w²/2 + ..., so equal c_2 with the rest zero is a start the iteration can use.
        let mut from_c2 = vec![0.0; degree as usize - 1];
        from_c2[0] = fit.values[2];
        let start = Polynomial::new(Variable::Ogilvie, fit.values[0], fit.values[1], &from_c2);
        iterated(data, &[start], loo)?
    } else {
        linear_solved(data, model.into(), Some(degree), &fit.jacobian, &fit)
    };
    solved.degree = Some(degree);
    if degree < asked {
        let text = format!(
            "The polynomial of degree {asked} needs {} points to have standard errors and the window holds {}; \
             degree {degree} was fitted.",
            asked + 3,
            data.len()
        );
        solved.notices.push(Notice::info(Code::FewPoints, text));
    }
    Ok(solved)
}

/// Order by order, each started at the one before: a high order far from its minimum has many false ones.
fn extended_morse(data: &Data, request: FitRequest, loo: LeaveOneOut) -> Result<Solved, FitError> {
    let (asked, power) = (request.degree.unwrap_or(DEFAULT_ORDER), request.power.unwrap_or(DEFAULT_POWER));
    for (asked, (lowest, highest)) in [(asked, ORDERS), (power, POWERS)] {
        if !(lowest..=highest).contains(&asked) {
            return Err(FitError::Degree { asked, lowest, highest });
        }
    }
    let Some(most) = data.len().checked_sub(4) else {
        return Err(FitError::TooFewPoints { points: data.len(), needed: 4 });
    };
    let order = (asked as usize).min(most);
    let mut starts = ExtendedMorse::starts(&guess::well_shape(data)?);
    starts.iter_mut().for_each(|start| start.power = power);
    for _ in 0..order {
        // The way there need not be a minimum of its own; what the next order makes of it is what counts.
        if let Ok((model, _)) = families::fit(data, &starts, IterationSettings::QUICK) {
            starts = vec![model];
        }
        starts.iter_mut().for_each(|start| start.beta_per_bohr.push(0.0));
    }
    let mut solved = iterated(data, &starts, loo)?;
    solved.degree = Some(order as u32);
    if order < asked as usize {
        let text = format!(
            "The extended Morse function of order {asked} needs {} points and the window holds {}; order {order} was fitted.",
            asked + 4,
            data.len()
        );
        solved.notices.push(Notice::info(Code::FewPoints, text));
    }
    Ok(solved)
}

fn linear_solved(
    data: &Data,
    model: Model,
    degree: Option<u32>,
    jacobian: &[Vec<f64>],
    fit: &polynomial::PolynomialFit,
) -> Solved {
    let linear = &fit.linear;
    let n = data.len();
    let errors = linear.residuals.iter().zip(&linear.leverages).map(|(d, h)| d / (1.0 - h));
    let sum: f64 = errors.map(|e| e * e).sum();
    Solved {
        model,
        degree,
        unit_covariance: statistics::propagate(jacobian, &linear.unit_covariance),
        leave_one_out_rms_hartree: (n > linear.coefficients.len()).then(|| (sum / n as f64).sqrt()),
        reciprocal_condition: None,
        end: FitEnd::Direct,
        notices: Vec::new(),
    }
}

fn iterated<P: Parametric + Clone + Into<Model>>(
    data: &Data,
    starts: &[P],
    loo: LeaveOneOut,
) -> Result<Solved, FitError> {
    let (model, solution) = families::fit(data, starts, SETTINGS)?;
    families::told_apart(data, &model, &solution)?;
    Ok(Solved {
        leave_one_out_rms_hartree: match loo {
            LeaveOneOut::Yes => families::leave_one_out_rms(data, &model, &solution),
            LeaveOneOut::No => None,
        },
        model: model.into(),
        degree: None,
        unit_covariance: solution.unit_covariance,
        reciprocal_condition: Some(solution.reciprocal_condition),
        end: solution.end,
        notices: Vec::new(),
    })
}

/// Statistics from the residuals of the model as it will be evaluated by others.
fn finish(data: &Data, solved: Solved, window: Window, variance: Variance) -> Fit {
    let Solved {
        mut model,
        degree,
        unit_covariance,
        leave_one_out_rms_hartree,
        reciprocal_condition,
        end,
        mut notices,
    } = solved;
    let residuals: Vec<f64> =
        data.r_bohr.iter().zip(&data.energy_hartree).map(|(&r, e)| model.energy_hartree(r) - e).collect();
    let (n, p) = (data.len(), unit_covariance.len());
    let weighted_square_sum: f64 = residuals.iter().zip(&data.weight).map(|(d, w)| w * d * d).sum();
    let (rms_residual_hartree, largest_residual_hartree) = statistics::rms_and_largest(&residuals);
    let covariance = statistics::covariance(&unit_covariance, weighted_square_sum, n, variance)
        .filter(|c| c.iter().flatten().all(|x| x.is_finite()));
    let source = error_source(&residuals, &covariance, &mut notices, (n, p), model.family(), variance);
    model.shift_energy_hartree(data.zero_hartree);
    let parametric = model.as_parametric();
    let parameters = parametric
        .parameter_names()
        .into_iter()
        .zip(parametric.values())
        .enumerate()
        .map(|(j, ((name, unit), value))| {
            let estimate = covariance
                .as_ref()
                .map_or(Estimate::exact(value), |c| Estimate::with_error(value, c[j][j].sqrt(), source));
            Parameter { name, estimate, unit }
        })
        .collect();
    Fit {
        degree,
        window,
        window_bohr: window.bohr(),
        points: n,
        parameters,
        covariance: covariance.unwrap_or_default(),
        end,
        rms_residual_hartree,
        largest_residual_hartree,
        aicc: statistics::aicc(weighted_square_sum, n, p),
        leave_one_out_rms_hartree: leave_one_out_rms_hartree.filter(|x| x.is_finite()),
        reciprocal_condition,
        residuals: data.r_bohr.iter().copied().zip(residuals).collect(),
        notices,
        model,
    }
}

/// Noise or misfit, with the notice that says so; or why there is no error at all.
fn error_source(
    residuals: &[f64],
    covariance: &Option<Vec<Vec<f64>>>,
    notices: &mut Vec<Notice>,
    (n, parameters): (usize, usize),
    family: Family,
    variance: Variance,
) -> ErrorSource {
    if covariance.is_none() {
        let why = if n > parameters {
            "is so ill-conditioned that its covariance cannot be computed".to_owned()
        } else {
            format!("has as many parameters as points ({n})")
        };
        let text = format!("The {} fit {why}, so its parameters carry no standard errors.", family.word());
        notices.push(Notice::info(Code::FewPoints, text));
        return ErrorSource::Fit;
    }
    match statistics::lag_one_autocorrelation(residuals) {
        Some(correlation) if correlation > statistics::MISFIT_AUTOCORRELATION => {
            let text = format!(
                "The residuals of the {} fit vary smoothly (lag-1 autocorrelation {correlation:.2}): they are misfit \
                 of the family, not noise, and its standard errors are no error bars of a measurement.",
                family.word()
            );
            notices.push(Notice::info(Code::Misfit, text));
            ErrorSource::Misfit
        }
        _ if variance == Variance::Declared => ErrorSource::Noise,
        _ => ErrorSource::Fit,
    }
}
