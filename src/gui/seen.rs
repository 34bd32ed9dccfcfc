//! What is looked at, as a study file keeps it, and back. Words that are not known are passed over.

use super::densities::DensityView;
use super::state::{
    AxisView, Comparison, CurveKey, Document, LevelsPart, Page, Preset, Reference, State, Strip, Zoom,
};
use crate::export::compare::Quantity;
use crate::figure::GaugeMeasure;
use crate::figure::geometry::Bounds;
use crate::study_file::{Axes, Compared, DrawnDensities, Focus, View};
use crate::units::{EnergyUnit, LengthUnit};

/// What is looked at.
pub(super) fn view_of(state: &State) -> View {
    let view = &state.view;
    let (region, bounds) = match state.zoom() {
        Zoom::Preset(preset) => (Some(preset.name().to_owned()), None),
        Zoom::Free(b) => (None, Some([b.x.0, b.x.1, b.y.0, b.y.1])),
    };
    View {
        page: Some(view.page.name().to_owned()),
        strip: Some(view.strip.name().to_owned()),
        gauge: Some(view.gauge.name().to_owned()),
        level: view.pinned_level,
        levels: view.kept_levels.iter().copied().collect(),
        region,
        bounds,
        j: (view.j > 0).then_some(view.j),
        levels_part: (view.levels_part != LevelsPart::default()).then(|| view.levels_part.name().to_owned()),
        axes: axes_of(&view.axes),
        densities: densities_of(&view.densities),
        comparison: comparison_of(&view.comparison, &state.document),
        kelvin: view.kelvin,
    }
}

fn axes_of(axes: &AxisView) -> Option<Axes> {
    (*axes != AxisView::default()).then(|| Axes {
        length: axes.length.name().to_owned(),
        displacement: axes.displacement,
        energy: axes.energy.name().to_owned(),
    })
}

/// Whether a density is drawn.
type Drawn = fn(&mut DensityView) -> &mut bool;

/// The densities by their names.
const DENSITIES: [(&str, Drawn); 4] = [
    ("harmonic", |d| &mut d.harmonic),
    ("morse", |d| &mut d.morse),
    ("classical", |d| &mut d.classical),
    ("averaged", |d| &mut d.averaged),
];

fn densities_of(densities: &DensityView) -> Option<DrawnDensities> {
    let mut copy = *densities;
    (*densities != DensityView::default()).then(|| DrawnDensities {
        drawn: DENSITIES
            .iter()
            .filter(|(_, of)| *of(&mut copy))
            .map(|(name, _)| (*name).to_owned())
            .collect(),
        width_angstrom: densities.width_angstrom,
        height: densities.height,
    })
}

/// Symbol and unit of a quantity.
pub(super) fn symbol(quantity: Quantity) -> String {
    format!("{} / {}", quantity.name(), quantity.unit())
}

/// A curve by the number of its scan and its name.
fn focus_of(key: CurveKey, document: &Document) -> Option<Focus> {
    let number = document.scans.iter().position(|s| s.key == key.scan)?;
    let curve = document.scans[number].scan.energies.get(key.column)?.name.clone();
    Some(Focus { scan: number, curve })
}

fn comparison_of(comparison: &Comparison, document: &Document) -> Option<Compared> {
    (*comparison != Comparison::default()).then(|| Compared {
        open: comparison.open,
        reference: match comparison.reference {
            Some(Reference::Curve(key)) => focus_of(key, document),
            _ => None,
        },
        published: comparison.reference == Some(Reference::Published),
        sort: comparison.sort.map(|(quantity, _)| symbol(quantity)),
        largest_first: comparison.sort.is_some_and(|(_, largest)| largest),
    })
}

/// Looks at what a file names, as far as it is known; the curves are there already.
pub(super) fn look_at(seen: &View, state: &mut State) {
    fn named<T: Copy>(all: &[T], name: impl Fn(T) -> &'static str, word: Option<&str>) -> Option<T> {
        all.iter().copied().find(|one| Some(name(*one)) == word)
    }
    let free = seen.bounds.map(|[a, b, c, d]| Bounds { x: (a, b), y: (c, d) }).filter(Bounds::is_valid);
    let region = named(&Preset::ALL, Preset::name, seen.region.as_deref());
    if let (Some(key), Some(zoom)) = (state.document.focus, free.map(Zoom::Free).or(region.map(Zoom::Preset)))
    {
        state.view.zoom.insert(key, zoom);
    }
    let comparison =
        seen.comparison.as_ref().map(|c| comparison_from(c, &state.document)).unwrap_or_default();
    let view = &mut state.view;
    view.page = named(&Page::ALL, Page::name, seen.page.as_deref()).unwrap_or(view.page);
    view.strip = named(&Strip::ALL, Strip::name, seen.strip.as_deref()).unwrap_or(view.strip);
    view.levels_part =
        named(&LevelsPart::ALL, LevelsPart::name, seen.levels_part.as_deref()).unwrap_or_default();
    view.gauge = seen.gauge.as_deref().and_then(GaugeMeasure::of_name).unwrap_or(view.gauge);
    view.pinned_level = seen.level;
    view.kept_levels = seen.levels.iter().copied().collect();
    view.j = seen.j.unwrap_or(0).min(crate::settings::HIGHEST_J);
    view.axes = seen.axes.as_ref().map(axes_from).unwrap_or_default();
    view.densities = seen.densities.as_ref().map(densities_from).unwrap_or_default();
    view.comparison = comparison;
    let (low, high) = crate::thermal::TEMPERATURES_KELVIN;
    view.kelvin = seen.kelvin.filter(|t| (low..=high).contains(t));
}

fn axes_from(axes: &Axes) -> AxisView {
    let usual = AxisView::default();
    AxisView {
        length: LengthUnit::ALL.into_iter().find(|u| u.name() == axes.length).unwrap_or(usual.length),
        displacement: axes.displacement,
        energy: EnergyUnit::ALL.into_iter().find(|u| u.name() == axes.energy).unwrap_or(usual.energy),
    }
}

fn densities_from(drawn: &DrawnDensities) -> DensityView {
    let mut view = DensityView::default();
    for (name, of) in DENSITIES {
        *of(&mut view) = drawn.drawn.iter().any(|d| d == name);
    }
    let (low, high) = DensityView::HEIGHTS;
    if drawn.height.is_finite() && drawn.height > 0.0 {
        view.height = drawn.height.clamp(low, high);
    }
    view.width_angstrom = drawn.width_angstrom.filter(|w| w.is_finite() && *w > 0.0);
    view
}

fn comparison_from(compared: &Compared, document: &Document) -> Comparison {
    let curve = compared.reference.as_ref().and_then(|focus| {
        let loaded = document.scans.get(focus.scan)?;
        let column = loaded.scan.energies.iter().position(|e| e.name == focus.curve)?;
        Some(Reference::Curve(CurveKey { scan: loaded.key, column }))
    });
    let sort = Quantity::ALL.into_iter().find(|q| Some(symbol(*q)) == compared.sort);
    Comparison {
        open: compared.open,
        reference: curve.or_else(|| compared.published.then_some(Reference::Published)),
        sort: sort.map(|quantity| (quantity, compared.largest_first)),
    }
}
