//! The window on graphics hardware.

use super::renderer::is_emulated;
use super::{APP_ID, Program, Renderer, SharedMake, ShellOptions, viewport};
use eframe::glow::{self, HasContext as _};
use eframe::{NativeOptions, UserEvent, egui};
use std::cell::{Cell, RefCell};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::rc::Rc;
use std::sync::Once;
use winit::event_loop::EventLoop;
use winit::platform::run_on_demand::EventLoopExtRunOnDemand as _;

/// How it ended.
pub(super) enum Outcome {
    /// The window was open and has been closed.
    Closed,
    /// The window was open and the program failed.
    Fault,
    /// No window was shown; the program was not made.
    Unusable(String),
}

/// Runs the program on OpenGL until its window is closed.
pub(super) fn run(
    event_loop: &mut EventLoop<UserEvent>,
    make: &SharedMake<'_>,
    options: &ShellOptions,
) -> Outcome {
    let refusal = Rc::new(RefCell::new(None));
    let made = Rc::new(Cell::new(false));
    let creator = {
        let (make, made, refusal) = (Rc::clone(make), Rc::clone(&made), Rc::clone(&refusal));
        let hardware_only = options.renderer == Renderer::Auto;
        move |cc: &eframe::CreationContext<'_>| -> Result<Box<dyn eframe::App>, Box<dyn std::error::Error + Send + Sync>> {
            let name = cc.gl.as_deref().map(driver_name).unwrap_or_default();
            if hardware_only && is_emulated(&name) {
                let reason = format!("it is only emulated ({name})");
                *refusal.borrow_mut() = Some(reason.clone());
                return Err(reason.into());
            }
            let make = make.borrow_mut().take().ok_or("the program was already made")?;
            made.set(true);
            super::tell(&format!("through OpenGL ({name})"));
            Ok(Box::new(App(make(&cc.egui_ctx))))
        }
    };
    let native = NativeOptions {
        viewport: viewport(options),
        renderer: eframe::Renderer::Glow,
        // The same colours as the other painter gives.
        dithering: false,
        persist_window: false,
        ..Default::default()
    };
    let quiet = QuietUntil::start(Rc::clone(&made));
    let ended = catch_unwind(AssertUnwindSafe(|| {
        let mut app = eframe::create_native(APP_ID, native, Box::new(creator), event_loop);
        event_loop.run_app_on_demand(&mut app)
    }));
    drop(quiet);
    match (made.get(), ended) {
        (true, Ok(Ok(()))) => Outcome::Closed,
        (true, _) => Outcome::Fault,
        (false, _) => {
            let reason = refusal.borrow_mut().take();
            Outcome::Unusable(reason.unwrap_or_else(|| "no usable driver or library was found".to_owned()))
        }
    }
}

/// `GL_RENDERER`, the driver's name.
#[expect(
    unsafe_code,
    reason = "OpenGL is a foreign interface; the context is current while the program is created"
)]
fn driver_name(gl: &glow::Context) -> String {
    // SAFETY: eframe calls the creator with this context current on this thread; asking for a string
    // constant changes no state.
    unsafe { gl.get_parameter_string(glow::RENDERER) }
}

/// The program as eframe wants it.
struct App(Box<dyn Program>);

impl eframe::App for App {
    fn logic(&mut self, ctx: &egui::Context, _frame: &mut eframe::Frame) {
        self.0.logic(ctx);
    }

    fn ui(&mut self, ui: &mut egui::Ui, _frame: &mut eframe::Frame) {
        self.0.ui(ui);
    }

    fn on_exit(&mut self, _gl: Option<&glow::Context>) {
        self.0.on_exit();
    }
}

thread_local! {
    /// Whether panics on this thread are those of a driver that is only being tried.
    static TRYING: RefCell<Option<Rc<Cell<bool>>>> = const { RefCell::new(None) };
}

/// While this lives and the program is not made, panics of this thread print nothing: they only mean
/// that the other painter is used. Panics of the program itself are shown as ever.
struct QuietUntil;

impl QuietUntil {
    fn start(made: Rc<Cell<bool>>) -> Self {
        static HOOK: Once = Once::new();
        HOOK.call_once(|| {
            let before = std::panic::take_hook();
            std::panic::set_hook(Box::new(move |info| {
                let trying =
                    TRYING.with(|t| t.try_borrow().is_ok_and(|t| t.as_ref().is_some_and(|made| !made.get())));
                if !trying {
                    before(info);
                }
            }));
        });
        TRYING.with(|t| *t.borrow_mut() = Some(made));
        Self
    }
}

impl Drop for QuietUntil {
    fn drop(&mut self) {
        TRYING.with(|t| *t.borrow_mut() = None);
    }
}
