//! Handles as sliders: arrow keys and assistive technology move every handle of the picture in one way.

use eframe::egui;
use egui::accesskit::{Action, ActionData};
use egui::{EventFilter, Key, Response, Ui, WidgetInfo};

/// A handle as a slider.
#[derive(Clone, Copy, Debug)]
pub struct Slider<'a> {
    /// Name, as read aloud.
    pub name: &'a str,
    /// Where it stands.
    pub value: f64,
    /// How far it may go; an end that is not finite is open.
    pub limits: (f64, f64),
    /// One step of the arrow keys.
    pub step: f64,
    /// Whether it moves sideways, with the left and right arrows, or else up and down.
    pub sideways: bool,
}

impl Slider<'_> {
    /// Where the keys or assistive technology want it; nothing when they do not speak. While the handle has
    /// the focus its arrow keys belong to it.
    pub fn wanted(&self, ui: &Ui, response: &Response) -> Option<f64> {
        let mut steps = 0.0;
        if response.has_focus() {
            let filter = EventFilter {
                horizontal_arrows: self.sideways,
                vertical_arrows: !self.sideways,
                ..Default::default()
            };
            ui.memory_mut(|m| m.set_focus_lock_filter(response.id, filter));
            let (more, less) = if self.sideways {
                (Key::ArrowRight, Key::ArrowLeft)
            } else {
                (Key::ArrowUp, Key::ArrowDown)
            };
            let count = |key| ui.input(|i| i.num_presses(key)) as f64;
            steps += count(more) - count(less);
        }
        let set = ui.input(|i| {
            let count = |action| i.num_accesskit_action_requests(response.id, action) as f64;
            steps += count(Action::Increment) - count(Action::Decrement);
            i.accesskit_action_requests(response.id, Action::SetValue).find_map(|r| match r.data {
                Some(ActionData::NumericValue(v)) => Some(v),
                _ => None,
            })
        });
        match set {
            Some(v) if v.is_finite() => Some(v),
            _ if steps != 0.0 => Some(self.value + self.step * steps),
            _ => None,
        }
    }

    /// Tells assistive technology what the handle is and where it stands.
    pub fn tell(&self, ui: &Ui, response: &Response) {
        response.widget_info(|| WidgetInfo::slider(true, self.value, self.name));
        ui.ctx().accesskit_node_builder(response.id, |node| {
            if self.limits.0.is_finite() {
                node.set_min_numeric_value(self.limits.0);
            }
            if self.limits.1.is_finite() {
                node.set_max_numeric_value(self.limits.1);
            }
            node.set_numeric_value(self.value);
            node.set_numeric_value_step(self.step);
            for action in [Action::SetValue, Action::Increment, Action::Decrement] {
                node.add_action(action);
            }
        });
    }
}
