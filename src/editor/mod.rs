//! One file per editor feature, each a pure function of a snapshot and an offset.
