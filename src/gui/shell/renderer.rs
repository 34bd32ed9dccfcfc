//! Which painter: graphics hardware through OpenGL, or the processor.

use std::str::FromStr;

/// How the window is painted.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Renderer {
    /// OpenGL where there is hardware for it, the processor everywhere else.
    #[default]
    Auto,
    /// OpenGL, even if it is emulated; an error where there is none.
    Gl,
    /// The processor.
    Cpu,
}

/// The environment variable that chooses the renderer where no option does.
pub const RENDERER_VARIABLE: &str = "PARABOUND_RENDERER";

/// A renderer nobody knows.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("renderer {found:?} is not known: choose auto, gl or cpu")]
pub struct UnknownRenderer {
    /// The word that was given.
    pub found: String,
}

impl FromStr for Renderer {
    type Err = UnknownRenderer;

    fn from_str(word: &str) -> Result<Self, UnknownRenderer> {
        match word.trim().to_ascii_lowercase().as_str() {
            "auto" => Ok(Self::Auto),
            "gl" => Ok(Self::Gl),
            "cpu" => Ok(Self::Cpu),
            _ => Err(UnknownRenderer { found: word.to_owned() }),
        }
    }
}

impl Renderer {
    /// The choice of the option if there is one, else that of the environment variable
    /// ([`RENDERER_VARIABLE`]; empty counts as absent), else [`Self::Auto`].
    ///
    /// # Errors
    /// The environment variable holds an unknown word.
    pub fn choose(option: Option<Self>) -> Result<Self, UnknownRenderer> {
        match (option, std::env::var_os(RENDERER_VARIABLE)) {
            (Some(choice), _) => Ok(choice),
            (None, Some(word)) if !word.is_empty() => word.to_string_lossy().parse(),
            (None, _) => Ok(Self::Auto),
        }
    }
}

/// Whether OpenGL is only emulated on the processor: then our own painter is quicker and lighter.
///
/// The words are those that Mesa, SwiftShader and Windows put into `GL_RENDERER` (common practice, no source).
pub(super) fn is_emulated(gl_renderer: &str) -> bool {
    let name = gl_renderer.to_ascii_lowercase();
    ["llvmpipe", "softpipe", "swrast", "software", "swiftshader", "gdi generic", "basic render", "warp"]
        .iter()
        .any(|word| name.contains(word))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words() {
        assert_eq!("CPU".parse(), Ok(Renderer::Cpu));
        assert_eq!(" gl ".parse(), Ok(Renderer::Gl));
        assert_eq!("auto".parse(), Ok(Renderer::Auto));
        let error = "vulkan".parse::<Renderer>().unwrap_err().to_string();
        assert_eq!(error, "renderer \"vulkan\" is not known: choose auto, gl or cpu");
        assert_eq!(Renderer::choose(Some(Renderer::Gl)), Ok(Renderer::Gl));
    }

    #[test]
    fn emulated_drivers_are_told_from_hardware() {
        for name in [
            "llvmpipe (LLVM 15.0.6, 256 bits)",
            "softpipe",
            "GDI Generic",
            "Microsoft Basic Render Driver",
            "Google SwiftShader",
            "Apple Software Renderer",
        ] {
            assert!(is_emulated(name), "{name}");
        }
        for name in [
            "Mesa Intel(R) UHD Graphics 620 (KBL GT2)",
            "AMD Radeon RX 6600",
            "NVIDIA GeForce RTX 3060/PCIe/SSE2",
            "Apple M2",
        ] {
            assert!(!is_emulated(name), "{name}");
        }
    }
}
