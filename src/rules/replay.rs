//! Routes played, and positions unpacked for people.

use super::tables::NONE;
use super::{Played, Position, Rules, Scratch, Step, View, ViewBody};
use crate::level::{BodyIx, Control, DragStep, GroundIx, ItemIx, Route};

impl Rules {
    /// The start unpacked for drawing.
    pub fn start_view(&self) -> View {
        self.view_of(&self.scratch(), &self.tables.numbers)
    }

    /// Any position unpacked for drawing. Bodies are numbered as at the start as far as that can be told from the position
    /// alone: interchangeable ones in reading order.
    pub fn view(&self, position: &Position) -> View {
        let mut scratch = self.scratch();
        self.load(&mut scratch, &position.0);
        self.view_of(&scratch, &self.tables.numbers)
    }

    fn view_of(&self, s: &Scratch, numbers: &[u16]) -> View {
        let tables = &self.tables;
        let mut bodies: Vec<ViewBody> = (0..s.at.len())
            .filter(|&slot| s.at[slot] != NONE)
            .map(|slot| ViewBody {
                kind: BodyIx(tables.bodies[slot].kind.0),
                cells: tables
                    .cells_of(slot, s.at[slot])
                    .map(|cell| tables.size.cell(usize::from(cell)))
                    .collect(),
                number: numbers[slot],
            })
            .collect();
        bodies.sort_by_key(|body| body.number);
        let mut items = vec![None; tables.size.area()];
        for (item, &left) in tables.items.iter().zip(&s.item_left) {
            items[usize::from(item.cell)] = left.then_some(ItemIx(item.kind));
        }
        let keys = tables.key_names.iter().zip(&s.keys);
        View {
            ground: s.ground.iter().map(|&ground| GroundIx(ground)).collect(),
            bodies,
            items,
            keys: keys
                .filter(|&(_, &held)| held > 0)
                .map(|(name, &held)| (name.clone(), held))
                .collect(),
        }
    }

    /// Plays a route from the start, step by step. Stops at the first step that changes nothing; the result then is shorter
    /// than the route. A route of the other control has no step that changes anything.
    pub fn play(&self, route: &Route) -> Vec<Played> {
        let mut scratch = self.scratch();
        let mut before = self.start();
        let mut played = Vec::with_capacity(route.len());
        for step in 0..route.len() {
            let moved = match route {
                Route::Steer(steps) if self.tables.control == Control::Steer => {
                    self.steer(&mut scratch, steps[step])
                }
                Route::Drag(steps) if self.tables.control == Control::Drag => {
                    let DragStep { block, dir } = steps[step];
                    let slot = self.tables.numbers.iter().position(|&known| known == block);
                    slot.is_some_and(|slot| self.drag(&mut scratch, slot as u16, dir))
                }
                _ => false,
            };
            let position = self.packed(&mut scratch);
            if !moved || position == before {
                break;
            }
            before.clone_from(&position);
            played.push(Played {
                position,
                view: self.view_of(&scratch, &self.tables.numbers),
                pushed: self.cargo_moved(&scratch),
            });
        }
        played
    }

    fn packed(&self, scratch: &mut Scratch) -> Position {
        let mut words = vec![0; self.words()].into_boxed_slice();
        self.pack(scratch, &mut words);
        Position(words)
    }

    /// The route, with numbered blocks, of steps made one after the other from the start. Ends before a step whose slot
    /// holds no block.
    pub fn route(&self, steps: &[Step]) -> Route {
        if self.tables.control == Control::Steer {
            return Route::Steer(steps.iter().map(|step| step.dir).collect());
        }
        let mut scratch = self.scratch();
        let mut route = Vec::with_capacity(steps.len());
        for &Step { slot, dir } in steps {
            let Some(slot) = self.slot_in_canonical_order(&scratch, slot) else {
                break;
            };
            let block = self.tables.numbers[slot];
            route.push(DragStep { block, dir });
            self.drag(&mut scratch, slot as u16, dir);
        }
        Route::Drag(route)
    }

    /// The slot of the scratch whose body is at place `wanted` once bodies are sorted within their classes.
    fn slot_in_canonical_order(&self, s: &Scratch, wanted: u16) -> Option<usize> {
        let wanted = usize::from(wanted);
        let class = usize::from(self.tables.bodies.get(wanted)?.class);
        let (first, end) = self.tables.classes[class].slots;
        let mut slots: Vec<usize> = (first..end).collect();
        slots.sort_by_key(|&slot| s.at[slot]);
        Some(slots[wanted - first])
    }
}
