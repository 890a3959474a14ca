//! Files, the graph of uses, configuration; an immutable snapshot of everything known.
