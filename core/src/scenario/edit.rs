//! Changing the text of a scenario.
