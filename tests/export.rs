//! Pictures, films and tables, through the real program.

use image::{AnimationDecoder, codecs::gif::GifDecoder};
use std::fs;
use std::io::Cursor;
use std::path::Path;
use std::process::{Command, Output, Stdio};

/// A corridor with two pushes to the east, a level that can't be finished, and one without a walker.
const PACK: &str = r##"(
    format: 1,
    name: "Walks",
    control: Steer,
    objective: [HomesFilled],
    grounds: {
        "gravel": (label: "gravel"),
        "sun-bed": (label: "sun bed", home: ["planter"]),
        "odd": (label: "odd", look: (shape: Full, fill: "#ff0000")),
        "own": (label: "own", look: (picture: "art/blue.png")),
        "lost": (label: "lost", look: (picture: "art/gone.png")),
    },
    bodies: {"gardener": (label: "gardener", role: Walker), "planter": (label: "planter", role: Cargo)},
    legend: (
        grounds: {'.': "gravel", 'o': "sun-bed", 'r': "odd", 'b': "own", 'l': "lost"},
        bodies: {'g': "gardener", 'p': "planter"},
    ),
    levels: [
        (name: "Corridor, \"short\"", ground: ["...o", "rbl."], bodies: ["gp--", "----"], intended: "een"),
        (name: "Stuck", ground: ["..o"], bodies: ["p-g"]),
        (name: "Nobody", ground: ["..o"], bodies: ["p--"], intended: "e"),
    ],
)
"##;

fn folder() -> tempfile::TempDir {
    let folder = tempfile::tempdir().expect("a temporary folder");
    fs::write(folder.path().join("a.pack.ron"), PACK).expect("written");
    fs::create_dir(folder.path().join("art")).expect("made");
    let blue = image::RgbaImage::from_pixel(4, 4, image::Rgba([0, 0, 255, 255]));
    blue.save(folder.path().join("art/blue.png"))
        .expect("written");
    folder
}

fn run(folder: &Path, words: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_foldwright"))
        .args(words)
        .current_dir(folder)
        .env_remove("RUST_LOG")
        .stdin(Stdio::null())
        .output()
        .expect("the program starts")
}

fn check(folder: &Path, words: &[&str], status: i32) -> String {
    let output = run(folder, &[&["export"], words].concat());
    let err = String::from_utf8(output.stderr).expect("text");
    assert_eq!(output.status.code(), Some(status), "{words:?}: {err}");
    err
}

#[test]
fn a_level_is_drawn_as_pixels_with_each_kind_in_its_place() {
    let folder = folder();
    let err = check(
        folder.path(),
        &[
            "picture",
            "a.pack.ron",
            "--level",
            "1",
            "--out",
            "x.png",
            "--cell",
            "20",
        ],
        0,
    );
    let image = image::open(folder.path().join("x.png"))
        .expect("a picture")
        .into_rgba8();
    assert_eq!(image.dimensions(), (80, 40));
    assert_eq!(image.get_pixel(10, 30).0, [255, 0, 0, 255]);
    assert_eq!(image.get_pixel(30, 30).0, [0, 0, 255, 255]);
    assert_ne!(
        image.get_pixel(10, 10),
        image.get_pixel(50, 10),
        "the gardener differs from gravel"
    );
    assert!(image.pixels().all(|pixel| pixel[3] == 255));
    assert!(
        err.contains("lost: The picture art/gone.png can't be read"),
        "{err}"
    );
}

#[test]
fn a_drawing_holds_every_picture_once_and_can_be_read() {
    let folder = folder();
    check(
        folder.path(),
        &[
            "picture",
            "a.pack.ron",
            "--level",
            "Corridor, \"short\"",
            "--out",
            "x.SVG",
        ],
        0,
    );
    let text = fs::read_to_string(folder.path().join("x.SVG")).expect("a drawing");
    assert_eq!(text.matches("<image ").count(), 7);
    assert_eq!(text.matches("<use ").count(), 10);
    assert_eq!(text.matches("data:image/png").count(), 1);
    let tree = resvg::usvg::Tree::from_str(&text, &resvg::usvg::Options::default())
        .expect("a good drawing");
    assert_eq!((tree.size().width(), tree.size().height()), (256.0, 128.0));
}

#[test]
fn a_shelf_of_pictures_is_numbered_in_playing_order() {
    let folder = folder();
    check(
        folder.path(),
        &["shelf", "a.pack.ron", "--out", "pictures"],
        0,
    );
    let mut names: Vec<String> = fs::read_dir(folder.path().join("pictures"))
        .expect("made")
        .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
        .collect();
    names.sort();
    assert_eq!(
        names,
        ["1-corridor-short.png", "2-stuck.png", "3-nobody.png"]
    );
}

#[test]
fn a_film_has_the_start_and_every_step() {
    let folder = folder();
    check(
        folder.path(),
        &[
            "film",
            "a.pack.ron",
            "--level",
            "1",
            "--out",
            "x.gif",
            "--cell",
            "16",
        ],
        0,
    );
    let bytes = fs::read(folder.path().join("x.gif")).expect("a film");
    let decoder = GifDecoder::new(Cursor::new(bytes)).expect("a film");
    let frames = decoder.into_frames().collect_frames().expect("frames");
    assert_eq!(frames.len(), 3);
    let sizes: Vec<_> = frames
        .iter()
        .map(|frame| frame.buffer().dimensions())
        .collect();
    assert_eq!(sizes, [(64, 32); 3]);
    let times: Vec<u32> = frames
        .iter()
        .map(|frame| frame.delay().numer_denom_ms().0)
        .collect();
    assert_eq!(times, [1_000, 250, 1_000]);
    assert_ne!(frames[0].buffer(), frames[1].buffer());
}

#[test]
fn what_cannot_be_shown_says_why() {
    let folder = folder();
    let film = |level: &str, more: &[&str], status: i32, words: &str| {
        let err = check(
            folder.path(),
            &[
                &["film", "a.pack.ron", "--level", level, "--out", "x.gif"],
                more,
            ]
            .concat(),
            status,
        );
        assert!(err.contains(words), "{err}");
        assert!(!folder.path().join("x.gif").exists());
    };
    film("Stuck", &[], 1, "can't be finished");
    film("Stuck", &["--intended"], 2, "no intended route");
    film("Nobody", &[], 1, "There is no walker");
    film(
        "1",
        &["--intended"],
        1,
        "Step 3 of the intended route changes nothing",
    );
    film("9", &[], 2, "no level \"9\"");
    film("1", &["--cell", "0"], 2, "--cell");
    let picture = |out: &str, words: &str| {
        let err = check(
            folder.path(),
            &["picture", "a.pack.ron", "--level", "1", "--out", out],
            2,
        );
        assert!(err.contains(words), "{err}");
    };
    picture("x.bmp", ".png or .svg");
    picture("no/where/x.png", "There is no folder");
    check(
        folder.path(),
        &["picture", "gone.pack.ron", "--level", "1", "--out", "x.png"],
        2,
    );
    check(folder.path(), &["table", "gone.pack.ron"], 2);
    check(folder.path(), &["painting"], 2);
}

#[test]
fn a_table_has_a_line_for_every_level() {
    let folder = folder();
    check(
        folder.path(),
        &["table", ".", "--prove", "both", "--out", "x.csv"],
        0,
    );
    let text = fs::read_to_string(folder.path().join("x.csv")).expect("a table");
    let lines: Vec<&str> = text.split_terminator("\r\n").collect();
    assert_eq!(lines.len(), 4);
    assert!(
        lines[1]
            .starts_with("./a.pack.ron,1,\"Corridor, \"\"short\"\"\",4,2,solvable,2,yes,2,yes,ee,"),
        "{text}"
    );
    assert!(
        lines[2].starts_with("./a.pack.ron,2,Stuck,3,1,unsolvable,,,,,,"),
        "{text}"
    );
    assert!(
        lines[3].contains(",3,Nobody,3,1,invalid,,,,,,,,There is no walker."),
        "{text}"
    );
    let output = run(folder.path(), &["export", "table", "."]);
    assert_eq!(
        output.stdout.iter().filter(|&&byte| byte == b'\n').count(),
        4
    );
}
