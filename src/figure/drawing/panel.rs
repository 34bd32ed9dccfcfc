//! A figure in its frame: series, levels with densities, points.

use super::axes::{self, Frame};
use super::legend::{self, Entry, Sign};
use super::{Anchor, Item, Layout, area, line};
use crate::figure::geometry::{Bounds, clip_area, clip_line};
use crate::figure::{Figure, LevelPicture, Pictures, PlotPoint, Role, Series, Shape};

/// Opacity of confidence bands.
const RIBBON: f64 = 0.22;
/// Opacities of the reach band, of densities, of lines where they are not at full strength.
const BAND: f64 = 0.12;
const DENSITY: f64 = 0.30;
const FAINT: f64 = 0.45;

/// The whole picture; `pictures` adds levels and points to the main plot.
pub fn items(layout: &Layout, figure: &Figure, bounds: Bounds, pictures: Option<&Pictures>) -> Vec<Item> {
    let font = layout.font_pt;
    let margin = 0.8 * font;
    let left = axes::left_room(layout, bounds.y, layout.size_pt[1] - 6.0 * font);
    // The names of the levels stand at the right of the frame.
    let right_room = if pictures.is_some_and(|p| !p.levels.is_empty()) { 3.6 * font } else { margin };
    let right = layout.size_pt[0] - right_room;
    let entries = entries(layout, figure, &bounds, pictures);
    let legend_height = legend::height(layout, &entries, right - left);
    let frame = Frame {
        left,
        right,
        top: margin + legend_height + 0.4 * font,
        bottom: layout.size_pt[1] - axes::bottom_room(layout),
        bounds,
    };
    let mut items = axes::grid(layout, &frame);
    for series in figure.series.iter().filter(|s| matches!(s.shape, Shape::Band(..))) {
        items.extend(drawn(layout, &frame, series));
    }
    if let Some(pictures) = pictures {
        items.extend(levels(layout, &frame, &pictures.levels));
    }
    for series in figure.series.iter().filter(|s| !matches!(s.shape, Shape::Band(..))) {
        items.extend(drawn(layout, &frame, series));
    }
    if let Some(pictures) = pictures {
        items.extend(points(layout, &frame, &pictures.points));
    }
    items.extend(axes::axes(layout, &frame, Some(&figure.x), &figure.y));
    items.extend(legend::items(layout, &entries, [left, margin], right - left));
    items
}

fn width(role: Role) -> f64 {
    match role {
        Role::Scanned | Role::Effective => 1.5,
        Role::QuasiBound | Role::Tunnelling => 1.0,
        Role::ZeroPoint => 3.0,
        Role::Zero | Role::Tolerance => 0.8,
        _ => 1.2,
    }
}

/// A series in a group of its own, whether or not the view shows any of it.
pub(super) fn drawn(layout: &Layout, frame: &Frame, series: &Series) -> Vec<Item> {
    let mut items = vec![Item::Open(series.label.clone())];
    let stroke = layout.stroke(series.role, width(series.role));
    let placed = |run: &[[f64; 2]]| run.iter().map(|p| frame.place(*p)).collect::<Vec<_>>();
    let (x, y) = (frame.bounds.x, frame.bounds.y);
    match &series.shape {
        Shape::Line(points) => {
            for (part, strong) in strong_parts(points, series.strong) {
                for run in clip_line(&part, &frame.bounds) {
                    items.push(line(placed(&run), stroke.clone(), if strong { 1.0 } else { FAINT }));
                }
            }
        }
        Shape::Ribbon(ribbon) => {
            let low = ribbon.iter().map(|p| [p[0], p[1]]);
            let high = ribbon.iter().rev().map(|p| [p[0], p[2]]);
            let outline: Vec<[f64; 2]> = low.chain(high).collect();
            let cut = clip_area(&outline, &frame.bounds);
            if cut.len() > 2 {
                items.push(area(placed(&cut), stroke.colour, RIBBON));
            }
        }
        Shape::Points(points) => {
            let solid = layout.solid(stroke.colour, if series.role == Role::Proposal { 1.8 } else { 0.9 });
            let inside = |p: &&[f64; 2]| within(p[0], x) && within(p[1], y);
            items.extend(points.iter().filter(inside).map(|p| Item::Circle {
                centre: frame.place(*p),
                radius_pt: if series.role == Role::Proposal { 3.0 } else { 1.7 } * layout.unit,
                stroke: solid.clone(),
                fill: layout.palette.ground,
                opacity: 1.0,
            }));
        }
        Shape::Band(from, to) => {
            let (from, to) = (from.unwrap_or(x.0).max(x.0), to.unwrap_or(x.1).min(x.1));
            if to > from {
                let corners = [[from, y.0], [to, y.0], [to, y.1], [from, y.1]];
                items.push(area(placed(&corners), stroke.colour, BAND));
                for edge in [from, to].into_iter().filter(|e| *e > x.0 && *e < x.1) {
                    let edge_stroke = layout.solid(stroke.colour, 0.7);
                    items.push(line(placed(&[[edge, y.0], [edge, y.1]]), edge_stroke, 0.8));
                }
            }
        }
        Shape::Level(at) if within(*at, y) => {
            items.push(line(placed(&[[x.0, *at], [x.1, *at]]), stroke, 1.0))
        }
        Shape::Level(_) => {}
        Shape::Bar(at, from, to) => {
            let (from, to) = (from.max(x.0), to.min(x.1));
            if within(*at, y) && to > from {
                items.push(line(placed(&[[from, *at], [to, *at]]), stroke, 1.0));
            }
        }
    }
    items.push(Item::Close);
    items
}

fn within(value: f64, (from, to): (f64, f64)) -> bool {
    value >= from && value <= to
}

/// A line cut into the part at full strength and those beside it.
fn strong_parts(points: &[[f64; 2]], strong: Option<(f64, f64)>) -> Vec<(Vec<[f64; 2]>, bool)> {
    let Some((from, to)) = strong else { return vec![(points.to_vec(), true)] };
    let unlimited = (f64::NEG_INFINITY, f64::INFINITY);
    let part = |x: (f64, f64)| {
        clip_line(points, &Bounds { x, y: unlimited }).into_iter().map(move |run| (run, x == (from, to)))
    };
    part((f64::NEG_INFINITY, from)).chain(part((to, f64::INFINITY))).chain(part((from, to))).collect()
}

fn levels(layout: &Layout, frame: &Frame, levels: &[LevelPicture]) -> Vec<Item> {
    let mut items = vec![Item::Open("levels".to_owned())];
    let mut last_label = f64::INFINITY;
    for level in levels {
        let energy = level.energy_per_cm;
        if !within(energy, frame.bounds.y) {
            continue;
        }
        for (inside, range) in &level.parts {
            let colour = if *inside { layout.palette.reach } else { layout.palette.outside };
            let (r, density) = (&level.r[range.clone()], &level.density[range.clone()]);
            let top = r.iter().zip(density).map(|(r, d)| [*r, energy + d * level.scale_per_cm]);
            let (Some(first), Some(end)) = (r.first(), r.last()) else { continue };
            let outline: Vec<[f64; 2]> = top.chain([[*end, energy], [*first, energy]]).collect();
            let outline = clip_area(&outline, &frame.bounds);
            if outline.len() > 2 {
                items.push(area(outline.iter().map(|p| frame.place(*p)).collect(), colour, DENSITY));
            }
        }
        let (a, b) = level.turning_points;
        let own_line = if level.quasi_bound { &[][..] } else { &[[a, energy], [b, energy]][..] };
        for run in clip_line(own_line, &frame.bounds) {
            let run = run.iter().map(|p| frame.place(*p)).collect();
            items.push(line(run, layout.solid(layout.palette.level, 0.7), 1.0));
        }
        let at = frame.place([frame.bounds.x.1, energy]);
        if last_label - at[1] > 1.1 * layout.font_pt {
            let label = format!("v = {}", level.v);
            items.push(layout.text(
                [at[0] + 0.4 * layout.font_pt, at[1] + 0.35 * layout.font_pt],
                label,
                Anchor::Start,
            ));
            last_label = at[1];
        }
    }
    items.push(Item::Close);
    items
}

fn points(layout: &Layout, frame: &Frame, points: &[PlotPoint]) -> Vec<Item> {
    let mut items = vec![Item::Open("points".to_owned())];
    let radius_pt = 1.7 * layout.unit;
    for point in points {
        let Bounds { x, y } = frame.bounds;
        if !(within(point.at[0], x) && within(point.at[1], y)) {
            continue;
        }
        let centre = frame.place(point.at);
        let stroke = layout.solid(layout.palette.scan, 0.9);
        if point.set_aside.is_some() {
            let d = radius_pt;
            for sign in [1.0, -1.0] {
                let ends = vec![[centre[0] - d, centre[1] - sign * d], [centre[0] + d, centre[1] + sign * d]];
                items.push(line(ends, stroke.clone(), 1.0));
            }
            continue;
        }
        let opacity = if point.in_window { 1.0 } else { FAINT };
        items.push(Item::Circle { centre, radius_pt, stroke, fill: layout.palette.ground, opacity });
    }
    items.push(Item::Close);
    items
}

/// One entry for each kind of series that the figure has.
pub(super) fn entries(
    layout: &Layout,
    figure: &Figure,
    bounds: &Bounds,
    pictures: Option<&Pictures>,
) -> Vec<Entry> {
    let mut entries: Vec<Entry> = Vec::new();
    if let Some(pictures) = pictures
        && !pictures.points.is_empty()
    {
        let ring = Sign::Ring(layout.solid(layout.palette.scan, 0.9), layout.palette.ground);
        entries.push(Entry { label: "points".to_owned(), sign: ring });
    }
    // Tails of which the view shows nothing need no entry.
    let shown = |s: &&Series| match &s.shape {
        Shape::Line(points) if matches!(s.role, Role::Tail | Role::QuasiBound | Role::Tunnelling) => {
            !clip_line(points, bounds).is_empty()
        }
        _ => true,
    };
    for entry in entries_of(layout, figure.series.iter().filter(shown)) {
        if !entries.iter().any(|e| e.label == entry.label) {
            entries.push(entry);
        }
    }
    let shown =
        |p: &&Pictures| p.levels.iter().any(|l| within(l.energy_per_cm, bounds.y) && !l.parts.is_empty());
    if pictures.filter(shown).is_some() {
        for (label, colour) in
            [("density inside the reach", layout.palette.reach), ("density outside", layout.palette.outside)]
        {
            entries.push(Entry { label: label.to_owned(), sign: Sign::Area(colour, 2.0 * DENSITY) });
        }
    }
    entries
}

/// One entry for each name.
pub(super) fn entries_of<'a>(layout: &Layout, all: impl Iterator<Item = &'a Series>) -> Vec<Entry> {
    let mut entries: Vec<Entry> = Vec::new();
    for series in all {
        if entries.iter().any(|e| e.label == series.label) {
            continue;
        }
        let stroke = layout.stroke(series.role, width(series.role));
        let sign = match series.shape {
            Shape::Band(..) => Sign::Area(stroke.colour, 2.0 * BAND),
            Shape::Points(_) => Sign::Ring(layout.solid(stroke.colour, 0.9), layout.palette.ground),
            _ => Sign::Line(stroke),
        };
        entries.push(Entry { label: series.label.clone(), sign });
    }
    entries
}
