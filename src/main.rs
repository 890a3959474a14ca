//! The `scruple` program: it hands over to the command line, and ends with its exit code.

fn main() {
    // Not a return: after `serve` a thread may still wait for input.
    std::process::exit(scruple::command::run(scruple::server::run));
}
