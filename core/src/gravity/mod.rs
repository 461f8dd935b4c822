//! (in work: gravity)
