//! From axis values to screen points and back.

use crate::figure::geometry::Bounds;
use eframe::egui;
use egui::{Pos2, Rect, pos2};

/// A linear map of a figure's bounds onto a rectangle of the screen.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Map {
    /// Where on the screen.
    pub rect: Rect,
    /// Which part of the figure.
    pub bounds: Bounds,
}

/// Screen coordinates are kept within this, so that far values cannot overflow a painter.
const FAR: f64 = 1e5;

impl Map {
    /// The screen abscissa of a value.
    pub fn x(&self, value: f64) -> f32 {
        let (a, b) = self.bounds.x;
        let t = (value - a) / (b - a);
        (f64::from(self.rect.left()) + t * f64::from(self.rect.width())).clamp(-FAR, FAR) as f32
    }

    /// The screen ordinate of a value.
    pub fn y(&self, value: f64) -> f32 {
        let (a, b) = self.bounds.y;
        let t = (value - a) / (b - a);
        (f64::from(self.rect.bottom()) - t * f64::from(self.rect.height())).clamp(-FAR, FAR) as f32
    }

    /// The screen point of a point of the figure.
    pub fn at(&self, point: [f64; 2]) -> Pos2 {
        pos2(self.x(point[0]), self.y(point[1]))
    }

    /// The abscissa at a screen abscissa.
    pub fn x_value(&self, x: f32) -> f64 {
        let (a, b) = self.bounds.x;
        a + (b - a) * f64::from((x - self.rect.left()) / self.rect.width())
    }

    /// The ordinate at a screen ordinate.
    pub fn y_value(&self, y: f32) -> f64 {
        let (a, b) = self.bounds.y;
        a + (b - a) * f64::from((self.rect.bottom() - y) / self.rect.height())
    }

    /// Screen points per unit of the ordinate.
    pub fn points_per_y(&self) -> f64 {
        f64::from(self.rect.height()) / (self.bounds.y.1 - self.bounds.y.0)
    }

    /// Whether an ordinate is seen.
    pub fn sees_y(&self, value: f64) -> bool {
        value >= self.bounds.y.0 && value <= self.bounds.y.1
    }

    /// Whether an abscissa is seen.
    pub fn sees_x(&self, value: f64) -> bool {
        value >= self.bounds.x.0 && value <= self.bounds.x.1
    }
}
