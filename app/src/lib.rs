//! The browser side of Fallaround.
