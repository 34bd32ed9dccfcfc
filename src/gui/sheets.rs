//! What the pages show, as tables: for the screen where they are wide, and for the clipboard.

use super::state::{LevelsPart, Page, State};
use crate::estimate::Estimate;
use crate::export::compare::Form;
use crate::export::sheet::{Cell, Heading, Sheet, sheets};
use crate::figure::rows::{
    Row, constants_text, curve_rows, energy_rows, interval_text, level_value, short_reach_rows,
    temperature_text,
};
use crate::figure::{fit_label, number, true_limit_per_cm, width_text};
use crate::findings::{Findings, QuasiBoundLevel};
use crate::radial::Level;
use crate::species::Masses;
use crate::spectroscopy::DunhamCoefficient;
use crate::thermal::{Averages, thermal};
use crate::units::{GAS_CONSTANT_JOULE_PER_MOLE_KELVIN, to_angstrom, to_per_cm};

const PER_CM: &str = "cm⁻¹";

/// The page in front as text, CSV or LaTeX; none where it shows nothing.
pub fn page_text(state: &State, form: Form) -> Option<String> {
    // The constants have a text form of their own, with the masses.
    let text = match (state.view.page, form) {
        (Page::Constants, Form::Text) => constants_text(&state.study()?.findings),
        _ => sheets(&page_sheets(state)?, form),
    };
    (!text.is_empty()).then_some(text)
}

/// The tables of the page in front.
fn page_sheets(state: &State) -> Option<Vec<Sheet>> {
    let findings = &*state.study()?.findings;
    let source = &findings.source;
    let about = format!("{}, {}", source.file_name, source.curve_label);
    let titled = |title: &str| format!("{title}: {about}");
    let of_rows = |title: &str, rows: Vec<Row>| rows_sheet(titled(title), &rows);
    Some(match state.view.page {
        Page::Scan => vec![points_sheet(findings, titled("Points"))],
        Page::Constants => vec![
            of_rows("Constants (derivatives, levels)", curve_rows(findings)),
            of_rows("Energies", energy_rows(findings)),
            of_rows("Reach of the parabola", short_reach_rows(findings)),
        ],
        Page::Levels => match state.view.levels_part {
            LevelsPart::Table => match state.rotation() {
                Some((rotating, _)) => vec![
                    levels_sheet(
                        titled(&format!("Levels with J = {}", rotating.j)),
                        &rotating.levels,
                        &findings.levels,
                    ),
                    quasi_sheet(
                        titled(&format!("Quasi-bound levels with J = {}", rotating.j)),
                        &rotating.quasi_bound,
                    ),
                ],
                None => vec![levels_sheet(titled("Levels"), &findings.levels, &[])],
            },
            LevelsPart::Rotation => {
                let quasi = findings.quasi_bound.as_deref().unwrap_or_default();
                vec![
                    Sheet { title: titled("E(v, J)"), ..energies_sheet(findings) },
                    quasi_sheet(titled("Quasi-bound levels"), quasi),
                    dunham_sheet(findings, titled("Dunham coefficients")),
                ]
            }
            LevelsPart::Limit => vec![
                spacings_sheet(findings, titled("Spacings")),
                of_rows("To the limit", limit_rows(findings)),
                trials_sheet(findings, titled("Moved tails")),
            ],
            LevelsPart::Isotopes => vec![
                Sheet { title: titled("Isotopes"), ..isotopic_constants_sheet(findings) },
                Sheet { title: titled("Levels of isotopes"), ..isotopes_sheet(findings) },
            ],
        },
        Page::Fits => findings.fits.iter().map(|fit| fit_sheet(fit, titled(&fit_label(fit)))).collect(),
        Page::Reach => vec![of_rows("Reach", reach_rows(findings))],
        Page::Thermal => vec![thermal_sheet(findings, state.view.kelvin(), titled("Thermal averages"))],
    })
}

fn head(columns: &[(&str, &str)]) -> Vec<Heading> {
    columns.iter().map(|(name, unit)| Heading::new(*name, *unit)).collect()
}

/// Rows of label, value and unit.
fn rows_sheet(title: String, rows: &[Row]) -> Sheet {
    let beside = rows.iter().any(|r| r.second.is_some());
    let mut columns = head(&[("quantity", ""), ("value", "")]);
    if beside {
        columns.push(Heading::new("beside", ""));
    }
    columns.push(Heading::new("unit", ""));
    let row = |row: &Row| {
        let mut cells = vec![Cell::words(&row.label), Cell::words(&row.value)];
        if beside {
            cells.push(Cell::words(row.second.clone().unwrap_or_default()));
        }
        cells.push(Cell::words(row.unit));
        cells
    };
    Sheet { title, columns, rows: rows.iter().map(row).collect() }
}

fn points_sheet(findings: &Findings, title: String) -> Sheet {
    let source = &findings.source;
    let point = |p: &crate::findings::Point| {
        vec![
            Cell::count(p.row + 1),
            Cell::number(p.r_as_read, p.r_as_read.to_string()),
            Cell::number(p.energy_as_read, p.energy_as_read.to_string()),
            Cell::number(p.weight, p.weight.to_string()),
            Cell::words(if p.used { "yes" } else { "no" }),
            Cell::words(p.why_not.clone().or_else(|| p.note.clone()).unwrap_or_default()),
        ]
    };
    Sheet {
        title,
        columns: vec![
            Heading::new("row", ""),
            Heading::new("r", super::show::length_unit(source.length_unit)),
            Heading::new("V", super::show::unit(source.energy_unit)),
            Heading::new("weight", ""),
            Heading::new("used", ""),
            Heading::new("remark", ""),
        ],
        rows: source.points.iter().map(point).collect(),
    }
}

/// Levels of one J; beside those with rotation the difference to those without.
fn levels_sheet(title: String, levels: &[Level], without: &[Level]) -> Sheet {
    let turning = !without.is_empty();
    let third = if turning { "− E(v, 0)" } else { "− harmonic" };
    let fourth = if turning { "ℏ²⟨r⁻²⟩/(2μ)" } else { "Bᵥ" };
    let mut columns =
        head(&[("v", ""), ("E − Vₑ", PER_CM), ("standard error", PER_CM), (third, PER_CM), (fourth, PER_CM)]);
    columns.extend(head(&[
        ("inner turning point", "Å"),
        ("outer turning point", "Å"),
        ("in reach", "%"),
        ("leans on tail", ""),
    ]));
    let number = |value: f64, decimals: usize| Cell::number(value, number::fixed(value, decimals));
    let row = |level: &Level| {
        let third = match (turning, without.get(level.v)) {
            (false, _) => number(level.minus_harmonic_per_cm, 2),
            (true, Some(own)) => number(level.energy_per_cm - own.energy_per_cm, 2),
            (true, None) => Cell::none(),
        };
        vec![
            Cell::count(level.v),
            Cell::number(
                level.energy_per_cm,
                number::with_error_capped(level.energy_per_cm, level.energy_error_per_cm, 2),
            ),
            level.energy_error_per_cm.map_or_else(Cell::none, |e| Cell::number(e, number::significant(e, 2))),
            third,
            number(level.b_v_per_cm, 4),
            number(to_angstrom(level.inner_turning_point_bohr), 4),
            number(to_angstrom(level.outer_turning_point_bohr), 4),
            level.inside_reach.map_or_else(Cell::none, |p| number(100.0 * p, 1)),
            Cell::words(if level.leans_on_tail { "yes" } else { "no" }),
        ]
    };
    Sheet { title, columns, rows: levels.iter().map(row).collect() }
}

fn quasi_sheet(title: String, levels: &[QuasiBoundLevel]) -> Sheet {
    let row = |q: &QuasiBoundLevel| {
        vec![
            Cell::count(q.v),
            Cell::words(q.j.to_string()),
            Cell::number(q.energy_per_cm, number::fixed(q.energy_per_cm, 2)),
            Cell::number(q.width_per_cm, width_text(q.width_per_cm)),
            q.lifetime_seconds().map_or_else(Cell::none, |t| Cell::number(t, number::scientific(t, 2))),
            Cell::number(q.barrier_per_cm, number::fixed(q.barrier_per_cm, 2)),
            Cell::number(to_angstrom(q.barrier_bohr), number::fixed(to_angstrom(q.barrier_bohr), 4)),
        ]
    };
    let columns = head(&[
        ("v", ""),
        ("J", ""),
        ("E − Vₑ", PER_CM),
        ("width Γ", PER_CM),
        ("lifetime ħ/Γ", "s"),
        ("barrier", PER_CM),
        ("barrier at", "Å"),
    ]);
    Sheet { title, columns, rows: levels.iter().map(row).collect() }
}

/// E(v, J): a row a v, a column a J; quasi-bound levels stand apart.
pub fn energies_sheet(findings: &Findings) -> Sheet {
    let all = findings.settings.levels.rotating();
    let quasi = findings.quasi_bound.as_deref().unwrap_or_default();
    let highest = findings.levels.iter().chain(&findings.rotational_levels).map(|l| l.v);
    let rows = highest.chain(quasi.iter().map(|q| q.v)).max().map_or(0, |v| v + 1);
    let mut sheet = Sheet {
        title: "E(v, J)".into(),
        columns: vec![Heading::new("v", ""), Heading::new("J = 0", PER_CM)],
        rows: (0..rows).map(|v| vec![Cell::count(v)]).collect(),
    };
    sheet.columns.extend(all.iter().map(|j| Heading::new(format!("J = {j}"), PER_CM)));
    let cell = |energy: f64| Cell::number(energy, number::fixed(energy, 2));
    let mut fill = |column: usize, v: usize, found: Cell| {
        if let Some(row) = sheet.rows.get_mut(v) {
            row.resize(column + 1, Cell::none());
            row[column] = found;
        }
    };
    for level in &findings.levels {
        fill(1, level.v, cell(level.energy_per_cm));
    }
    for (i, &j) in all.iter().enumerate() {
        for level in findings.rotational_levels.iter().filter(|l| l.j == j) {
            fill(i + 2, level.v, cell(level.energy_per_cm));
        }
        for level in quasi.iter().filter(|q| q.j == j) {
            fill(i + 2, level.v, cell(level.energy_per_cm).apart());
        }
    }
    let width = sheet.columns.len();
    sheet.rows.iter_mut().for_each(|row| row.resize(width, Cell::none()));
    sheet
}

/// Y_kl from derivatives, where it is known.
fn from_derivatives(findings: &Findings, k: u32, l: u32) -> Option<Estimate> {
    let d = findings.constants.from_derivatives.as_ref()?;
    let minus = |e: Estimate| e.scaled(-1.0);
    match (k, l) {
        (0, 0) => d.y_00_per_cm,
        (1, 0) => Some(d.omega_e_per_cm),
        (2, 0) => d.omega_e_x_e_per_cm.map(minus),
        (0, 1) => Some(d.b_e_per_cm),
        (1, 1) => d.alpha_e_per_cm.map(minus),
        _ => d.dunham_per_cm.iter().find(|y| (y.k, y.l) == (k, l)).map(|y| y.value_per_cm),
    }
}

/// Y_kl with all digits.
fn dunham_sheet(findings: &Findings, title: String) -> Sheet {
    let cell = |value: Option<f64>, digits| {
        value.map_or_else(Cell::none, |v| Cell::number(v, number::scientific(v, digits)))
    };
    let row = |y: &DunhamCoefficient| {
        let derived = from_derivatives(findings, y.k, y.l);
        vec![
            Cell::words(y.k.to_string()),
            Cell::words(y.l.to_string()),
            cell(Some(y.value_per_cm.value), 8),
            cell(y.value_per_cm.std_error, 1),
            cell(derived.map(|e| e.value), 8),
            cell(derived.and_then(|e| e.std_error), 1),
        ]
    };
    let columns = head(&[
        ("k", ""),
        ("l", ""),
        ("Yₖₗ, fit", PER_CM),
        ("standard error", PER_CM),
        ("Yₖₗ, derivatives", PER_CM),
        ("standard error", PER_CM),
    ]);
    let all = findings.dunham_table.iter().flat_map(|t| &t.coefficients);
    Sheet { title, columns, rows: all.map(row).collect() }
}

/// Y_kl from the fit to E(v, J), and beside them those from derivatives, in powers of ten of cm⁻¹.
pub fn dunham_rows(findings: &Findings) -> Vec<Row> {
    let Some(table) = &findings.dunham_table else { return Vec::new() };
    let row = |y: &DunhamCoefficient| {
        let (size, unit) = size_of(y.value_per_cm.value);
        let shown = |e: &Estimate| number::estimate(&e.scaled(1.0 / size), 5);
        let second =
            from_derivatives(findings, y.k, y.l).map_or_else(|| number::NONE.to_owned(), |e| shown(&e));
        let name = match (y.k, y.l) {
            (1, 0) => " ≈ ωₑ",
            (2, 0) => " ≈ −ωₑxₑ",
            (0, 1) => " ≈ Bₑ",
            (1, 1) => " ≈ −αₑ",
            (0, 2) => " ≈ −Dₑ",
            _ => "",
        };
        Row::new(format!("Y{}{}{name}", lowered(y.k), lowered(y.l)), shown(&y.value_per_cm), unit)
            .beside(second)
            .about(
                "Coefficient of (v + ½) to the power k times J(J + 1) − Λ² to the power l: at the left fitted to E(v, J), at the right from the derivatives at rₑ to leading order [Dunham 1932].",
            )
    };
    table.coefficients.iter().map(row).collect()
}

/// Units of coefficients of every size, in cm⁻¹.
const SIZES: [(f64, &str); 7] = [
    (0.1, ""),
    (1e-3, "10⁻³"),
    (1e-6, "10⁻⁶"),
    (1e-9, "10⁻⁹"),
    (1e-12, "10⁻¹²"),
    (1e-15, "10⁻¹⁵"),
    (1e-18, "10⁻¹⁸"),
];

/// The unit in which a coefficient has few zeros, and its size in cm⁻¹.
fn size_of(value_per_cm: f64) -> (f64, &'static str) {
    let at = SIZES.iter().position(|(least, _)| value_per_cm.abs() >= *least).unwrap_or(SIZES.len() - 1);
    (10f64.powi(-3 * at as i32), SIZES[at].1)
}

fn lowered(number: u32) -> String {
    number.to_string().bytes().filter_map(|b| char::from_u32('₀' as u32 + u32::from(b - b'0'))).collect()
}

fn spacings_sheet(findings: &Findings, title: String) -> Sheet {
    let rows = findings.levels.windows(2).map(|pair| {
        let spacing = pair[1].energy_per_cm - pair[0].energy_per_cm;
        let middle = pair[0].v as f64 + 0.5;
        vec![Cell::number(middle, number::fixed(middle, 1)), Cell::number(spacing, number::fixed(spacing, 3))]
    });
    Sheet { title, columns: head(&[("v + ½", ""), ("spacing", PER_CM)]), rows: rows.collect() }
}

/// Where the levels end, by the straight line, by the curve and by its tail.
pub fn limit_rows(findings: &Findings) -> Vec<Row> {
    let mut rows = Vec::new();
    if let Some(line) = &findings.birge_sponer {
        let limit =
            line.extrapolated_limit_per_cm.map_or_else(|| number::NONE.to_owned(), |l| number::fixed(l, 1));
        rows.push(Row::new("limit by the straight line", limit, PER_CM).about(
            "Top of G(v) = a(v + ½) − b(v + ½)²/2 above Vₑ, with ΔG = a − b(v + 1) [Birge & Sponer 1926].",
        ));
    }
    if let Some((limit, assumed)) = true_limit_per_cm(findings) {
        let name = if assumed { "limit of the curve, assumed" } else { "limit of the curve" };
        let value = match &findings.constants.well_depth_per_cm {
            Some(depth) => number::estimate(depth, 1),
            None => number::fixed(limit, 1),
        };
        rows.push(
            Row::new(name, value, PER_CM)
                .about("V(∞) − Vₑ: as given, fitted to the outer points, or assumed."),
        );
    }
    if let Some(highest) = findings.levels.last() {
        let below = highest.below_asymptote_per_cm;
        let text = below.map_or_else(
            || number::fixed(highest.energy_per_cm, 2),
            |b| format!("−{}", number::significant(b, 3)),
        );
        let about = if below.is_some() { "From the limit of the curve." } else { "Above Vₑ." };
        rows.push(Row::new(format!("highest level, v = {}", highest.v), text, PER_CM).about(about));
    }
    if let Some(law) = &findings.near_dissociation {
        rows.push(
            Row::new(format!("v at the limit, r⁻{}", number::superscript(law.n)), number::fixed(law.v_at_limit, 2), "")
                .about("From the highest level and Cₙ: (V(∞) − E)^((n − 2)/2n) falls on a straight line in v [Le Roy & Bernstein 1970]."),
        );
        rows.push(Row::new("slope of that line", number::significant(law.slope, 5), "").about(format!(
            "Fall of (V(∞) − E)^{} by v, in the same power of cm⁻¹, as Cₙ gives it.",
            number::fixed(law.exponent, 3)
        )));
    }
    rows
}

fn trials_sheet(findings: &Findings, title: String) -> Sheet {
    let trials = findings.level_support.iter().flat_map(|s| &s.sensitivity);
    let row = |t: &crate::findings::TailTrial| {
        vec![
            Cell::words(change_words(&t.change)),
            Cell::count(t.levels),
            Cell::count(t.unmoved),
            Cell::number(t.largest_shift_per_cm, number::significant(t.largest_shift_per_cm, 3)),
        ]
    };
    let columns = head(&[("change", ""), ("levels", ""), ("stay", ""), ("largest shift", PER_CM)]);
    Sheet { title, columns, rows: trials.map(row).collect() }
}

/// How a tail was moved, with the signs of the trade.
pub fn change_words(change: &str) -> String {
    super::show::typographic(change).replace("C_n *", "Cₙ ×").replace("V_inf", "V(∞)").replace(" - ", " − ")
}

/// `⁷Li²H`, or the mass where there are no atoms.
fn masses_name(masses: &Masses) -> String {
    match &masses.atoms {
        Some([a, b]) => format!("{}{}", a.pretty(), b.pretty()),
        None => format!("{} u", number::fixed(masses.reduced_mass_u.value, 6)),
    }
}

/// ω_e, zero-point energy, D_0 and the fundamental of the study's own isotopes and the others.
pub fn isotopic_constants_sheet(findings: &Findings) -> Sheet {
    let mut rows = Vec::new();
    let cell = |value: Option<f64>, decimals| {
        value.map_or_else(Cell::none, |v| Cell::number(v, number::fixed(v, decimals)))
    };
    let mut put = |name: String, [omega, zero_point, fundamental, d_0]: [Option<f64>; 4]| {
        rows.push(vec![
            Cell::words(name),
            cell(omega, 2),
            cell(zero_point, 2),
            cell(fundamental, 2),
            cell(d_0, 1),
        ]);
    };
    let c = &findings.constants;
    if let Some(masses) = &findings.masses {
        let of = |e: Option<Estimate>| e.map(|e| e.value);
        let omega = c.from_derivatives.as_ref().map(|d| d.omega_e_per_cm.value);
        put(
            masses_name(masses),
            [omega, of(c.zero_point_energy_per_cm), of(c.fundamental_per_cm), of(c.d_0_per_cm)],
        );
    }
    for other in &findings.isotopologues {
        let fundamental = match other.levels.as_slice() {
            [zero, one, ..] => Some(one.energy_per_cm - zero.energy_per_cm),
            _ => None,
        };
        let values =
            [Some(other.omega_e_per_cm), other.zero_point_energy_per_cm, fundamental, other.d_0_per_cm];
        put(masses_name(&other.masses), values);
    }
    let mut columns =
        head(&[("isotopes", ""), ("ωₑ", PER_CM), ("ZPE", PER_CM), ("1 ← 0", PER_CM), ("D₀", PER_CM)]);
    // Without a known limit there is no D₀.
    if rows.iter().all(|row| row.last().is_none_or(|c| c.value.is_none())) {
        columns.pop();
        rows.iter_mut().for_each(|row| row.truncate(columns.len()));
    }
    Sheet { title: "Isotopes".into(), columns, rows }
}

/// Levels of all isotopes side by side, each with its shift.
pub fn isotopes_sheet(findings: &Findings) -> Sheet {
    let own = findings.masses.as_ref().map_or_else(|| "study".to_owned(), masses_name);
    let mut columns = vec![Heading::new("v", ""), Heading::new(own, PER_CM)];
    let most = findings.isotopologues.iter().map(|i| i.levels.len()).chain([findings.levels.len()]).max();
    let mut rows: Vec<Vec<Cell>> = (0..most.unwrap_or(0)).map(|v| vec![Cell::count(v)]).collect();
    let cell = |e: Option<f64>| e.map_or_else(Cell::none, |e| Cell::number(e, number::fixed(e, 2)));
    for (v, row) in rows.iter_mut().enumerate() {
        row.push(cell(findings.levels.get(v).map(|l| l.energy_per_cm)));
    }
    for other in &findings.isotopologues {
        let name = masses_name(&other.masses);
        columns.push(Heading::new(name.clone(), PER_CM));
        columns.push(Heading::new(format!("shift {name}"), PER_CM));
        for (v, row) in rows.iter_mut().enumerate() {
            let level = other.levels.get(v);
            row.push(cell(level.map(|l| l.energy_per_cm)));
            let shift = level.and_then(|l| l.shift_per_cm);
            row.push(shift.map_or_else(Cell::none, |s| Cell::number(s, number::signed(s, 2)).apart()));
        }
    }
    Sheet { title: "Levels".into(), columns, rows }
}

/// Parameters and constants of a fit.
fn fit_sheet(fit: &crate::findings::FitFindings, title: String) -> Sheet {
    let mut rows = Vec::new();
    if let Ok(result) = &fit.result {
        rows.extend(result.parameters.iter().map(super::panels::parameter_row));
        rows.extend(fit.constants_per_cm.iter().filter_map(|(name, e)| {
            Some(Row::new(super::panels::symbol(name), number::estimate(e.as_ref()?, 2), PER_CM))
        }));
        let per_cm = |hartree: f64| number::significant(to_per_cm(hartree), 3);
        rows.push(Row::new("rms residual", per_cm(result.rms_residual_hartree), PER_CM));
        rows.push(Row::new("largest residual", per_cm(result.largest_residual_hartree), PER_CM));
    }
    rows_sheet(title, &rows)
}

fn reach_rows(findings: &Findings) -> Vec<Row> {
    let Some(reach) = &findings.reach else { return Vec::new() };
    let mut rows = vec![
        Row::new("energy", interval_text(&reach.energy), "Å"),
        Row::new("force", interval_text(&reach.force), "Å"),
    ];
    if let Some(amplitude) = reach.zero_point_amplitude_bohr {
        rows.push(Row::new("zero-point amplitude", number::fixed(to_angstrom(amplitude), 4), "Å"));
    }
    for (name, of) in [("levels", &reach.levels), ("spacings", &reach.spacing)] {
        if let Some(of) = of {
            let label = format!("{name} within {} cm⁻¹", number::fixed(of.tolerance_per_cm, 1));
            rows.push(Row::new(label, level_value(of), ""));
        }
    }
    for row in short_reach_rows(findings).into_iter().filter(|r| r.unit == "K") {
        rows.push(row);
    }
    let temperature = &reach.temperature_kelvin;
    for (name, kelvin) in
        [("mean energy", temperature.mean_energy), ("mean square displacement", temperature.mean_square_x)]
    {
        if let Some(kelvin) = kelvin {
            rows.push(Row::new(name, temperature_text(kelvin), "K"));
        }
    }
    rows
}

fn thermal_sheet(findings: &Findings, kelvin: f64, title: String) -> Sheet {
    let columns = head(&[
        ("T", "K"),
        ("q", ""),
        ("U", PER_CM),
        ("C", "J/(mol K)"),
        ("S", "J/(mol K)"),
        ("q, harmonic", ""),
        ("U, harmonic", PER_CM),
        ("C, harmonic", "J/(mol K)"),
        ("S, harmonic", "J/(mol K)"),
    ]);
    let mut temperatures = findings.settings.thermal.temperatures_kelvin.clone();
    if !temperatures.contains(&kelvin) {
        temperatures.push(kelvin);
    }
    temperatures.sort_by(f64::total_cmp);
    let points = findings.thermal_input().map(|input| thermal(&input, &temperatures)).unwrap_or_default();
    let number = |value: f64| Cell::number(value, number::significant(value, 5));
    let averages = |a: &Averages| {
        let [heat, entropy] =
            [a.heat_capacity_boltzmann, a.entropy_boltzmann].map(|x| x * GAS_CONSTANT_JOULE_PER_MOLE_KELVIN);
        [a.partition_function, a.mean_energy_per_cm, heat, entropy].map(number)
    };
    let row = |p: &crate::thermal::ThermalPoint| {
        let mut cells = vec![Cell::number(p.kelvin, p.kelvin.to_string())];
        cells.extend(averages(&p.vibrational));
        cells.extend(p.harmonic.as_ref().map_or_else(|| [(); 4].map(|()| Cell::none()), averages));
        cells
    };
    Sheet { title, columns, rows: points.iter().map(row).collect() }
}
