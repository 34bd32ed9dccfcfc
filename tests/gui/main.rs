//! The window, driven by label.
