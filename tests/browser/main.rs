//! The built app in a real Chromium, served by the program's own server.
//!
//! Run by `cargo run --release -- test`, which builds the app, finds the browser, and says by the environment where they
//! are: FALLAROUND_PROGRAM, CHROME, CHROMEDRIVER. Any error or warning on the page's console fails the test.

#![allow(clippy::expect_used, reason = "what a test needs and lacks fails it")]

mod bad_files;
mod house;
mod offline;
mod parity;
mod server;
mod session;
mod show_run;
mod speed;
mod start_page;
mod webdriver;
