//! (in work: math)
