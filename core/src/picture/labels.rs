//! Names and numbers beside bodies: clear of one another, of bodies, of caption and foot line, and calm.
//!
//! Each label has a few places around its body. Which one it takes is decided at fixed instants of model time, a
//! fraction of a show second apart, one after another from the beat's start: a label keeps its place until that is
//! worse than another by a margin, now or soon (the future is known), and then slides. So the labels at an
//! instant follow from the beat and the instant alone, whichever way the presenter came there. Between
//! two instants, places are interpolated. What touches something more important fades, and waits unseen.

use super::Tag;
use super::frame::Frame;
use super::geometry::{Px, Rect, between, clip_piece, length};
use super::list::{Anchor, Colour};
use super::look;
use super::scene::{Scene, Spot, Words};
use crate::math::counts::number_from;

/// Steps a show second in which places are decided.
pub const STEPS_A_SECOND: f64 = 8.0;
/// How much of the way to its place a label slides in one step.
const SLIDE: f64 = 0.3;
/// Steps ahead that a label looks for trouble.
pub const LOOK_AHEAD: usize = 8;
/// How much worse a place must be than another before a label leaves it.
const LOYALTY: f64 = 6.0;

/// Radius from which a disc is ground for the names of what is in front of it, in label sizes.
const LARGE: f64 = 3.0;
/// How much worse a place is for a path or a disc's rim that runs through it: enough to leave it.
const STRUCK: f64 = 7.0;

/// What a label belongs to. Also its order among equals.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Key {
    /// A body, by index.
    Body(usize),
    /// The n-th apsis of a body.
    Apsis(usize, usize),
    /// A swarm, by index.
    Swarm(usize),
}

/// A label to be placed.
#[derive(Debug, Clone, PartialEq)]
pub struct Block {
    /// What it belongs to.
    pub key: Key,
    /// Where that is, px.
    pub at: Px,
    /// Radius of that, px.
    pub radius: f64,
    /// Its lines.
    pub lines: Vec<Line>,
}

/// One line of a label.
#[derive(Debug, Clone, PartialEq)]
pub struct Line {
    /// The words.
    pub text: String,
    /// Weight.
    pub weight: u16,
    /// Colour.
    pub colour: Colour,
    /// What it stands for.
    pub tag: Tag,
}

/// What labels keep clear of.
#[derive(Debug, Clone, Default)]
pub struct Obstacles {
    /// Words that stand fast: caption, foot line, areas.
    pub rects: Vec<Rect>,
    /// Discs of bodies: index of the body, middle, radius.
    pub discs: Vec<(usize, Px, f64)>,
    /// Lines that shouldn't run through words: arrows, tails.
    pub pieces: Vec<[Px; 2]>,
}

/// Where a label is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Standing {
    /// What it belongs to.
    pub key: Key,
    place: usize,
    /// Middle of its box relative to what it belongs to, px.
    offset: Px,
    /// 0: lines start at the box's left; 1: they end at its right.
    lean: f64,
    /// 0 waits unseen, 1 in full.
    opacity: f64,
}

/// The places: which way from the body, in the order in which they are liked.
const PLACES: [Px; 8] = [
    [1.0, 0.0],
    [0.75, -0.75],
    [0.75, 0.75],
    [-1.0, 0.0],
    [-0.75, -0.75],
    [-0.75, 0.75],
    [0.0, 1.0],
    [0.0, -1.0],
];
/// The place inside a large disc.
const INSIDE: usize = PLACES.len();
/// The places in the order in which they lie round the body.
const ROUND: [usize; 8] = [0, 1, 7, 4, 3, 5, 6, 2];
/// A place that costs as much is covered, or nearly.
const COVERED: f64 = 85.0;

impl Block {
    /// Width and height of its box, px.
    pub fn size(&self, frame: &Frame) -> Px {
        let widths = self.lines.iter().map(|l| super::type_metrics::width(&l.text, frame.label, l.weight));
        [widths.fold(0.0, f64::max), line_height(frame) * number_from(self.lines.len())]
    }

    /// Middle of its box at a place, relative to what it belongs to; `None`: it has no such place.
    fn offset(&self, place: usize, frame: &Frame) -> Option<Px> {
        let [w, h] = self.size(frame);
        let gap = 0.38 * frame.label;
        if place == INSIDE {
            // In the part of the disc that is in the picture.
            let safe = frame.whole().grown(-frame.margin);
            let middle = [
                self.at[0].clamp(safe.left + 0.5 * w, (safe.right - 0.5 * w).max(safe.left + 0.5 * w)),
                self.at[1].clamp(safe.top + 0.5 * h, (safe.bottom - 0.5 * h).max(safe.top + 0.5 * h)),
            ];
            let offset = [middle[0] - self.at[0], middle[1] - self.at[1]];
            let reach = length([offset[0].abs() + 0.5 * w, offset[1].abs() + 0.5 * h]);
            return (reach + gap < self.radius).then_some(offset);
        }
        let [x, y] = PLACES[place];
        let reach = self.radius + gap;
        // Beside it, the first line is level with the middle; above and below, the whole box stands clear.
        let level = if y.abs() < 0.1 { 0.5 * h - 0.5 * line_height(frame) } else { 0.0 };
        Some([x * reach + sign(x) * 0.5 * w, y * reach + sign(y) * 0.5 * h * 0.92 + level])
    }
}

fn sign(v: f64) -> f64 {
    if v > 0.1 {
        1.0
    } else if v < -0.1 {
        -1.0
    } else {
        0.0
    }
}

/// Height of one line of a label, px.
pub fn line_height(frame: &Frame) -> f64 {
    1.12 * frame.label
}

/// The box in which the ink of a label's lines lies: its height but for the leading.
fn ink_box(middle: Px, size: Px, frame: &Frame) -> Rect {
    Rect::about(middle, size[0], size[1] - 0.18 * frame.label)
}

/// Decides the places at one instant, from those at the instant before.
///
/// `soon` are the same labels and obstacles a little later; `clutter` are points of lines that names had better
/// not cover.
pub fn step(
    before: &[Standing],
    now: (&[Block], &Obstacles),
    soon: (&[Block], &Obstacles),
    clutter: &[Px],
    frame: &Frame,
) -> Vec<Standing> {
    let (blocks, obstacles) = now;
    let mut taken: Vec<Rect> = Vec::new();
    let mut taken_soon: Vec<Rect> = Vec::new();
    let mut standings = Vec::with_capacity(blocks.len());
    for block in blocks {
        let later = soon.0.iter().find(|b| b.key == block.key);
        let old = before.iter().find(|s| s.key == block.key);
        let mut best: Option<(usize, f64, Px)> = None;
        let mut kept: Option<(usize, f64, Px)> = None;
        let mut all: [Option<(f64, Px)>; PLACES.len()] = [None; PLACES.len()];
        for place in [INSIDE].into_iter().chain(0..INSIDE) {
            let Some(offset) = block.offset(place, frame) else {
                continue;
            };
            let mut cost = trouble(block, offset, place, obstacles, &taken, frame);
            if let Some((later, offset)) = later.and_then(|l| Some((l, l.offset(place, frame)?))) {
                cost = cost.max(trouble(later, offset, place, soon.1, &taken_soon, frame));
            }
            let middle = [block.at[0] + offset[0], block.at[1] + offset[1]];
            let rect = ink_box(middle, block.size(frame), frame).grown(0.15 * frame.label);
            let struck = number_from(clutter.iter().filter(|p| rect.holds(**p)).count().min(8));
            cost += if struck > 0.0 { STRUCK + 1.5 * struck } else { 0.0 };
            // A short way is better than one across its own body.
            cost += old.map_or(0.0, |o| 0.8 * length(between(o.offset, offset)) / frame.label);
            cost += if place == INSIDE { -20.0 } else { 0.6 * number_from(place) };
            if let Some(entry) = all.get_mut(place) {
                *entry = Some((cost, offset));
            }
            if old.is_some_and(|o| o.place == place) {
                kept = Some((place, cost, offset));
            }
            if best.is_none_or(|b| cost < b.1) {
                best = Some((place, cost, offset));
            }
        }
        let Some(best) = best else {
            continue;
        };
        let (place, _, goal) = kept.filter(|k| k.1 <= best.1 + LOYALTY).unwrap_or(best);
        let (place, goal) = old
            .and_then(|o| stopover(o, place, &all, frame))
            .map_or((place, goal), |place| (place, all[place].map_or(goal, |a| a.1)));
        let lean_goal = lean(place);
        let covered = clearance(
            &ink_box([block.at[0] + goal[0], block.at[1] + goal[1]], block.size(frame), frame),
            block.key,
            place == INSIDE,
            obstacles,
            &taken,
            frame,
        ) < 0.08 * frame.label;
        let seen = if covered { 0.0 } else { 1.0 };
        let (offset, lean, opacity) = old.map_or((goal, lean_goal, seen), |o| {
            let go = |from: f64, to: f64| from + (to - from) * SLIDE;
            let offset = [go(o.offset[0], goal[0]), go(o.offset[1], goal[1])];
            (offset, go(o.lean, lean_goal), go(o.opacity, seen))
        });
        if covered {
            // Unseen, it takes no room from others.
            standings.push(Standing { key: block.key, place, offset, lean, opacity });
            continue;
        }
        let size = block.size(frame);
        taken.push(ink_box([block.at[0] + goal[0], block.at[1] + goal[1]], size, frame));
        if let Some((later, goal)) = later.and_then(|l| Some((l, l.offset(place, frame)?))) {
            taken_soon.push(ink_box(
                [later.at[0] + goal[0], later.at[1] + goal[1]],
                later.size(frame),
                frame,
            ));
        }
        standings.push(Standing { key: block.key, place, offset, lean, opacity });
    }
    standings
}

/// Where a label goes first on its way to a place, so that it goes round its body and not across it: the place that it
/// is bound for already, until it is near there, then the next one round. `None`: straight on.
fn stopover(
    old: &Standing,
    place: usize,
    all: &[Option<(f64, Px)>; PLACES.len()],
    frame: &Frame,
) -> Option<usize> {
    let at = |place: usize| ROUND.iter().position(|p| *p == place);
    let (from, to) = (at(old.place)?, at(place)?);
    let free = |place: usize| all[place].filter(|a| a.0 < COVERED);
    let ahead = (to + ROUND.len() - from) % ROUND.len();
    if from == to || ahead == 1 || ahead == ROUND.len() - 1 {
        return None;
    }
    let bound =
        free(old.place).is_some_and(|(_, offset)| length(between(old.offset, offset)) > 0.5 * frame.label);
    if bound {
        return Some(old.place);
    }
    let (next, last) = (ROUND[(from + 1) % ROUND.len()], ROUND[(from + ROUND.len() - 1) % ROUND.len()]);
    let ways = if 2 * ahead <= ROUND.len() { [next, last] } else { [last, next] };
    ways.into_iter().find(|p| free(*p).is_some())
}

fn lean(place: usize) -> f64 {
    match PLACES.get(place) {
        Some([x, _]) if *x > 0.1 => 0.0,
        Some([x, _]) if *x < -0.1 => 1.0,
        _ => 0.5,
    }
}

/// How badly a place is taken: 0 free, 100 and more covered.
fn trouble(
    block: &Block,
    offset: Px,
    place: usize,
    obstacles: &Obstacles,
    taken: &[Rect],
    frame: &Frame,
) -> f64 {
    let rect = ink_box([block.at[0] + offset[0], block.at[1] + offset[1]], block.size(frame), frame);
    let clear = clearance(&rect, block.key, place == INSIDE, obstacles, taken, frame);
    let need = 0.35 * frame.label;
    let near = rect.grown(0.12 * frame.label);
    let crossed = obstacles.pieces.iter().any(|[a, b]| clip_piece(*a, *b, &near).is_some());
    let on_rim = obstacles.discs.iter().any(|&(_, at, radius)| straddles(&rect, at, radius, frame));
    let through = if crossed { 30.0 } else { 0.0 } + if on_rim { 2.0 * STRUCK } else { 0.0 };
    if clear >= need { through } else { 40.0 + 60.0 * (need - clear) / need + through }
}

/// Whether the rim of a large disc runs through a box.
fn straddles(rect: &Rect, at: Px, radius: f64, frame: &Frame) -> bool {
    let middle = rect.middle();
    let far =
        [(middle[0] - at[0]).abs() + 0.5 * rect.width(), (middle[1] - at[1]).abs() + 0.5 * rect.height()];
    radius > LARGE * frame.label && rect.gap_to_disc(at, radius) < 0.0 && length(far) > radius
}

/// How far a label's box stands from the nearest thing that it must not touch, px.
fn clearance(
    rect: &Rect,
    key: Key,
    inside: bool,
    obstacles: &Obstacles,
    taken: &[Rect],
    frame: &Frame,
) -> f64 {
    let whole = frame.whole().grown(-0.45 * frame.label);
    let to_edge = (rect.left - whole.left)
        .min(whole.right - rect.right)
        .min(rect.top - whole.top)
        .min(whole.bottom - rect.bottom)
        + 0.35 * frame.label;
    let mut clear = to_edge;
    for other in obstacles.rects.iter().chain(taken) {
        clear = clear.min(other.gap(rect));
    }
    for &(body, at, radius) in &obstacles.discs {
        if inside && key == Key::Body(body) {
            continue;
        }
        let own = key == Key::Body(body);
        // On a large disc, names of what is in front of it are welcome.
        if !own && radius > LARGE * frame.label {
            continue;
        }
        clear = clear.min(rect.gap_to_disc(at, radius) + if own { 0.3 * frame.label } else { 0.0 });
    }
    clear
}

/// A label in a frame.
#[derive(Debug, Clone, PartialEq)]
pub struct Placed {
    /// Its block.
    pub block: Block,
    /// The box of its ink.
    pub rect: Rect,
    /// Which way its lines lean: 0 left, 1 right.
    pub lean: f64,
    /// 0 unseen, 1 in full.
    pub opacity: f64,
}

/// The labels of a frame between two instants at which places were decided; `share` of the way has passed.
pub fn place(
    blocks: &[Block],
    earlier: &[Standing],
    later: &[Standing],
    share: f64,
    obstacles: &Obstacles,
    frame: &Frame,
) -> Vec<Placed> {
    let mut taken: Vec<Rect> = Vec::new();
    let mut placed = Vec::with_capacity(blocks.len());
    for block in blocks {
        let find = |standings: &[Standing]| standings.iter().find(|s| s.key == block.key).copied();
        let (Some(a), Some(b)) =
            (find(earlier).or_else(|| find(later)), find(later).or_else(|| find(earlier)))
        else {
            continue;
        };
        let go = |from: f64, to: f64| from + (to - from) * share;
        let offset = [go(a.offset[0], b.offset[0]), go(a.offset[1], b.offset[1])];
        let middle = [block.at[0] + offset[0], block.at[1] + offset[1]];
        let rect = ink_box(middle, block.size(frame), frame);
        let inside = a.place == INSIDE || b.place == INSIDE;
        let clear = clearance(&rect, block.key, inside, obstacles, &taken, frame);
        // What slides past something more important fades before it touches it.
        let share = (clear / (0.08 * frame.label)).clamp(0.0, 1.0);
        let opacity = share * share * (3.0 - 2.0 * share) * go(a.opacity, b.opacity);
        if opacity > 0.02 {
            taken.push(rect);
            placed.push(Placed { block: block.clone(), rect, lean: go(a.lean, b.lean), opacity });
        }
    }
    placed
}

/// Draws labels.
pub fn draw(scene: &mut Scene<'_>, placed: &[Placed]) {
    let size = scene.frame.label;
    let lead = line_height(&scene.frame);
    for label in placed {
        let top = label.rect.middle()[1] - 0.5 * lead * number_from(label.block.lines.len());
        for (i, line) in label.block.lines.iter().enumerate() {
            let colour = look::fade(line.colour, label.opacity);
            let words = Words { text: &line.text, size, weight: line.weight, colour };
            let room = label.rect.width() - words.width();
            // Capitals are two thirds of the size: their middle is the line's middle.
            let baseline = top + lead * (number_from(i) + 0.5) + 0.5 * super::type_metrics::CAP_HEIGHT * size;
            let at = [label.rect.left + room * label.lean, baseline];
            scene.add_text(line.tag, at, Anchor::Start, &words);
        }
    }
}

/// The discs that labels keep clear of.
pub fn discs(spots: &[Spot]) -> Vec<(usize, Px, f64)> {
    spots.iter().map(|s| (s.body.0, s.at, s.radius)).collect()
}
