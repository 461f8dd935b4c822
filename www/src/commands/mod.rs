//! What the program answers about scenarios, and what it can be told to do. Each command has a file.

pub(crate) mod aim;
pub(crate) mod check;
pub(crate) mod events;
pub(crate) mod fingerprint;
pub(crate) mod module;
pub(crate) mod test;
pub(crate) mod trace;
