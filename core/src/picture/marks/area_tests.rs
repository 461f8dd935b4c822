use super::super::super::Screen;
use super::super::super::fixture::{self, AU, DAY};
use super::super::super::frame::Frame;
use super::super::super::geometry::clip_piece;
use super::super::super::layout::{LayoutKey, scene_at};
use super::super::super::scene::House;
use super::super::super::words::ENGLISH;
use super::*;

/// The fixture's comet at the far end of its way, where six sectors are needles.
fn far_out() -> crate::show::Show {
    let mut show = fixture::equal_areas();
    let from_s = fixture::FENN.tau_s + 0.5 * fixture::FENN_PERIOD_S - 60.0 * DAY;
    let until_s = from_s + 120.0 * DAY;
    show.plan.beats[0] = fixture::planned(from_s, until_s, 60.0);
    show.scenario.beats[0].view = fixture::view(0, [1.3 * AU, 0.0, 0.0], 6.0 * AU, 0.0);
    show
}

#[test]
fn all_areas_of_needles_are_seen_clear_of_each_other_of_the_tail_and_of_the_window() {
    let show = far_out();
    let beat = &show.scenario.beats[0];
    let planned = show.plan.beats[0];
    let key = LayoutKey { beat: 0, beat_from_s: planned.from_s, run_from_s: planned.from_s };
    for (w, h) in [(1920.0, 1080.0), (1280.0, 720.0), (1024.0, 768.0), (390.0, 844.0)] {
        let frame = Frame::new(Screen { width_px: w, height_px: h, density: 1.0 });
        for step in 0..=20 {
            let t_s = planned.from_s + (planned.until_s - planned.from_s) * f64::from(step) / 20.0;
            let house = House { frame, language: &ENGLISH };
            let scene = scene_at(&show, beat, key, house, t_s);
            let (mut sets, _) = areas_of(&scene);
            assert_eq!(sets.len(), 1);
            sets[0].settle(&scene, &[]);
            let labels = sets[0].labels(&scene);
            assert_eq!(labels.len(), 6, "{w}x{h}: {labels:?}");
            let tails: Vec<[Px; 2]> =
                tail::pieces(&scene, &scene.spots()).into_iter().flat_map(|t| t.1).collect();
            assert_eq!(tails.len(), 5);
            for (i, a) in labels.iter().enumerate() {
                assert!(frame.whole().encloses(&a.rect), "{w}x{h}: {:?}", a.rect);
                assert!(labels[..i].iter().all(|b| a.rect.gap(&b.rect) > 0.0), "{w}x{h}: {labels:?}");
                assert!(tails.iter().all(|[p, q]| clip_piece(*p, *q, &a.rect).is_none()), "{w}x{h}: {i}");
                assert!(a.leader.is_some(), "{w}x{h}: {i} stands far from its needle");
            }
        }
    }
}
