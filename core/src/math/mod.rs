//! Numbers the same everywhere: elementary functions, rotations, roots.

pub mod float;
pub mod frame;
pub mod root;
