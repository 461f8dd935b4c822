//! Drag: what air takes from bodies that move through it.

use crate::air::Air;
use crate::initial::{Atmosphere, Drag};

/// A body that the air of another slows.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Drags {
    body: usize,
    host: usize,
    /// Half of the coefficient times area over mass, m²/kg.
    half_m2_kg: f64,
    radius_m: f64,
    air: Air,
}

/// A body relative to the one whose air it is in.
struct Passing {
    distance_m: f64,
    height_m: f64,
    vel: [f64; 3],
    speed_m_s: f64,
    /// Speed outwards, m/s.
    outwards_m_s: f64,
}

impl Drags {
    pub(crate) fn new(body: usize, drag: &Drag, host: usize, atmosphere: &Atmosphere) -> Self {
        Self {
            body,
            host,
            half_m2_kg: 0.5 * drag.area_m2_kg,
            radius_m: atmosphere.radius_m,
            air: atmosphere.air.clone(),
        }
    }

    /// Adds the drag, and its reaction on the body whose air it is: with the velocity v relative to that body, which does not turn,
    /// -1/2 ρ (C A / m) |v| v.
    ///
    /// # Source
    /// I. Newton, Principia (1687), book II, section VII: drag by density and the square of speed.
    pub(crate) fn add(&self, gms: &[f64], pos: &[f64], vel: &[f64], out: &mut [f64]) {
        let passing = self.passing(pos, vel);
        if passing.height_m > self.air.top_m() {
            return;
        }
        let w = -self.half_m2_kg * self.air.density_kg_m3(passing.height_m) * passing.speed_m_s;
        let (own, host) = (gms[self.body], gms[self.host]);
        let reaction = if host > 0.0 { own / host } else { 0.0 };
        for axis in 0..3 {
            let a = w * passing.vel[axis];
            out[3 * self.body + axis] += a;
            out[3 * self.host + axis] -= reaction * a;
        }
    }

    /// The longest step, s, in which the polynomials of a step follow the air: it may not go so far up or down that density
    /// changes much, nor take so long that drag stops what it acts on, for which iterating a step would not converge.
    pub(crate) fn longest_step_s(&self, gms: &[f64], pos: &[f64], vel: &[f64]) -> f64 {
        /// Part of the time in which drag halves a speed.
        const PART: f64 = 0.5;
        let Passing { distance_m, height_m, speed_m_s, outwards_m_s, .. } = self.passing(pos, vel);
        let gravity_m_s2 = gms[self.host] / (distance_m * distance_m);
        let across2 = (speed_m_s * speed_m_s - outwards_m_s * outwards_m_s).max(0.0);
        let bend_m_s2 = (across2 / distance_m - gravity_m_s2).abs();
        let top_m = self.air.top_m();
        // From outside, half of the way at most: it falls ever faster.
        let way_m = 0.5 * (height_m - top_m).max(0.0) + self.air.stride_m(height_m.min(top_m));
        let fall = outwards_m_s.abs();
        let by_way_s = 2.0 * way_m / (fall + (fall * fall + 2.0 * bend_m_s2 * way_m).sqrt());
        if height_m > top_m {
            return by_way_s;
        }
        // The rate at which drag works, per speed, and the speed that is gained meanwhile.
        let rate_per_m = 2.0 * self.half_m2_kg * self.air.density_kg_m3(height_m);
        let rate = rate_per_m * speed_m_s;
        let by_drag_s = 2.0 * PART / (rate + (rate * rate + 4.0 * PART * rate_per_m * gravity_m_s2).sqrt());
        // Either is NaN or infinite where nothing moves or no air is: no limit.
        by_way_s.min(by_drag_s)
    }

    fn passing(&self, pos: &[f64], vel: &[f64]) -> Passing {
        let (b, h) = (3 * self.body, 3 * self.host);
        let r = [pos[b] - pos[h], pos[b + 1] - pos[h + 1], pos[b + 2] - pos[h + 2]];
        let v = [vel[b] - vel[h], vel[b + 1] - vel[h + 1], vel[b + 2] - vel[h + 2]];
        let distance_m = (r[0] * r[0] + r[1] * r[1] + r[2] * r[2]).sqrt();
        Passing {
            distance_m,
            height_m: distance_m - self.radius_m,
            vel: v,
            speed_m_s: (v[0] * v[0] + v[1] * v[1] + v[2] * v[2]).sqrt(),
            outwards_m_s: (r[0] * v[0] + r[1] * v[1] + r[2] * v[2]) / distance_m,
        }
    }
}
