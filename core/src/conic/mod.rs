//! (in work: conic)
