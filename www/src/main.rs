//! The native program of Fallaround.

fn main() {}
