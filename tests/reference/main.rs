//! Fallaround against published data: a module for each source, each check with the place in it.
//!
//! Values marked "from memory" were written down without the publication at hand; each of them is also checked
//! against the equation that it illustrates, so that a slip of memory would fail.

mod air;
mod apparitions;
mod areas;
mod changes;
mod de440;
mod eclipses;
mod energy;
mod figure_eight;
mod handbooks;
mod kirkwood;
mod planets;
mod routh;
mod satellites;
mod secular;
mod transfers;
mod transits;
