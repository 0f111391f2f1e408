//! Cells, sizes and directions of a board.

use serde::{Deserialize, Serialize};

/// The greatest width and height of a board, in cells.
pub const MAX_SIDE: u8 = 64;

/// One of the four directions. `N` is towards smaller y, `E` towards greater x.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub enum Dir {
    /// Up, y - 1.
    N,
    /// Right, x + 1.
    E,
    /// Down, y + 1.
    S,
    /// Left, x - 1.
    W,
}

impl Dir {
    /// All four, in the order n, e, s, w.
    pub const ALL: [Dir; 4] = [Dir::N, Dir::E, Dir::S, Dir::W];

    /// The change of (x, y) that one cell in this direction makes.
    pub const fn delta(self) -> (i32, i32) {
        match self {
            Dir::N => (0, -1),
            Dir::E => (1, 0),
            Dir::S => (0, 1),
            Dir::W => (-1, 0),
        }
    }

    /// The direction that leads back.
    pub const fn opposite(self) -> Dir {
        match self {
            Dir::N => Dir::S,
            Dir::E => Dir::W,
            Dir::S => Dir::N,
            Dir::W => Dir::E,
        }
    }

    /// The small letter that stands for this direction in files and reports.
    pub const fn letter(self) -> char {
        match self {
            Dir::N => 'n',
            Dir::E => 'e',
            Dir::S => 's',
            Dir::W => 'w',
        }
    }

    /// The direction of a small letter, or `None` for any other character.
    pub const fn from_letter(letter: char) -> Option<Dir> {
        match letter {
            'n' => Some(Dir::N),
            'e' => Some(Dir::E),
            's' => Some(Dir::S),
            'w' => Some(Dir::W),
            _ => None,
        }
    }

    /// 0 to 3, in the order of [`Dir::ALL`].
    pub const fn index(self) -> usize {
        self as usize
    }
}

/// A cell of a board: column `x` from the left, row `y` from the top, both from 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, Default)]
pub struct Cell {
    /// Column, from 0 at the left.
    pub x: u8,
    /// Row, from 0 at the top.
    pub y: u8,
}

impl Cell {
    /// The cell in column `x` and row `y`.
    pub const fn new(x: u8, y: u8) -> Cell {
        Cell { x, y }
    }
}

/// Cells order row by row, as they are read.
impl Ord for Cell {
    fn cmp(&self, other: &Cell) -> std::cmp::Ordering {
        (self.y, self.x).cmp(&(other.y, other.x))
    }
}

impl PartialOrd for Cell {
    fn partial_cmp(&self, other: &Cell) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}

/// Width and height of a board, each from 1 to [`MAX_SIDE`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Size {
    width: u8,
    height: u8,
}

impl Size {
    /// A size, or `None` if a side is 0 or greater than [`MAX_SIDE`].
    pub fn new(width: usize, height: usize) -> Option<Size> {
        let fits = |side: usize| (1..=usize::from(MAX_SIDE)).contains(&side);
        (fits(width) && fits(height)).then_some(Size {
            width: width as u8,
            height: height as u8,
        })
    }

    /// Number of columns.
    pub const fn width(self) -> usize {
        self.width as usize
    }

    /// Number of rows.
    pub const fn height(self) -> usize {
        self.height as usize
    }

    /// Number of cells.
    pub const fn area(self) -> usize {
        self.width() * self.height()
    }

    /// The place of `cell` when cells are counted row by row. The cell must be on the board.
    pub const fn index(self, cell: Cell) -> usize {
        cell.y as usize * self.width() + cell.x as usize
    }

    /// The cell at place `index` of the row-by-row order.
    pub const fn cell(self, index: usize) -> Cell {
        Cell::new((index % self.width()) as u8, (index / self.width()) as u8)
    }

    /// Whether `cell` is on the board.
    pub const fn contains(self, cell: Cell) -> bool {
        cell.x < self.width && cell.y < self.height
    }

    /// The neighbour of `cell` in direction `dir`, or `None` off the board.
    pub fn neighbour(self, cell: Cell, dir: Dir) -> Option<Cell> {
        let (dx, dy) = dir.delta();
        let (x, y) = (i32::from(cell.x) + dx, i32::from(cell.y) + dy);
        let on_board =
            (0..i32::from(self.width)).contains(&x) && (0..i32::from(self.height)).contains(&y);
        on_board.then(|| Cell::new(x as u8, y as u8))
    }

    /// All cells, row by row.
    pub fn cells(self) -> impl Iterator<Item = Cell> {
        (0..self.area()).map(move |index| self.cell(index))
    }
}
