//! Small geometry of figures: cutting lines to a rectangle, reading them at an abscissa.

/// A rectangle in the units of a figure's axes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bounds {
    /// Range of the abscissa, ascending.
    pub x: (f64, f64),
    /// Range of the ordinate, ascending.
    pub y: (f64, f64),
}

impl Bounds {
    /// Whether both ranges are finite and not empty.
    pub fn is_valid(&self) -> bool {
        let fine = |(a, b): (f64, f64)| a.is_finite() && b.is_finite() && b > a;
        fine(self.x) && fine(self.y)
    }

    /// The same rectangle, wider by a fraction of its size on every side.
    pub fn grown(&self, fraction_x: f64, fraction_y: f64) -> Self {
        let grow = |(a, b): (f64, f64), f: f64| (a - f * (b - a), b + f * (b - a));
        Self { x: grow(self.x, fraction_x), y: grow(self.y, fraction_y) }
    }
}

/// The parts of a polyline inside `bounds`, cut exactly at its border. Points that are not finite
/// break the line.
pub fn clip_line(points: &[[f64; 2]], bounds: &Bounds) -> Vec<Vec<[f64; 2]>> {
    let mut runs = Vec::new();
    let mut run: Vec<[f64; 2]> = Vec::new();
    for pair in points.windows(2) {
        let cut = if pair.iter().flatten().all(|c| c.is_finite()) {
            clip_segment(pair[0], pair[1], bounds)
        } else {
            None
        };
        let Some((from, to)) = cut else {
            if run.len() > 1 {
                runs.push(std::mem::take(&mut run));
            }
            run.clear();
            continue;
        };
        if run.last() != Some(&from) {
            if run.len() > 1 {
                runs.push(std::mem::take(&mut run));
            }
            run = vec![from];
        }
        run.push(to);
    }
    if run.len() > 1 {
        runs.push(run);
    }
    runs
}

/// Liang and Barsky's parametric cut of one segment [1984].
fn clip_segment(a: [f64; 2], b: [f64; 2], bounds: &Bounds) -> Option<([f64; 2], [f64; 2])> {
    let (mut t0, mut t1) = (0.0_f64, 1.0_f64);
    let step = [b[0] - a[0], b[1] - a[1]];
    let ranges = [bounds.x, bounds.y];
    for axis in 0..2 {
        for (p, q) in [(-step[axis], a[axis] - ranges[axis].0), (step[axis], ranges[axis].1 - a[axis])] {
            if p == 0.0 {
                if q < 0.0 {
                    return None;
                }
            } else if p < 0.0 {
                t0 = t0.max(q / p);
            } else {
                t1 = t1.min(q / p);
            }
        }
    }
    let at = |t: f64| [a[0] + t * step[0], a[1] + t * step[1]];
    (t0 <= t1).then(|| (if t0 == 0.0 { a } else { at(t0) }, if t1 == 1.0 { b } else { at(t1) }))
}

/// A closed polygon cut to `bounds` (Sutherland and Hodgman 1974); empty where nothing is left.
pub fn clip_area(points: &[[f64; 2]], bounds: &Bounds) -> Vec<[f64; 2]> {
    let sides = [(0, bounds.x.0, 1.0), (0, bounds.x.1, -1.0), (1, bounds.y.0, 1.0), (1, bounds.y.1, -1.0)];
    let mut polygon: Vec<[f64; 2]> =
        points.iter().copied().filter(|p| p.iter().all(|c| c.is_finite())).collect();
    for (axis, edge, sign) in sides {
        let depth = |p: &[f64; 2]| sign * (p[axis] - edge);
        let mut kept = Vec::with_capacity(polygon.len() + 4);
        for (i, p) in polygon.iter().enumerate() {
            let before = polygon[(i + polygon.len() - 1) % polygon.len()];
            let (a, b) = (depth(&before), depth(p));
            if (a >= 0.0) != (b >= 0.0) {
                let t = a / (a - b);
                kept.push([before[0] + t * (p[0] - before[0]), before[1] + t * (p[1] - before[1])]);
            }
            if b >= 0.0 {
                kept.push(*p);
            }
        }
        polygon = kept;
    }
    polygon
}

/// The ordinate of a polyline with ascending abscissas at `x`; none outside it.
pub fn read_line(points: &[[f64; 2]], x: f64) -> Option<f64> {
    let after = points.partition_point(|p| p[0] < x);
    let b = points.get(after)?;
    if b[0] == x {
        return Some(b[1]);
    }
    let a = points.get(after.checked_sub(1)?)?;
    Some(a[1] + (b[1] - a[1]) * (x - a[0]) / (b[0] - a[0]))
}

#[cfg(test)]
mod tests {
    use super::*;

    const UNIT: Bounds = Bounds { x: (0.0, 1.0), y: (0.0, 1.0) };

    #[test]
    fn a_line_is_cut_at_the_border() {
        let runs = clip_line(&[[-1.0, 0.5], [0.5, 0.5], [0.5, 2.0], [0.75, 2.0], [0.75, 0.0]], &UNIT);
        assert_eq!(runs, [vec![[0.0, 0.5], [0.5, 0.5], [0.5, 1.0]], vec![[0.75, 1.0], [0.75, 0.0]]]);
    }

    #[test]
    fn points_that_are_not_finite_break_it() {
        let runs = clip_line(&[[0.1, 0.1], [0.2, 0.2], [0.3, f64::NAN], [0.4, 0.4], [0.5, 0.5]], &UNIT);
        assert_eq!(runs.len(), 2);
        assert!(runs.iter().flatten().flatten().all(|c| c.is_finite()));
    }

    #[test]
    fn a_line_outside_leaves_nothing() {
        assert!(clip_line(&[[2.0, 2.0], [3.0, 3.0]], &UNIT).is_empty());
        assert!(clip_line(&[], &UNIT).is_empty());
    }

    #[test]
    fn an_area_is_cut_to_its_corner() {
        let cut = clip_area(&[[0.5, 0.5], [2.0, 0.5], [2.0, 2.0], [0.5, 2.0]], &UNIT);
        let area: f64 = (0..cut.len())
            .map(|i| (cut[i], cut[(i + 1) % cut.len()]))
            .map(|(a, b)| 0.5 * (a[0] * b[1] - b[0] * a[1]))
            .sum();
        assert!((area - 0.25).abs() < 1e-12, "{cut:?}");
        assert!(clip_area(&[[2.0, 2.0], [3.0, 2.0], [3.0, 3.0]], &UNIT).is_empty());
    }

    #[test]
    fn reading_between_points() {
        let line = [[0.0, 0.0], [1.0, 2.0]];
        assert_eq!(read_line(&line, 0.25), Some(0.5));
        assert_eq!(read_line(&line, 1.0), Some(2.0));
        assert_eq!(read_line(&line, 1.1), None);
        assert_eq!(read_line(&line, -0.1), None);
    }
}
