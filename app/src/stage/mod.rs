//! The stage: the house picture on a canvas, driven by the show clock.
//!
//! What is drawn is a function of the show and its clock alone; nothing here is reactive. The stage tells the
//! page what people read of it through [`Readout`]s, a few times a second.

pub mod canvas;
pub mod frame_loop;
pub mod house;
pub mod paint;
mod points;
pub mod readout;

pub use canvas::{Picture, StageCanvas};
pub use house::House;
pub use readout::Readout;
