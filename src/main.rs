//! The program: the window, or one of the headless commands.

fn main() -> std::process::ExitCode {
    parabound::headless::main()
}
