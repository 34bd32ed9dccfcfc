//! The window painted on the processor, shown through the plain pixel buffer every window system has.

use super::{Program, SharedMake, ShellError, ShellOptions, viewport};
use crate::gui::painter::{CpuPainter, Picture};
use eframe::{UserEvent, egui};
use egui::{ViewportCommand, ViewportEvent, ViewportId};
use egui_winit::ActionRequested;
use std::num::NonZeroU32;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::rc::Rc;
use std::sync::Mutex;
use std::time::{Duration, Instant};
use winit::application::ApplicationHandler;
use winit::event::{StartCause, WindowEvent};
use winit::event_loop::{ActiveEventLoop, ControlFlow, EventLoop, EventLoopProxy};
use winit::platform::run_on_demand::EventLoopExtRunOnDemand as _;
use winit::window::{Window, WindowId};

/// Least time from one frame to the next: no screen shows more than this needs.
const FRAME: Duration = Duration::from_millis(8);
/// Least time between two looks at a hidden window's program.
const HIDDEN_FRAME: Duration = Duration::from_millis(100);
/// A frame not granted after this time means that the window is covered, even if nobody said so.
const MISSED: Duration = Duration::from_millis(500);
/// Largest side of a texture, in pixels; the font atlas must fit.
const MAX_TEXTURE_SIDE: usize = 8192;

/// Runs the program in such a window until it is closed.
pub(super) fn run(
    event_loop: &mut EventLoop<UserEvent>,
    make: &SharedMake<'_>,
    options: &ShellOptions,
) -> Result<(), ShellError> {
    let mut handler = Handler {
        proxy: event_loop.create_proxy(),
        builder: viewport(options),
        make: Rc::clone(make),
        window: None,
        failure: None,
    };
    match catch_unwind(AssertUnwindSafe(|| event_loop.run_app_on_demand(&mut handler))) {
        Err(_) => Err(ShellError::Fault),
        Ok(ended) => match (handler.failure.take(), ended) {
            (Some(reason), _) => Err(ShellError::Window { reason }),
            (None, Err(_)) => {
                Err(ShellError::Window { reason: "the window system ended the connection".to_owned() })
            }
            (None, Ok(())) => Ok(()),
        },
    }
}

/// Receives the window system's events.
struct Handler<'a> {
    proxy: EventLoopProxy<UserEvent>,
    builder: egui::ViewportBuilder,
    make: SharedMake<'a>,
    window: Option<CpuWindow>,
    failure: Option<String>,
}

/// The window and all that belongs to it.
struct CpuWindow {
    window: Rc<Window>,
    surface: softbuffer::Surface<Rc<Window>, Rc<Window>>,
    state: egui_winit::State,
    painter: CpuPainter,
    picture: Picture,
    program: Box<dyn Program>,
    info: egui::ViewportInfo,
    occluded: bool,
    /// When to paint next, if ever.
    due: Option<Instant>,
    /// Since when a frame is asked for and not yet granted.
    asked: Option<Instant>,
    last_frame: Instant,
}

impl Handler<'_> {
    fn open(&mut self, event_loop: &ActiveEventLoop) -> Result<CpuWindow, String> {
        let ctx = egui::Context::default();
        // Accessibility has to be connected before the window is seen.
        let builder = self.builder.clone().with_visible(false);
        let window = egui_winit::create_window(&ctx, event_loop, &builder)
            .map(Rc::new)
            .map_err(|_| "the window system refuses to open one".to_owned())?;
        let no_buffer = |_: softbuffer::SoftBufferError| "the window system gives no pixel buffer".to_owned();
        let context = softbuffer::Context::new(Rc::clone(&window)).map_err(no_buffer)?;
        let surface = softbuffer::Surface::new(&context, Rc::clone(&window)).map_err(no_buffer)?;
        let mut state = egui_winit::State::new(
            ctx.clone(),
            ViewportId::ROOT,
            &window,
            Some(window.scale_factor() as f32),
            window.theme(),
            Some(MAX_TEXTURE_SIDE),
        );
        state.init_accesskit(event_loop, &window, self.proxy.clone());
        wake_on_request(&ctx, self.proxy.clone());
        let make = self.make.borrow_mut().take().ok_or_else(|| "the program was already made".to_owned())?;
        let program = make(&ctx);
        let mut info = egui::ViewportInfo::default();
        egui_winit::update_viewport_info(&mut info, &ctx, &window, true);
        window.set_visible(true);
        window.request_redraw();
        Ok(CpuWindow {
            window,
            surface,
            state,
            painter: CpuPainter::new(),
            picture: Picture::default(),
            program,
            info,
            occluded: false,
            due: Some(Instant::now()),
            asked: None,
            last_frame: Instant::now(),
        })
    }

    /// Asks for a frame if one is due, and lets the loop sleep until the next.
    ///
    /// A hidden window may never be told to draw, so its program gets its turn from here.
    fn schedule(&mut self, event_loop: &ActiveEventLoop) {
        let Some(w) = &mut self.window else { return };
        let now = Instant::now();
        if w.due_at().is_some_and(|at| at <= now) {
            w.due = None;
            if w.is_hidden() {
                self.turn(event_loop);
            } else {
                w.window.request_redraw();
                w.asked.get_or_insert(now);
            }
        } else if w.asked.is_some_and(|at| at + MISSED <= now) {
            w.asked = None;
            let ctx = w.state.egui_ctx().clone();
            w.logic_only(event_loop, &ctx);
        }
        let next = self.window.as_ref().and_then(|w| {
            let missed = w.asked.map(|at| at + MISSED);
            w.due_at().into_iter().chain(missed).min()
        });
        event_loop.set_control_flow(next.map_or(ControlFlow::Wait, ControlFlow::WaitUntil));
    }

    /// One frame, and the end if the window closes or is lost.
    fn turn(&mut self, event_loop: &ActiveEventLoop) {
        let Some(w) = &mut self.window else { return };
        match w.frame(event_loop) {
            Ok(false) => {}
            Ok(true) => event_loop.exit(),
            Err(reason) => {
                self.failure = Some(reason);
                event_loop.exit();
            }
        }
    }
}

/// Requests for a repaint may come from any thread; they reach the loop as events.
fn wake_on_request(ctx: &egui::Context, proxy: EventLoopProxy<UserEvent>) {
    let proxy = Mutex::new(proxy);
    ctx.set_request_repaint_callback(move |request| {
        // A delay beyond the end of time is no request.
        let Some(when) = Instant::now().checked_add(request.delay) else { return };
        let event = UserEvent::RequestRepaint {
            viewport_id: request.viewport_id,
            when,
            cumulative_pass_nr: request.current_cumulative_pass_nr,
        };
        if let Ok(proxy) = proxy.lock() {
            // It fails only when the loop has ended, and then there is nothing to repaint.
            let _ = proxy.send_event(event);
        }
    });
}

impl CpuWindow {
    /// Wants a frame at `when`, or earlier if one is due already.
    fn want_frame(&mut self, when: Instant) {
        self.due = Some(self.due.map_or(when, |due| due.min(when)));
    }

    /// When the next frame is due, if any is wanted: not too soon after the last.
    fn due_at(&self) -> Option<Instant> {
        let due = self.due?;
        Some(due.max(self.last_frame + if self.is_hidden() { HIDDEN_FRAME } else { FRAME }))
    }

    fn is_hidden(&self) -> bool {
        let size = self.window.inner_size();
        self.occluded || size.width == 0 || size.height == 0 || self.window.is_minimized() == Some(true)
    }

    /// One frame: the program's turn, then its picture. `true` if the window is to close.
    fn frame(&mut self, event_loop: &ActiveEventLoop) -> Result<bool, String> {
        self.last_frame = Instant::now();
        let ctx = self.state.egui_ctx().clone();
        egui_winit::update_viewport_info(&mut self.info, &ctx, &self.window, false);
        let closing = self.info.close_requested();
        if self.is_hidden() && !closing {
            self.logic_only(event_loop, &ctx);
            return Ok(false);
        }
        let mut input = self.state.take_egui_input(&self.window);
        input.viewports.insert(ViewportId::ROOT, self.info.clone());
        self.info.events.clear();
        let program = &mut self.program;
        let mut out = ctx.run_ui(input, |ui| {
            program.logic(ui.ctx());
            program.ui(ui);
        });
        self.state.handle_platform_output_with_event_loop(
            &self.window,
            event_loop,
            std::mem::take(&mut out.platform_output),
        );
        self.painter.apply_textures(&mut out.textures_delta);
        let primitives = ctx.tessellate(std::mem::take(&mut out.shapes), out.pixels_per_point);
        let shown = self.show(out.pixels_per_point, &primitives);
        self.painter.release_textures(&mut out.textures_delta);
        shown?;
        let mut kept_open = false;
        for (id, output) in std::mem::take(&mut out.viewport_output) {
            if id == ViewportId::ROOT {
                kept_open |= output.commands.contains(&ViewportCommand::CancelClose);
                if let Some(when) = Instant::now().checked_add(output.repaint_delay) {
                    self.want_frame(when);
                }
                self.obey(&ctx, output.commands);
            }
        }
        Ok(closing && !kept_open)
    }

    /// Nothing is seen, so nothing is laid out or painted; input waits for the next frame.
    fn logic_only(&mut self, event_loop: &ActiveEventLoop, ctx: &egui::Context) {
        let mut input = egui::RawInput { focused: false, ..Default::default() };
        input.viewports.insert(ViewportId::ROOT, self.info.clone());
        let program = &mut self.program;
        let mut out = ctx.run_logic(&input, |ctx| program.logic(ctx));
        self.state.handle_platform_output_with_event_loop(&self.window, event_loop, out.platform_output);
        if let Some(commands) = out.viewport_commands.remove(&ViewportId::ROOT) {
            self.obey(ctx, commands);
        }
    }

    /// Paints and hands the pixels to the window system.
    fn show(&mut self, pixels_per_point: f32, primitives: &[egui::ClippedPrimitive]) -> Result<(), String> {
        let size = self.window.inner_size();
        let (Some(width), Some(height)) = (NonZeroU32::new(size.width), NonZeroU32::new(size.height)) else {
            return Ok(());
        };
        self.picture.reset([size.width as usize, size.height as usize], [0, 0, 0, 255]);
        self.painter.paint(&mut self.picture, pixels_per_point, primitives);
        let lost = |_: softbuffer::SoftBufferError| "its pixel buffer was lost".to_owned();
        self.surface.resize(width, height).map_err(lost)?;
        let mut buffer = self.surface.buffer_mut().map_err(lost)?;
        for (shown, pixel) in buffer.iter_mut().zip(self.picture.pixels()) {
            // The buffer's highest byte has to be zero.
            *shown = pixel & 0x00ff_ffff;
        }
        self.window.pre_present_notify();
        buffer.present().map_err(lost)
    }

    /// Does what the program asked of its window.
    fn obey(&mut self, ctx: &egui::Context, commands: Vec<ViewportCommand>) {
        let mut actions = Vec::new();
        egui_winit::process_viewport_commands(ctx, &mut self.info, commands, &self.window, &mut actions);
        if self.info.close_requested() {
            self.want_frame(Instant::now());
        }
        for action in actions {
            let event = match action {
                ActionRequested::Screenshot(callback) => {
                    callback.complete(self.screenshot());
                    None
                }
                ActionRequested::Cut => Some(egui::Event::Cut),
                ActionRequested::Copy => Some(egui::Event::Copy),
                ActionRequested::Paste => {
                    self.state.clipboard_text().map(|t| egui::Event::Paste(t.replace("\r\n", "\n")))
                }
                ActionRequested::PaintWhileHidden => None,
            };
            self.state.egui_input_mut().events.extend(event);
            self.want_frame(Instant::now());
        }
    }

    /// What the window shows now.
    fn screenshot(&self) -> std::sync::Arc<egui::ColorImage> {
        let bytes = self.picture.to_rgba8();
        std::sync::Arc::new(egui::ColorImage::from_rgba_unmultiplied(self.picture.size_px(), &bytes))
    }

    fn on_window_event(&mut self, event: &WindowEvent) {
        match event {
            WindowEvent::CloseRequested => {
                self.info.events.push(ViewportEvent::Close);
                self.want_frame(Instant::now());
            }
            WindowEvent::Occluded(hidden) => self.occluded = *hidden,
            _ => {}
        }
        if self.state.on_window_event(&self.window, event).repaint {
            self.want_frame(Instant::now());
        }
    }
}

impl ApplicationHandler<UserEvent> for Handler<'_> {
    fn resumed(&mut self, event_loop: &ActiveEventLoop) {
        if self.window.is_some() {
            return;
        }
        match self.open(event_loop) {
            Ok(window) => self.window = Some(window),
            Err(reason) => {
                self.failure = Some(reason);
                event_loop.exit();
            }
        }
    }

    fn new_events(&mut self, event_loop: &ActiveEventLoop, _cause: StartCause) {
        self.schedule(event_loop);
    }

    fn user_event(&mut self, event_loop: &ActiveEventLoop, event: UserEvent) {
        if let Some(w) = &mut self.window {
            match event {
                UserEvent::RequestRepaint { when, cumulative_pass_nr, viewport_id } => {
                    // A request made before the last frame has been answered by it.
                    if w.state.egui_ctx().cumulative_pass_nr_for(viewport_id) <= cumulative_pass_nr + 1 {
                        w.want_frame(when);
                    }
                }
                UserEvent::AccessKitActionRequest(request) => {
                    use egui_winit::accesskit_winit::WindowEvent as Access;
                    match request.window_event {
                        Access::InitialTreeRequested => w.state.egui_ctx().enable_accesskit(),
                        Access::ActionRequested(action) => w.state.on_accesskit_action_request(action),
                        Access::AccessibilityDeactivated => w.state.egui_ctx().disable_accesskit(),
                    }
                    w.want_frame(Instant::now());
                }
            }
        }
        self.schedule(event_loop);
    }

    fn window_event(&mut self, event_loop: &ActiveEventLoop, _id: WindowId, event: WindowEvent) {
        if let Some(w) = &mut self.window {
            if event == WindowEvent::RedrawRequested {
                w.asked = None;
                self.turn(event_loop);
            } else {
                w.on_window_event(&event);
            }
        }
        self.schedule(event_loop);
    }

    fn exiting(&mut self, _event_loop: &ActiveEventLoop) {
        // The window has to go while the loop is alive.
        if let Some(mut w) = self.window.take() {
            w.program.on_exit();
            w.state.egui_ctx().on_exit();
        }
    }
}
