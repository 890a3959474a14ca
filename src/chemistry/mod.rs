//! The core: amounts and conditions in, a state with its sensitivities out. Knows no text, spans, files or people.
