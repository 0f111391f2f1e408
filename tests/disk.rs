//! Saving, autosave and pictures: nothing is lost, and nothing that lies on a disk stops the program.

use foldwright::file::{
    Artwork, Autosave, DataFolder, OpenError, PictureError, Recoverable, SaveError, builtin,
    builtin_names, fingerprint, open_pack, read_pack, save_atomic, save_pack,
};
use foldwright::level::Picture;
use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

const PACK: &str = "(format: 1, name: \"P\", control: Steer, grounds: {\"g\": ()}, legend: (grounds: {'.': \"g\"}), levels: [(name: \"L\", ground: [\"..\"])])";

fn folder() -> tempfile::TempDir {
    tempfile::tempdir().expect("a temporary folder")
}

fn names_in(folder: &Path) -> Vec<String> {
    let entries = fs::read_dir(folder).expect("readable");
    let mut names: Vec<String> = entries
        .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
        .collect();
    names.sort();
    names
}

#[test]
fn a_save_replaces_the_file_and_leaves_nothing_else_behind() {
    let folder = folder();
    let path = folder.path().join("a.pack.ron");
    save_atomic(&path, "one").expect("saved");
    let print = save_atomic(&path, "two, longer").expect("saved");
    assert_eq!(fs::read_to_string(&path).expect("there"), "two, longer");
    assert_eq!(names_in(folder.path()), ["a.pack.ron"]);
    assert_eq!(print, fingerprint(&path).expect("there"));
}

#[test]
fn a_pack_is_saved_and_opened_again() {
    let folder = folder();
    let path = folder.path().join("a.pack.ron");
    let pack = read_pack(PACK.as_bytes()).expect("a good pack").pack;
    let print = save_pack(&path, &pack, "// Mine.\n").expect("saved");
    let opened = open_pack(&path).expect("opens");
    assert_eq!(opened.read.pack.levels, pack.levels);
    assert_eq!(opened.read.preamble, "// Mine.\n");
    assert_eq!(opened.fingerprint, print);
}

#[test]
fn what_cannot_be_opened_is_named_with_its_file() {
    let folder = folder();
    let gone = open_pack(&folder.path().join("gone.pack.ron")).expect_err("no file");
    assert!(
        matches!(&gone, OpenError::Unreadable { reason, .. } if reason.contains("no such file"))
    );
    let inside = open_pack(folder.path()).expect_err("a folder");
    assert!(inside.to_string().contains("folder"), "{inside}");
    let bad = folder.path().join("bad.pack.ron");
    fs::write(&bad, "(format: 1,\n  nam: 2)").expect("written");
    let bad_line = open_pack(&bad).expect_err("no pack").to_string();
    let start = format!("{}:2:3: There is no field nam", bad.display());
    assert!(bad_line.starts_with(&start), "{bad_line}");
}

#[test]
fn a_change_by_others_is_noticed_and_a_touch_is_not_one() {
    let folder = folder();
    let path = folder.path().join("a.pack.ron");
    let print = save_atomic(&path, "one").expect("saved");
    assert!(print.still_holds(&path).expect("readable"));
    let file = fs::File::options().append(true).open(&path).expect("opens");
    file.set_modified(std::time::SystemTime::UNIX_EPOCH)
        .expect("touched");
    assert!(print.still_holds(&path).expect("readable"));
    fs::write(&path, "two").expect("written");
    file.set_modified(std::time::SystemTime::UNIX_EPOCH)
        .expect("touched");
    assert!(!print.still_holds(&path).expect("readable"));
    fs::remove_file(&path).expect("removed");
    assert!(print.still_holds(&path).is_err());
}

#[cfg(unix)]
#[test]
fn permissions_and_links_survive_a_save() {
    use std::os::unix::fs::{PermissionsExt, symlink};
    let folder = folder();
    let (real, link) = (folder.path().join("real"), folder.path().join("link"));
    fs::write(&real, "one").expect("written");
    fs::set_permissions(&real, fs::Permissions::from_mode(0o640)).expect("set");
    symlink("real", &link).expect("linked");
    save_atomic(&link, "two").expect("saved");
    assert_eq!(fs::read_to_string(&real).expect("there"), "two");
    assert!(fs::symlink_metadata(&link).expect("there").is_symlink());
    assert_eq!(
        fs::metadata(&real).expect("there").permissions().mode() & 0o777,
        0o640
    );
    let (new, plain) = (folder.path().join("new"), folder.path().join("plain"));
    save_atomic(&new, "x").expect("saved");
    fs::write(&plain, "x").expect("written");
    let mode = |path: &Path| fs::metadata(path).expect("there").permissions().mode();
    assert_eq!(mode(&new), mode(&plain));
}

#[test]
fn a_failed_save_says_why_and_leaves_the_file_alone() {
    let folder = folder();
    let path = folder.path().join("a.pack.ron");
    fs::write(&path, "old").expect("written");
    let mut permissions = fs::metadata(&path).expect("there").permissions();
    permissions.set_readonly(true);
    fs::set_permissions(&path, permissions).expect("set");
    assert!(matches!(
        save_atomic(&path, "new"),
        Err(SaveError::ReadOnlyFile(_))
    ));
    assert_eq!(fs::read_to_string(&path).expect("there"), "old");
    assert!(matches!(
        save_atomic(folder.path(), "new"),
        Err(SaveError::NoFile(_))
    ));
    let nowhere = folder.path().join("no").join("where");
    assert!(matches!(
        save_atomic(&nowhere, "new"),
        Err(SaveError::NoFolder(_))
    ));
    let below_a_file = path.join("x");
    assert!(matches!(
        save_atomic(&below_a_file, "new"),
        Err(SaveError::NoFolder(_))
    ));
    assert_eq!(names_in(folder.path()), ["a.pack.ron"]);
}

#[cfg(target_os = "linux")]
#[test]
fn a_folder_that_takes_no_file_is_said_to_be_read_only() {
    // Nobody, the superuser included, can make files here.
    let error = save_atomic(Path::new("/proc/a.pack.ron"), "new").expect_err("not saved");
    let text = error.to_string();
    assert!(text.contains("/proc") && text.contains("folder"), "{text}");
}

#[test]
fn an_autosave_is_found_once_its_desk_is_gone() {
    let folder = folder();
    let data = DataFolder::at(folder.path().join("data"));
    assert_eq!(Recoverable::list(&data), []);
    let original = folder.path().join("a.pack.ron");
    let mut desk = Autosave::begin(&data);
    desk.write("one", Some(&original)).expect("written");
    desk.write("two \"quoted\"\n", Some(&original))
        .expect("written");
    assert_eq!(Recoverable::list(&data), [], "the desk still runs");
    drop(desk);
    let found = Recoverable::list(&data);
    assert_eq!(found.len(), 1);
    assert_eq!(found[0].text, "two \"quoted\"\n");
    assert_eq!(found[0].original.as_deref(), Some(original.as_path()));
    found[0].discard();
    assert_eq!(Recoverable::list(&data), []);
    assert_eq!(names_in(&data.path().join("autosave")), [""; 0]);
}

#[test]
fn an_autosave_that_was_removed_leaves_nothing() {
    let folder = folder();
    let data = DataFolder::at(folder.path());
    let mut desk = Autosave::begin(&data);
    desk.remove();
    desk.write("one", None).expect("written");
    desk.remove();
    assert_eq!(names_in(&data.path().join("autosave")), [""; 0]);
    drop(desk);
    assert_eq!(Recoverable::list(&data), []);
}

#[test]
fn damaged_files_of_the_program_cost_nothing_but_themselves() {
    let folder = folder();
    let data = DataFolder::at(folder.path());
    fs::create_dir(folder.path().join("autosave")).expect("made");
    for (name, content) in [
        ("recent.ron", "[1, \0"),
        ("settings.ron", "\u{1}"),
        ("autosave/x.ron", "(text: "),
    ] {
        fs::write(folder.path().join(name), content).expect("written");
    }
    fs::write(folder.path().join("autosave/y.ron"), [0xff, 0xfe]).expect("written");
    assert_eq!(data.recent(), [""; 0].map(std::path::PathBuf::from));
    assert_eq!(
        data.load::<BTreeMap<String, u32>>("settings"),
        BTreeMap::new()
    );
    assert_eq!(Recoverable::list(&data), []);
    assert!(folder.path().join("autosave/x.ron").exists());
    let blocked = DataFolder::at(folder.path().join("recent.ron"));
    assert!(blocked.note_recent(Path::new("x")).is_err());
    assert!(Autosave::begin(&blocked).write("x", None).is_err());
}

#[test]
fn settings_and_recent_packs_are_kept() {
    let folder = folder();
    let data = DataFolder::at(folder.path().join("deep/er"));
    let settings = BTreeMap::from([("scale".to_owned(), 125u32)]);
    data.store("settings", &settings).expect("stored");
    assert_eq!(data.load::<BTreeMap<String, u32>>("settings"), settings);
    let packs: Vec<_> = (0..14)
        .map(|at| folder.path().join(format!("{at}.pack.ron")))
        .collect();
    for path in &packs {
        fs::write(path, "x").expect("written");
        data.note_recent(path).expect("noted");
    }
    data.note_recent(&packs[5]).expect("noted");
    fs::remove_file(&packs[13]).expect("removed");
    let names: Vec<_> = data
        .recent()
        .iter()
        .filter_map(|path| path.file_stem()?.to_str().map(str::to_owned))
        .collect();
    assert_eq!(names.len(), 11);
    assert_eq!(names[..2], ["5.pack", "12.pack"]);
}

fn png_of(width: u32, height: u32) -> Vec<u8> {
    let image = image::RgbaImage::from_fn(width, height, |x, y| {
        if x < width / 2 && y < height / 2 {
            image::Rgba([255, 0, 0, 255])
        } else {
            image::Rgba([0, 0, 255, 128])
        }
    });
    let mut bytes = std::io::Cursor::new(Vec::new());
    image
        .write_to(&mut bytes, image::ImageFormat::Png)
        .expect("encoded");
    bytes.into_inner()
}

#[test]
fn every_built_in_picture_can_be_drawn() {
    assert!(builtin_names().count() > 20);
    for name in builtin_names() {
        let art = Artwork::from_bytes(builtin(name).expect("named"))
            .unwrap_or_else(|error| panic!("{name}: {error}"));
        let pixels = art.draw(32, 0).expect("drawn");
        assert_eq!(pixels.rgba.len(), 32 * 32 * 4);
        assert!(
            pixels.rgba.chunks(4).any(|pixel| pixel[3] > 0),
            "{name} is empty"
        );
    }
}

#[test]
fn pixel_art_stays_sharp_and_turns() {
    let art = Artwork::from_bytes(&png_of(4, 4)).expect("a picture");
    let pixels = art.draw(40, 0).expect("drawn");
    let colours: std::collections::BTreeSet<&[u8]> = pixels.rgba.chunks(4).collect();
    assert_eq!(colours.len(), 2);
    let red_at = |turns: u8, x: usize, y: usize| {
        let pixels = art.draw(40, turns).expect("drawn");
        pixels.rgba[(y * 40 + x) * 4..][..4] == [255, 0, 0, 255]
    };
    assert!(
        red_at(0, 5, 5)
            && red_at(1, 35, 5)
            && red_at(2, 35, 35)
            && red_at(3, 5, 35)
            && !red_at(1, 5, 5)
    );
}

#[test]
fn a_tile_of_a_sheet_is_cut_out_and_one_beside_it_refused() {
    let folder = folder();
    fs::create_dir(folder.path().join("art")).expect("made");
    fs::write(folder.path().join("art/sheet.png"), png_of(32, 32)).expect("written");
    let picture = |tile, at| Picture {
        path: "art/sheet.png".into(),
        tile,
        at,
    };
    let open = |picture: &Picture| Artwork::open(folder.path(), picture);
    let red = open(&picture(Some((16, 16)), (0, 0)))
        .expect("a tile")
        .draw(16, 0)
        .expect("drawn");
    assert!(red.rgba.chunks(4).all(|pixel| pixel == [255, 0, 0, 255]));
    let blue = open(&picture(Some((16, 16)), (1, 1)))
        .expect("a tile")
        .draw(16, 0)
        .expect("drawn");
    assert!(blue.rgba.chunks(4).all(|pixel| pixel == [0, 0, 255, 128]));
    for (tile, at) in [
        ((16, 16), (2, 0)),
        ((0, 16), (0, 0)),
        ((33, 1), (0, 0)),
        ((u32::MAX, 1), (u32::MAX, 0)),
    ] {
        assert_eq!(
            open(&picture(Some(tile), at)).err(),
            Some(PictureError::NoTile(32, 32))
        );
    }
    let gone = Picture {
        path: "art/gone.png".into(),
        tile: None,
        at: (0, 0),
    };
    assert!(matches!(
        open(&gone).err(),
        Some(PictureError::Unreadable(..))
    ));
}

/// A PNG whose header gives this size, with the pixels of a much smaller one.
fn png_header(width: u32, height: u32) -> Vec<u8> {
    let mut bytes = png_of(1, 1);
    bytes[16..20].copy_from_slice(&width.to_be_bytes());
    bytes[20..24].copy_from_slice(&height.to_be_bytes());
    // The checksum of the header, by its definition: the remainder of its type and content, bits reflected.
    let remainder = bytes[12..29].iter().fold(u32::MAX, |remainder, &byte| {
        (0..8).fold(remainder ^ u32::from(byte), |r, _| {
            (r >> 1) ^ (0xedb8_8320 * (r & 1))
        })
    });
    bytes[29..33].copy_from_slice(&(!remainder).to_be_bytes());
    bytes
}

#[test]
fn pictures_beyond_the_limits_are_refused() {
    let refusal = |bytes: &[u8]| Artwork::from_bytes(bytes).err();
    assert_eq!(png_header(1, 1), png_of(1, 1));
    assert_eq!(
        refusal(&png_header(20_000, 10_000)),
        Some(PictureError::TooLarge)
    );
    assert_eq!(
        refusal(b"GIF89a\x01\0\x01\0\0\0\0;"),
        Some(PictureError::Animated)
    );
    assert_eq!(refusal(&vec![b' '; 33 << 20]), Some(PictureError::TooLarge));
    let svg = |inside: &str| {
        format!("<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"8\" height=\"8\">{inside}</svg>")
    };
    let deep = svg(&format!(
        "{}{}",
        "<g>".repeat(100_000),
        "</g>".repeat(100_000)
    ));
    assert_eq!(refusal(deep.as_bytes()), Some(PictureError::TooInvolved));
    let clones: String = (1..60)
        .map(|at| {
            format!(
                "<g id=\"a{at}\"><use href=\"#a{0}\"/><use href=\"#a{0}\"/></g>",
                at - 1
            )
        })
        .collect();
    assert_eq!(
        refusal(svg(&clones).as_bytes()),
        Some(PictureError::TooInvolved)
    );
    for bytes in [
        &b""[..],
        b"\0",
        b"<svg",
        b"\x89PNG\r\n\x1a\n",
        b"BM\0\0",
        &[0xff; 64],
    ] {
        assert!(refusal(bytes).is_some(), "{bytes:?}");
    }
    let art =
        Artwork::from_bytes(svg("<rect width=\"8\" height=\"8\"/>").as_bytes()).expect("a picture");
    assert_eq!(art.draw(0, 0), Err(PictureError::TooLarge));
    assert_eq!(art.draw(4_001, 0), Err(PictureError::TooLarge));
    let long = Artwork::from_bytes(&png_of(1, 4_000)).expect("a picture");
    assert_eq!(long.draw(16, 0).expect("drawn").rgba.len(), 16 * 16 * 4);
}
