//! What a frame of the desk costs without painting: a 64 x 64 level, heat on, the search running beside it.
//!
//! `cargo bench --bench frame` prints median, 95th in 100 and greatest time of a frame for three situations: nothing
//! happens, the pointer moves over the board, the pointer paints a stroke (so that the level changes and is asked about in
//! each frame).

use egui::{Context, Event, Modifiers, PointerButton, RawInput, Rect, pos2, vec2};
use foldwright::desk::Desk;
use foldwright::desk::action::Action;
use foldwright::desk::state::{Settings, ShowFlag};
use foldwright::file::read_pack;
use foldwright::level::{BodyIx, Cell, GroundIx, Level, Pack, Size};
use rand::rngs::StdRng;
use rand::{Rng, SeedableRng};
use std::sync::Arc;
use std::time::Instant;

const SEED: u64 = 20_261_201;
const FRAMES: usize = 300;

fn main() {
    let ctx = Context::default();
    let mut desk = Desk::new(&ctx, large_pack(), None, Settings::default());
    desk.state.execute(Action::Toggle(ShowFlag::Heat));
    for _ in 0..60 {
        frame(&ctx, &mut desk, Vec::new());
    }
    report("nothing happens", &ctx, &mut desk, |_| Vec::new());
    report("the pointer moves", &ctx, &mut desk, |at| {
        vec![Event::PointerMoved(pointer(at))]
    });
    frame(&ctx, &mut desk, vec![button(true)]);
    report("the pointer paints", &ctx, &mut desk, |at| {
        vec![Event::PointerMoved(pointer(at))]
    });
    frame(&ctx, &mut desk, vec![button(false)]);
}

fn pointer(at: usize) -> egui::Pos2 {
    pos2(
        400.0 + (at % 40) as f32 * 9.0,
        100.0 + (at / 40) as f32 * 9.0,
    )
}

fn button(pressed: bool) -> Event {
    Event::PointerButton {
        pos: pointer(0),
        button: PointerButton::Primary,
        pressed,
        modifiers: Modifiers::NONE,
    }
}

fn frame(ctx: &Context, desk: &mut Desk, events: Vec<Event>) -> f64 {
    let input = RawInput {
        screen_rect: Some(Rect::from_min_size(pos2(0.0, 0.0), vec2(1440.0, 900.0))),
        focused: true,
        events,
        ..RawInput::default()
    };
    let since = Instant::now();
    let output = ctx.run_ui(input, |ui| desk.ui(ui));
    let spent = since.elapsed().as_secs_f64() * 1e3;
    output.drop_without_applying_deltas();
    spent
}

fn report(name: &str, ctx: &Context, desk: &mut Desk, mut events: impl FnMut(usize) -> Vec<Event>) {
    let mut times: Vec<f64> = (0..FRAMES).map(|at| frame(ctx, desk, events(at))).collect();
    times.sort_by(f64::total_cmp);
    println!(
        "{name:20} median {:6.2} ms   95th in 100 {:6.2} ms   greatest {:6.2} ms",
        times[FRAMES / 2],
        times[FRAMES * 95 / 100],
        times[FRAMES - 1]
    );
}

/// The kinds of the sample pack with one level of 64 x 64: hedges at random, twelve planters and as many beds.
fn large_pack() -> Pack {
    let text = include_bytes!("../sample-levels/night-greenhouse.pack.ron");
    let mut pack = read_pack(text).expect("the sample pack is sound").pack;
    let size = Size::new(64, 64).expect("a size");
    let mut random = StdRng::seed_from_u64(SEED);
    let mut level = Level::filled("large", size, GroundIx(0));
    for cell in size.cells() {
        let edge = cell.x == 0 || cell.y == 0 || cell.x == 63 || cell.y == 63;
        if edge || random.random_bool(0.2) {
            level.ground[size.index(cell)] = GroundIx(1);
        }
    }
    for at in 0..13_u8 {
        let cell = Cell::new(random.random_range(2..62), 2 + at * 4);
        let home = Cell::new(random.random_range(2..62), 4 + at * 4);
        level.ground[size.index(cell)] = GroundIx(0);
        level.bodies[size.index(cell)] = Some(BodyIx(u16::from(at > 0)));
        if at > 0 {
            level.ground[size.index(home)] = GroundIx(2);
        }
    }
    pack.levels = vec![Arc::new(level)];
    pack
}
