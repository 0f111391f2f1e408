//! How soon a running search ends when a newer wish comes: `cargo bench --bench cancel`. Wanted: within 5 ms.
//!
//! Boards of 64 x 64 and 40 x 40 with 30 cargo are searched by the real worker; at moments spread over the search it is told
//! to stop, and the time until its answer arrives is taken.

use foldwright::level::{
    BodyIx, BodyKind, Cell, Clause, Control, GroundIx, GroundKind, KindId, Legend, Level,
    Mechanics, Role, Size,
};
use foldwright::study::Prove;
use foldwright::worker::{Event, Request, Worker};
use std::sync::Arc;
use std::time::{Duration, Instant};

const ROUNDS: u64 = 60;

fn id(text: &str) -> KindId {
    KindId::new(text).expect("a good id")
}

fn mechanics() -> Mechanics {
    let mut hedge = GroundKind::plain(id("hedge"), "hedge");
    hedge.closed_to = vec![Role::Walker, Role::Cargo];
    let mut bed = GroundKind::plain(id("bed"), "bed");
    bed.home = vec![id("planter")];
    Mechanics {
        control: Control::Steer,
        strength: 1,
        objective: vec![Clause::HomesFilled],
        grounds: vec![GroundKind::plain(id("gravel"), "gravel"), hedge, bed],
        bodies: vec![
            BodyKind::plain(id("gardener"), "gardener", Role::Walker),
            BodyKind::plain(id("planter"), "planter", Role::Cargo),
        ],
        items: Vec::new(),
        legend: Legend::default(),
    }
}

/// A hall with pillars, 30 cargo at one end and 30 homes at the other; each round moves a pillar, so that nothing is
/// remembered.
fn level(side: u8, round: u64) -> Level {
    let size = Size::new(usize::from(side), usize::from(side)).expect("a good size");
    let mut level = Level::filled("hall", size, GroundIx(0));
    for cell in size.cells() {
        let border = cell.x == 0 || cell.y == 0 || cell.x + 1 == side || cell.y + 1 == side;
        if border || (cell.x % 9 == 4 && cell.y % 7 == 3) {
            level.ground[size.index(cell)] = GroundIx(1);
        }
    }
    let moved = Cell::new(2 + (round % 20) as u8, 2 + (round / 20) as u8);
    level.ground[size.index(moved)] = GroundIx(1);
    for at in 0..30_u8 {
        let (column, row) = (at % 6 * 3, at / 6 * 3);
        level.bodies[size.index(Cell::new(6 + column, 8 + row))] = Some(BodyIx(1));
        level.ground[size.index(Cell::new(side - 22 + column, side - 18 + row))] = GroundIx(2);
    }
    level.bodies[size.index(Cell::new(1, 1))] = Some(BodyIx(0));
    level
}

fn main() {
    for side in [64, 40] {
        println!("{side} x {side}, 30 cargo");
        time(side);
    }
}

fn time(side: u8) {
    let mechanics = Arc::new(mechanics());
    let mut worker = Worker::start(|| {});
    let mut waits = Vec::new();
    let mut first_events = Vec::new();
    for round in 0..ROUNDS {
        let asked = Instant::now();
        worker.ask(Request::Study {
            revision: round + 1,
            mechanics: Arc::clone(&mechanics),
            level: Arc::new(level(side, round)),
            prove: Prove::Steps,
            last_route: None,
            studies: false,
        });
        if worker.events().recv_timeout(Duration::from_secs(5)).is_ok() {
            first_events.push(asked.elapsed());
        }
        std::thread::sleep(Duration::from_millis(20 + round * 7 % 180));
        let told = Instant::now();
        worker.ask(Request::Stop);
        loop {
            let event = worker.events().recv_timeout(Duration::from_secs(30));
            if let Event::Answered { revision, .. } = event.expect("an answer")
                && revision == round + 1
            {
                break;
            }
        }
        waits.push(told.elapsed());
    }
    for (name, mut times) in [("first event", first_events), ("stop to answer", waits)] {
        times.sort();
        let at =
            |share: f64| times[((times.len() - 1) as f64 * share) as usize].as_secs_f64() * 1e3;
        let (median, most, worst) = (at(0.5), at(0.95), at(1.0));
        println!(
            "{name:<15} ms: median {median:.2}, p95 {most:.2}, max {worst:.2}, {} rounds",
            times.len()
        );
    }
}
