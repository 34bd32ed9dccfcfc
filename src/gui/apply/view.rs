//! Commands that change what is looked at, and nothing that a result depends on.

use crate::figure::geometry::Bounds;
use crate::fit::BootstrapSettings;
use crate::gui::command::Command;
use crate::gui::densities::DensityView;
use crate::gui::reading;
use crate::gui::state::{Page, Search, State, Strip, Zoom};

pub(in crate::gui) fn forget_level(state: &mut State) {
    state.view.hovered_level = None;
    state.view.pinned_level = None;
    state.view.kept_levels.clear();
    state.view.pointed_angstrom = None;
    state.view.selected_row = None;
    state.view.open_notice = None;
}

pub(super) fn change_view(command: Command, state: &mut State) {
    let focus = state.document.focus;
    let view = &mut state.view;
    match command {
        Command::Zoom(preset) => {
            if let Some(key) = focus {
                view.zoom.insert(key, Zoom::Preset(preset));
            }
        }
        Command::SetBounds(bounds) => {
            if let Some(key) = focus.filter(|_| bounds.is_valid()) {
                view.zoom.insert(key, Zoom::Free(bounds));
            }
        }
        Command::HoverLevel(level) => view.hovered_level = level,
        Command::PinLevel(level) => {
            view.pinned_level = level;
            if level.is_none() {
                view.kept_levels.clear();
            }
        }
        Command::KeepLevel(v, keep) => keep_level(v, keep, state),
        Command::StepLevel(step) => step_level(step, state),
        Command::ShowJ(j) => show_j(j, state),
        Command::StepJ(step) => show_j(next_j(step, state), state),
        Command::ShowLevelsPart(part) => {
            view.page = Page::Levels;
            view.levels_part = part;
            view.comparison.open = false;
        }
        Command::PointAt(r) => point_at(r, state),
        Command::SelectPoint(row) => select_point(row, state),
        Command::NameAtoms => {
            view.panels.left = Some(true);
            view.atoms_wanted = true;
            view.atoms_asked += 1;
        }
        Command::ShowColumns(scan) => view.columns_of = scan,
        Command::OpenNotice(index) => view.open_notice = index,
        Command::ShowAllNotices(all) => view.all_notices = all,
        Command::ShowPage(page) => {
            view.page = page;
            view.comparison.open = false;
        }
        Command::ShowComparison(open) => view.comparison.open = open,
        Command::SetReference(reference) => view.comparison.reference = reference,
        Command::SortComparison(sort) => view.comparison.sort = sort,
        Command::SetAxes(axes) => view.axes = axes,
        Command::SetDensities(densities) => {
            let (low, high) = DensityView::HEIGHTS;
            let height = if densities.height.is_finite() { densities.height.clamp(low, high) } else { 1.0 };
            view.densities = DensityView { height, ..densities };
        }
        Command::SetKelvin(kelvin) => {
            let (low, high) = crate::thermal::TEMPERATURES_KELVIN;
            if kelvin.is_finite() {
                view.kelvin = Some(kelvin.clamp(low, high));
            }
        }
        Command::SetThermalView(thermal) => view.thermal = thermal,
        Command::ShowFitsPart(part) => view.fits_part = part,
        Command::SetRepeats(repeats) => {
            view.repeats = Some(repeats.clamp(2, BootstrapSettings::MOST_REPEATS));
        }
        Command::SetParameterUnits(units) => view.parameter_units = units,
        Command::ShowStrip(strip) => view.strip = strip,
        Command::ShowGauge(measure) => {
            view.strip = Strip::Gauge;
            view.gauge = measure;
        }
        Command::ToggleWhy => view.why_open = !view.why_open,
        Command::ShowLeft(open) => view.panels.left = Some(open),
        Command::ShowRight(open) => view.panels.right = Some(open),
        Command::ShowHints(shown) => view.hints = shown,
        Command::ShowSearch(open) => view.search = open.then(Search::default),
        Command::TypeSearch(text) => view.search = Some(Search { text, chosen: 0 }),
        Command::ChooseFound(line) => {
            if let Some(search) = &mut view.search {
                search.chosen = line;
            }
        }
        Command::ShowKeys(open) => view.keys_open = open,
        Command::ShowGuide(open) => view.guide = open,
        Command::ClosePathWindow => view.path_window = None,
        Command::DropProblem => reading::next_problem(state),
        Command::DismissMessage => view.message = None,
        _ => {}
    }
}

/// Only levels that are there are kept.
fn keep_level(v: usize, keep: bool, state: &mut State) {
    let is_there = state.study().is_some_and(|s| s.findings.levels.iter().any(|l| l.v == v));
    if keep && is_there {
        state.view.kept_levels.insert(v);
    } else {
        state.view.kept_levels.remove(&v);
    }
}

fn step_level(step: i32, state: &mut State) {
    let levels: Vec<usize> = state.levels_shown().iter().map(|l| l.v).collect();
    let here = state.view.pinned_level.map(|v| levels.partition_point(|l| *l < v));
    let next = here.map_or(0, |i| i.saturating_add_signed(step as isize)).min(levels.len().saturating_sub(1));
    if let Some(v) = levels.get(next) {
        state.view.pinned_level = Some(*v);
        state.view.hovered_level = None;
    }
}

/// Looks at another J. J below Λ does not exist; what is between is passed over.
fn show_j(j: u32, state: &mut State) {
    state.view.j = j.min(crate::settings::HIGHEST_J);
    state.view.hovered_level = None;
}

fn next_j(step: i32, state: &State) -> u32 {
    let lambda = state.document.focused().map_or(0, |(_, _, s)| s.levels.lambda);
    let next = state.view.j.saturating_add_signed(step);
    match (next > 0 && next < lambda, step > 0) {
        (false, _) => next,
        (true, true) => lambda,
        (true, false) => 0,
    }
}

/// Looks at a row of the scan, on its page and on the plot.
fn select_point(row: Option<usize>, state: &mut State) {
    state.view.selected_row = row;
    state.view.pointed_angstrom = None;
    let r = row.and_then(|row| {
        let points = &state.study()?.pictures.points;
        points.iter().find(|p| p.row == row).map(|p| p.at[0])
    });
    if let Some(r) = r {
        point_at(r, state);
    }
}

/// Brings a bond length into view, keeping the scale where it is seen already.
fn point_at(r_angstrom: f64, state: &mut State) {
    state.view.pointed_angstrom = Some(r_angstrom);
    let (Some(key), Some(bounds)) = (state.document.focus, state.bounds()) else { return };
    let energy = state.study().and_then(|s| {
        let nearest = |p: &&crate::figure::PlotPoint| ordered((p.at[0] - r_angstrom).abs());
        s.pictures.points.iter().min_by_key(nearest).map(|p| p.at[1])
    });
    let inside = |(a, b): (f64, f64), v: f64| v >= a && v <= b;
    if inside(bounds.x, r_angstrom) && energy.is_none_or(|e| inside(bounds.y, e)) {
        return;
    }
    let reach = |(a, b): (f64, f64), v: f64| {
        let pad = 0.08 * (b - a);
        (a.min(v - pad), b.max(v + pad))
    };
    let y = energy.map_or(bounds.y, |e| reach(bounds.y, e));
    state.view.zoom.insert(key, Zoom::Free(Bounds { x: reach(bounds.x, r_angstrom), y }));
}

/// A number as an orderable key; only used on finite numbers.
fn ordered(value: f64) -> u64 {
    value.max(0.0).to_bits()
}
