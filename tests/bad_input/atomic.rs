use std::fs::{self, File};
use std::os::unix::fs::{PermissionsExt, symlink};
use std::path::Path;

use gatemix::files::atomic::{create, write};

fn mode(path: &Path) -> u32 {
    fs::metadata(path).unwrap().permissions().mode() & 0o777
}

fn names(folder: &Path) -> Vec<String> {
    let name = |entry: std::io::Result<fs::DirEntry>| entry.unwrap().file_name().into_string().unwrap();
    let mut names: Vec<_> = fs::read_dir(folder).unwrap().map(name).collect();
    names.sort();
    names
}

#[test]
fn scenario_a_new_file_is_whole_and_readable_like_any_other() {
    let folder = tempfile::tempdir().unwrap();
    let (ours, plain) = (folder.path().join("note.md"), folder.path().join("plain"));
    write(&ours, b"release 40 m3/s\n").unwrap();
    File::create(&plain).unwrap();
    assert_eq!((fs::read(&ours).unwrap(), mode(&ours)), (b"release 40 m3/s\n".to_vec(), mode(&plain)));
    assert_eq!(names(folder.path()), ["note.md", "plain"]);
}

#[test]
fn scenario_an_existing_file_keeps_its_permissions() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("site.yaml");
    fs::write(&path, "old and longer").unwrap();
    for bits in [0o640, 0o666, 0o755] {
        fs::set_permissions(&path, fs::Permissions::from_mode(bits)).unwrap();
        write(&path, b"new").unwrap();
        assert_eq!((fs::read(&path).unwrap(), mode(&path)), (b"new".to_vec(), bits));
    }
}

#[test]
fn scenario_a_link_stays_a_link() {
    let folder = tempfile::tempdir().unwrap();
    let at = |name: &str| folder.path().join(name);
    fs::create_dir(at("real")).unwrap();
    fs::write(at("real/site.yaml"), "old").unwrap();
    symlink("real/site.yaml", at("link")).unwrap();
    symlink("link", at("link-to-link")).unwrap();
    symlink("real/none-yet.yaml", at("dangling")).unwrap();
    write(&at("link-to-link"), b"new").unwrap();
    write(&at("dangling"), b"first").unwrap();
    assert_eq!(fs::read(at("real/site.yaml")).unwrap(), b"new");
    assert_eq!(fs::read(at("real/none-yet.yaml")).unwrap(), b"first");
    assert_eq!(fs::read_link(at("link-to-link")).unwrap(), Path::new("link"));
    assert_eq!(names(folder.path()), ["dangling", "link", "link-to-link", "real"]);
}

#[test]
fn scenario_a_failure_leaves_everything_as_it_was() {
    let folder = tempfile::tempdir().unwrap();
    let at = |name: &str| folder.path().join(name);
    fs::write(at("plain"), "kept").unwrap();
    fs::write(at("protected"), "kept").unwrap();
    fs::set_permissions(at("protected"), fs::Permissions::from_mode(0o444)).unwrap();
    symlink("ring", at("ring")).unwrap();
    let said = |path: &Path| write(path, b"new").unwrap_err().to_string();
    let check = "; check that the folder exists, has room and may be written to";
    for path in [at("plain/inside"), at("no-folder/file")] {
        let said = said(&path);
        assert!(said.contains(": refused: cannot be written: ") && said.ends_with(check), "{said}");
    }
    assert!(
        said(&at("ring")).ends_with(&format!("refused: cannot be written: too many symbolic links{check}"))
    );
    for path in [folder.path(), Path::new("/dev/null")] {
        let words = "refused: cannot be written: this is a folder, a pipe or a device; name an ordinary file";
        assert_eq!(said(path), format!("{}: {words}", path.display()));
    }
    let words =
        "refused: cannot be written: the file is write-protected; lift the protection or name another file";
    assert_eq!(said(&at("protected")), format!("{}: {words}", at("protected").display()));
    assert_eq!(fs::read(at("protected")).unwrap(), b"kept");
    assert_eq!(fs::read(at("plain")).unwrap(), b"kept");
    assert_eq!(names(folder.path()), ["plain", "protected", "ring"]);
}

#[test]
fn scenario_a_name_that_is_taken_is_not_written_to() {
    let folder = tempfile::tempdir().unwrap();
    let at = |name: &str| folder.path().join(name);
    create(&at("new"), b"first").unwrap();
    File::create(at("plain")).unwrap();
    assert_eq!((fs::read(at("new")).unwrap(), mode(&at("new"))), (b"first".to_vec(), mode(&at("plain"))));
    symlink("nowhere", at("dangling")).unwrap();
    fs::create_dir(at("folder")).unwrap();
    for name in ["new", "dangling", "folder"] {
        assert_eq!(create(&at(name), b"second").unwrap_err().kind, "exists", "{name}");
    }
    assert_eq!(create(&at("none/such"), b"second").unwrap_err().kind, "cannot-write");
    assert_eq!(fs::read(at("new")).unwrap(), b"first");
    assert_eq!(names(folder.path()), ["dangling", "folder", "new", "plain"]);
}
