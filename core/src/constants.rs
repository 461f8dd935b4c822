//! Constants.
