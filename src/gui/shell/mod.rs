//! The shell: opens the window and keeps it running, on whatever this machine offers.
//!
//! One event loop is made, once (a process cannot make two). With [`Renderer::Auto`] OpenGL is tried first;
//! if its driver only emulates hardware, or anything fails before the program exists, the same event loop
//! goes on with a window painted on the processor. Nothing is shown in between.

mod cpu_window;
mod gl_window;
mod renderer;

pub use renderer::{RENDERER_VARIABLE, Renderer, UnknownRenderer};

use super::program::Program;
use eframe::{UserEvent, egui};
use std::cell::RefCell;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::rc::Rc;
use winit::event_loop::EventLoop;

/// The name by which desktops know the program (and find its icon and desktop entry).
pub const APP_ID: &str = "parabound";

/// How to open the window.
#[derive(Clone, Debug, PartialEq)]
pub struct ShellOptions {
    /// Who paints.
    pub renderer: Renderer,
    /// Title of the window.
    pub title: String,
    /// First size, in points.
    pub size_points: [f32; 2],
}

impl Default for ShellOptions {
    fn default() -> Self {
        Self { renderer: Renderer::Auto, title: "Parabound".to_owned(), size_points: [1400.0, 900.0] }
    }
}

/// Smallest size of the window, in points.
const MIN_SIZE_POINTS: [f32; 2] = [800.0, 560.0];

/// Why there is no window.
#[derive(Debug, thiserror::Error)]
pub enum ShellError {
    /// Neither X11 nor Wayland (or the like) can be reached.
    #[error(
        "no display: {reason}. Without one, `parabound study FILE` computes and `parabound --picture F.png FILE` paints"
    )]
    NoDisplay {
        /// What is missing, in a few words.
        reason: &'static str,
    },
    /// OpenGL was demanded and there is none.
    #[error(
        "OpenGL cannot be used here: {reason}. `--renderer auto` or `--renderer cpu` opens the window without it"
    )]
    NoGl {
        /// What the driver said.
        reason: String,
    },
    /// The window could not be opened or went away.
    #[error("the window cannot be kept open: {reason}. `parabound study FILE` computes without a window")]
    Window {
        /// What the window system said.
        reason: String,
    },
    /// The program came to an end by a fault of its own.
    #[error("the window was closed by a fault in the program; please report it with the message above")]
    Fault,
}

impl ShellError {
    /// The exit status for this error: 3 where the display could not be opened (as for a file that could
    /// not be read), 2 for OpenGL demanded in vain (usage), 1 for the rest.
    #[must_use]
    pub const fn exit_status(&self) -> u8 {
        match self {
            Self::NoDisplay { .. } => 3,
            Self::NoGl { .. } => 2,
            Self::Window { .. } | Self::Fault => 1,
        }
    }
}

/// Makes the program once a context for it exists.
type Make<'a> = Box<dyn FnOnce(&egui::Context) -> Box<dyn Program> + 'a>;

/// The maker, for whichever window comes about first.
type SharedMake<'a> = Rc<RefCell<Option<Make<'a>>>>;

/// Opens the window, shows the program in it, and returns when it is closed.
///
/// # Errors
/// See [`ShellError`].
pub fn run<'a>(
    make: impl FnOnce(&egui::Context) -> Box<dyn Program> + 'a,
    options: &ShellOptions,
) -> Result<(), ShellError> {
    let make: SharedMake<'a> = Rc::new(RefCell::new(Some(Box::new(make))));
    let mut event_loop = open_event_loop()?;
    if options.renderer != Renderer::Cpu {
        match gl_window::run(&mut event_loop, &make, options) {
            gl_window::Outcome::Closed => return Ok(()),
            gl_window::Outcome::Fault => return Err(ShellError::Fault),
            gl_window::Outcome::Unusable(reason) if options.renderer == Renderer::Gl => {
                return Err(ShellError::NoGl { reason });
            }
            gl_window::Outcome::Unusable(reason) => tell(&format!("by the processor: OpenGL, {reason}")),
        }
    } else {
        tell("by the processor, as demanded");
    }
    cpu_window::run(&mut event_loop, &make, options)
}

/// The environment variable that, when it holds anything, lets the program say how it paints and why.
const VERBOSE_VARIABLE: &str = "PARABOUND_VERBOSE";

/// Says on standard error how the window is painted, where that is asked for.
fn tell(how: &str) {
    if std::env::var_os(VERBOSE_VARIABLE).is_some_and(|v| !v.is_empty()) {
        eprintln!("parabound: painted {how}");
    }
}

/// Connects to the display. The window system's own messages speak of libraries and source files, so
/// they are replaced by ours.
fn open_event_loop() -> Result<EventLoop<UserEvent>, ShellError> {
    let made = quietly(|| EventLoop::<UserEvent>::with_user_event().build());
    if let Some(Ok(event_loop)) = made {
        return Ok(event_loop);
    }
    let set = |name: &str| std::env::var_os(name).is_some_and(|value| !value.is_empty());
    let reason = if cfg!(target_os = "linux")
        && !set("DISPLAY")
        && !set("WAYLAND_DISPLAY")
        && !set("WAYLAND_SOCKET")
    {
        "neither DISPLAY nor WAYLAND_DISPLAY is set"
    } else if cfg!(target_os = "linux") {
        "the display does not answer, or a library is missing (on Debian: libx11-6 libx11-xcb1 libxcursor1 libxi6 \
         libxkbcommon-x11-0, or libwayland-client0 libxkbcommon0)"
    } else {
        "the desktop cannot be reached"
    };
    Err(ShellError::NoDisplay { reason })
}

/// Runs something that may panic, without the panic's message on standard error; `None` if it did.
fn quietly<T>(f: impl FnOnce() -> T) -> Option<T> {
    let hook = std::panic::take_hook();
    std::panic::set_hook(Box::new(|_| {}));
    let result = catch_unwind(AssertUnwindSafe(f)).ok();
    std::panic::set_hook(hook);
    result
}

/// What both windows have in common.
fn viewport(options: &ShellOptions) -> egui::ViewportBuilder {
    let builder = egui::ViewportBuilder::default()
        .with_title(&options.title)
        .with_app_id(APP_ID)
        .with_inner_size(options.size_points)
        .with_min_inner_size(MIN_SIZE_POINTS)
        .with_drag_and_drop(true);
    match icon() {
        Some(icon) => builder.with_icon(icon),
        None => builder,
    }
}

/// The window's icon.
fn icon() -> Option<egui::IconData> {
    let image =
        image::load_from_memory(include_bytes!("../../../assets/icon/parabound-64.png")).ok()?.to_rgba8();
    Some(egui::IconData { width: image.width(), height: image.height(), rgba: image.into_raw() })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_icon_can_be_read() {
        let icon = icon().expect("icon");
        assert_eq!([icon.width, icon.height], [64, 64]);
        assert!(icon.rgba.chunks_exact(4).any(|p| p[3] == 255));
    }

    #[test]
    fn errors_name_the_way_out_in_one_line() {
        for (error, status) in [
            (ShellError::NoDisplay { reason: "neither DISPLAY nor WAYLAND_DISPLAY is set" }, 3),
            (ShellError::NoGl { reason: "no driver".into() }, 2),
            (ShellError::Window { reason: "gone".into() }, 1),
        ] {
            let text = error.to_string();
            assert!(!text.contains('\n') && text.contains('`'), "{text}");
            assert_eq!(error.exit_status(), status);
        }
    }

    #[test]
    fn a_panic_while_setting_up_is_an_absence() {
        assert_eq!(quietly(|| 3), Some(3));
        assert_eq!(quietly(|| -> u8 { panic!("not shown") }), None);
    }
}
