//! The built-in library: substances, ions and constants, written in the language itself, each with its source.
