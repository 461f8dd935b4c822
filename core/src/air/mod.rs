//! Air: its density by height above a body's surface.

use crate::math::float::{exp, ln};

mod standard;

use standard::Standard;

/// Scale heights above which there is nothing left of exponential air: e⁻⁵⁰ of it is below every effect.
const EXPONENTIAL_TOP: f64 = 50.0;

/// How density depends on height.
#[derive(Debug, Clone, PartialEq)]
pub struct Air(Profile);

#[derive(Debug, Clone, PartialEq)]
enum Profile {
    Standard(Standard),
    Exponential { surface_kg_m3: f64, scale_m: f64 },
    Table(Table),
}

impl Air {
    /// The Earth's: the U.S. Standard Atmosphere 1976 up to 1000 km.
    pub fn standard() -> Self {
        Self(Profile::Standard(Standard::new()))
    }

    /// Density falls by e with every scale height, m; both numbers are positive.
    pub const fn exponential(surface_kg_m3: f64, scale_m: f64) -> Self {
        Self(Profile::Exponential { surface_kg_m3, scale_m })
    }

    /// Densities, kg/m³, at heights, m, each above the one before; exponential between them, and nothing above the last one.
    /// `None` unless there are two at least, as many of both, and all densities positive.
    pub fn table(heights_m: &[f64], densities_kg_m3: &[f64]) -> Option<Self> {
        Table::new(heights_m, densities_kg_m3).map(|table| Self(Profile::Table(table)))
    }

    /// Density at a height above the surface, m, in kg/m³. Below the surface it is that at the surface.
    pub fn density_kg_m3(&self, height_m: f64) -> f64 {
        if height_m > self.top_m() {
            return 0.0;
        }
        let height_m = height_m.max(0.0);
        match &self.0 {
            Profile::Standard(standard) => standard.density_kg_m3(height_m),
            Profile::Exponential { surface_kg_m3, scale_m } => surface_kg_m3 * exp(-height_m / scale_m),
            Profile::Table(table) => table.density_kg_m3(height_m),
        }
    }

    /// Height above which there is none, m.
    pub fn top_m(&self) -> f64 {
        match &self.0 {
            Profile::Standard(standard) => standard.top_m(),
            Profile::Exponential { scale_m, .. } => EXPONENTIAL_TOP * scale_m,
            Profile::Table(table) => table.top_m(),
        }
    }

    /// How far polynomials of degree 7 follow the density up or down from a height, m: a fair part of the height in which it changes
    /// by e, and much less where layers meet in a kink.
    pub fn stride_m(&self, height_m: f64) -> f64 {
        const SMOOTH: f64 = 0.25;
        const KINKED: f64 = 0.05;
        match &self.0 {
            Profile::Standard(standard) => KINKED * standard.scale_m(height_m),
            Profile::Exponential { scale_m, .. } => SMOOTH * scale_m,
            Profile::Table(table) => KINKED * table.scale_m(height_m),
        }
    }
}

/// Densities at heights, exponential between them.
#[derive(Debug, Clone, PartialEq)]
struct Table {
    heights_m: Vec<f64>,
    logs: Vec<f64>,
}

impl Table {
    fn new(heights_m: &[f64], densities_kg_m3: &[f64]) -> Option<Self> {
        let rising = heights_m.windows(2).all(|pair| pair[0] < pair[1]);
        let positive = densities_kg_m3.iter().all(|density| *density > 0.0);
        let fit = heights_m.len() >= 2 && heights_m.len() == densities_kg_m3.len();
        (rising && positive && fit).then(|| Self {
            heights_m: heights_m.to_vec(),
            logs: densities_kg_m3.iter().map(|density| ln(*density)).collect(),
        })
    }

    /// The two rows around a height, or the nearest two.
    fn around(&self, height_m: f64) -> [(f64, f64); 2] {
        let above = self.heights_m.partition_point(|h| *h <= height_m).clamp(1, self.heights_m.len() - 1);
        [above - 1, above].map(|row| (self.heights_m[row], self.logs[row]))
    }

    fn density_kg_m3(&self, height_m: f64) -> f64 {
        let [(low, log_low), (high, log_high)] = self.around(height_m);
        let part = ((height_m - low) / (high - low)).clamp(0.0, 1.0);
        exp(log_low + part * (log_high - log_low))
    }

    fn top_m(&self) -> f64 {
        self.heights_m.last().copied().unwrap_or_default()
    }

    /// Height in which density changes by e, or the distance of the rows where that is less.
    fn scale_m(&self, height_m: f64) -> f64 {
        let [(low, log_low), (high, log_high)] = self.around(height_m);
        (high - low) / (log_high - log_low).abs().max(1.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn near(got: f64, want: f64, part: f64) {
        assert!((got / want - 1.0).abs() <= part, "got {got:e}, want {want:e}");
    }

    #[test]
    fn exponential_air_falls_by_e_with_every_scale_height() {
        let air = Air::exponential(1.2, 8000.0);
        near(air.density_kg_m3(0.0), 1.2, 1e-15);
        near(air.density_kg_m3(8000.0), 1.2 / std::f64::consts::E, 1e-15);
        near(air.density_kg_m3(-3e6), 1.2, 1e-15);
        assert!(air.density_kg_m3(4.1e5) <= 0.0);
    }

    #[test]
    fn a_table_gives_its_rows_and_the_geometric_mean_midway() {
        let air = Air::table(&[0.0, 10e3, 30e3], &[4.0, 1.0, 1e-4]).unwrap();
        near(air.density_kg_m3(0.0), 4.0, 1e-15);
        near(air.density_kg_m3(5e3), 2.0, 1e-15);
        near(air.density_kg_m3(20e3), 1e-2, 1e-14);
        near(air.density_kg_m3(30e3), 1e-4, 1e-14);
        assert!(air.density_kg_m3(30.1e3) <= 0.0);
        for (heights, densities) in [
            (&[0.0][..], &[1.0][..]),
            (&[0.0, 0.0], &[1.0, 0.5]),
            (&[0.0, 1.0], &[1.0, 0.0]),
            (&[0.0, 1.0], &[1.0]),
        ] {
            assert_eq!(Air::table(heights, densities), None);
        }
    }
}
