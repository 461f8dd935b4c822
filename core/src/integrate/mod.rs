//! (in work: integrate)
