//! Numbers the same everywhere: elementary functions, rotations, roots; and counts among them.

pub mod counts;
pub mod float;
pub mod frame;
pub mod root;
