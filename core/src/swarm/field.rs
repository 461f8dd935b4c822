//! What pulls on tracers: the bodies, at instants that all tracers share.
//!
//! Places are relative to the swarm's origin. That is the centre of mass of all, which nothing moves, where tracers are farther from
//! their body than it is from there; else the body itself, near which places are then exact, and whose own acceleration is taken off those
//! of the tracers. That acceleration is the sum of the same pulls that act on the tracers, and not read off the ephemeris: what is left out
//! for them (relativity) is left out for it, and tracers near it fall with it.

use crate::Vector3;
use crate::ephemeris::{Ephemeris, State};
use crate::gravity::{Bulge, Drags};
use crate::initial::{Drag, InitialState};
use crate::scenario::BodyId;

/// A body that pulls on tracers, or stops them.
#[derive(Debug, Clone)]
pub(super) struct Source {
    pub(super) body: BodyId,
    pub(super) gm: f64,
    pub(super) radius_m: f64,
    /// Its part in the mass of what moves as one with the body that the swarm is about; 0 if it doesn't.
    share: f64,
}

/// What pulls on tracers, from one break of the forces to the next.
#[derive(Debug, Clone)]
pub(super) struct Field {
    about: BodyId,
    inertial: bool,
    /// Those with mass first.
    pub(super) sources: Vec<Source>,
    pub(super) massive: usize,
    /// Square of the length over which the sources' attraction is softened (`gravity::softening`), m²; 0: they attract as points.
    pub(super) softened2_m2: f64,
    /// Of sources, by their places among them.
    bulges: Vec<Bulge>,
    airs: Vec<Air>,
}

/// The air around one of the sources, and how it slows a tracer.
#[derive(Debug, Clone)]
struct Air {
    source: usize,
    reach_m: f64,
    /// For a tracer and the source, in this order.
    drags: Drags,
}

/// The bodies at one instant.
#[derive(Debug, Clone, Default)]
pub(super) struct Node {
    pub(super) t_s: f64,
    /// Places of the sources relative to the origin.
    pub(super) at: Vec<[f64; 3]>,
    /// Their velocities relative to it.
    pub(super) moving: Vec<[f64; 3]>,
    /// Acceleration of the origin.
    pub(super) shift: [f64; 3],
}

impl Field {
    /// As it is at an instant, and until the next break.
    pub(super) fn new(
        initial: &InitialState,
        about: BodyId,
        area_m2_kg: f64,
        inertial: bool,
        eph: &Ephemeris,
        t_s: f64,
    ) -> Self {
        let root = |body: BodyId| {
            let mut root = body;
            while let Some(contact) = eph.at_rest(root, t_s) {
                root = contact.onto;
            }
            root
        };
        let mut sources: Vec<Source> = initial
            .bodies
            .iter()
            .enumerate()
            .map(|(i, body)| Source {
                body: BodyId(i),
                gm: eph.gm_m3_s2(BodyId(i), t_s),
                radius_m: body.radius_m,
                share: 0.0,
            })
            .filter(|source| source.gm > 0.0 || source.radius_m > 0.0 || source.body == about)
            .collect();
        sources.sort_by_key(|source| source.gm <= 0.0);
        let massive = sources.iter().filter(|source| source.gm > 0.0).count();
        let host = root(about);
        let together = |source: &Source| root(source.body) == host;
        let all: f64 = sources.iter().filter(|source| together(source)).map(|source| source.gm).sum();
        for source in &mut sources {
            if together(source) {
                source.share = if all > 0.0 { source.gm / all } else { 0.0 };
            }
            if all <= 0.0 && source.body == about {
                source.share = 1.0;
            }
        }
        let bulges = initial
            .forces
            .oblate
            .iter()
            .filter_map(|oblate| {
                let source = sources.iter().position(|s| s.body == oblate.body && s.gm > 0.0)?;
                Some(Bulge::new(source, oblate))
            })
            .collect();
        let slowed = Drag { body: about, area_m2_kg };
        let airs = initial
            .forces
            .atmospheres
            .iter()
            .filter(|_| area_m2_kg > 0.0)
            .filter_map(|air| {
                Some(Air {
                    source: sources.iter().position(|source| source.body == air.body)?,
                    reach_m: air.radius_m + air.air.top_m(),
                    drags: Drags::new(0, &slowed, 1, air),
                })
            })
            .collect();
        let softening_m = initial.forces.softening_m;
        Self { about, inertial, sources, massive, softened2_m2: softening_m * softening_m, bulges, airs }
    }

    /// Where the origin is, barycentric, and how it moves.
    pub(super) fn origin(&self, eph: &Ephemeris, t_s: f64) -> (Vector3<f64>, Vector3<f64>) {
        let still = (Vector3::zeros(), Vector3::zeros());
        if self.inertial { still } else { eph.state(self.about, t_s).map_or(still, |s| (s.pos, s.vel)) }
    }

    /// The bodies at an instant, into a node.
    pub(super) fn fill(&self, eph: &Ephemeris, t_s: f64, node: &mut Node) {
        let (origin, drift) = self.origin(eph, t_s);
        node.t_s = t_s;
        node.at.clear();
        node.moving.clear();
        for source in &self.sources {
            let still = State { pos: origin, vel: drift };
            let state = eph.state(source.body, t_s).unwrap_or(still);
            node.at.push((state.pos - origin).into());
            node.moving.push((state.vel - drift).into());
        }
        node.shift = if self.inertial { [0.0; 3] } else { self.shift(&node.at) };
    }

    /// Where a source is at an instant.
    pub(super) fn place(&self, eph: &Ephemeris, source: usize, t_s: f64) -> [f64; 3] {
        let (origin, _) = self.origin(eph, t_s);
        eph.state(self.sources[source].body, t_s).map_or([0.0; 3], |state| (state.pos - origin).into())
    }

    /// Acceleration of a tracer by all that acts on it.
    pub(super) fn pull_at(&self, node: &Node, pos: [f64; 3], vel: [f64; 3]) -> [f64; 3] {
        let mut acc = node.shift.map(|a| -a);
        for (source, at) in self.sources[..self.massive].iter().zip(&node.at) {
            let d = [at[0] - pos[0], at[1] - pos[1], at[2] - pos[2]];
            let w = source.gm / self.cube(d);
            for axis in 0..3 {
                acc[axis] += w * d[axis];
            }
        }
        if self.bulging() {
            let bulges = self.bulge_pull(node, pos);
            for axis in 0..3 {
                acc[axis] += bulges[axis];
            }
        }
        for air in &self.airs {
            let mut both = [0.0; 6];
            let (pos, vel) = both_of(node, air.source, pos, vel);
            air.drags.add(&[0.0, self.sources[air.source].gm], &pos, &vel, &mut both);
            for axis in 0..3 {
                acc[axis] += both[axis];
            }
        }
        acc
    }

    /// The cube of a distance by which pulls go, softened.
    fn cube(&self, d: [f64; 3]) -> f64 {
        let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2] + self.softened2_m2;
        r2 * r2.sqrt()
    }

    /// Time in which what passes through the middle of a source turns by a radian, s: nothing near it goes faster. 0 without softening.
    pub(super) fn softest_s(&self, source: usize) -> f64 {
        (self.softened2_m2 * self.softened2_m2.sqrt() / self.sources[source].gm).sqrt()
    }

    /// Whether there is air that slows tracers.
    pub(super) fn airy(&self) -> bool {
        !self.airs.is_empty()
    }

    /// The longest step that air allows, s.
    pub(super) fn longest_step_s(&self, node: &Node, pos: [f64; 3], vel: [f64; 3]) -> f64 {
        self.airs.iter().fold(f64::INFINITY, |least, air| {
            let (pos, vel) = both_of(node, air.source, pos, vel);
            // What is not a number is no limit.
            least.min(air.drags.longest_step_s(&[0.0, self.sources[air.source].gm], &pos, &vel))
        })
    }

    /// The sources that can be touched, with their radii.
    pub(super) fn solids(&self) -> impl Iterator<Item = (usize, f64)> {
        let radii = self.sources.iter().map(|source| source.radius_m).enumerate();
        radii.filter(|(_, radius_m)| *radius_m > 0.0)
    }

    /// How far out the surface of a source reaches, or its air.
    pub(super) fn reach_m(&self, source: usize) -> f64 {
        let airs = self.airs.iter().filter(|air| air.source == source);
        airs.fold(self.sources[source].radius_m, |reach_m, air| reach_m.max(air.reach_m))
    }

    /// The source that pulls most at a place.
    pub(super) fn strongest(&self, node: &Node, pos: [f64; 3]) -> Option<usize> {
        (0..self.massive).max_by(|&a, &b| {
            let pull = |n: usize| self.sources[n].gm / (square_apart(node.at[n], pos) + self.softened2_m2);
            pull(a).total_cmp(&pull(b))
        })
    }

    /// The source nearest to a place.
    pub(super) fn nearest(&self, node: &Node, pos: [f64; 3]) -> usize {
        let square = |n: usize| square_apart(node.at[n], pos);
        (0..node.at.len()).min_by(|&a, &b| square(a).total_cmp(&square(b))).unwrap_or_default()
    }

    /// Acceleration of the body that the swarm is about, and all that moves as one with it.
    fn shift(&self, at: &[[f64; 3]]) -> [f64; 3] {
        let mut shift = [0.0; 3];
        for (member, place) in self.sources.iter().zip(at).filter(|(member, _)| member.share > 0.0) {
            for (source, from) in self.sources.iter().zip(at).filter(|(source, _)| source.share <= 0.0) {
                let r = apart(*place, *from);
                let w = member.share * source.gm / self.cube(r);
                for axis in 0..3 {
                    shift[axis] -= w * r[axis];
                }
            }
        }
        for bulge in &self.bulges {
            let own = self.sources[bulge.body].share;
            for (source, place) in self.sources.iter().zip(at) {
                // On a member by a bulge elsewhere, or the reaction on a member by what its bulge acts on.
                let weight = if own > 0.0 && source.share <= 0.0 {
                    -own * source.gm
                } else if own <= 0.0 && source.share > 0.0 {
                    source.share * self.sources[bulge.body].gm
                } else {
                    continue;
                };
                let a = bulge.pull(apart(*place, at[bulge.body]));
                for axis in 0..3 {
                    shift[axis] += weight * a[axis];
                }
            }
        }
        shift
    }

    /// Whether any body bulges.
    pub(super) fn bulging(&self) -> bool {
        !self.bulges.is_empty()
    }

    /// What all bulges add to the acceleration of a tracer.
    pub(super) fn bulge_pull(&self, node: &Node, place: [f64; 3]) -> [f64; 3] {
        let mut sum = [0.0; 3];
        for bulge in &self.bulges {
            let gm = self.sources[bulge.body].gm;
            let a = bulge.pull(apart(place, node.at[bulge.body]));
            for axis in 0..3 {
                sum[axis] += gm * a[axis];
            }
        }
        sum
    }
}

/// Places and velocities of a tracer and a source, one after the other.
fn both_of(node: &Node, source: usize, pos: [f64; 3], vel: [f64; 3]) -> ([f64; 6], [f64; 6]) {
    let (at, moving) = (node.at[source], node.moving[source]);
    ([pos[0], pos[1], pos[2], at[0], at[1], at[2]], [vel[0], vel[1], vel[2], moving[0], moving[1], moving[2]])
}

pub(super) fn apart(a: [f64; 3], b: [f64; 3]) -> [f64; 3] {
    [a[0] - b[0], a[1] - b[1], a[2] - b[2]]
}

fn square_apart(a: [f64; 3], b: [f64; 3]) -> f64 {
    let d = apart(a, b);
    d[0] * d[0] + d[1] * d[1] + d[2] * d[2]
}
