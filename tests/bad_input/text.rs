use std::cell::Cell;
use std::fs::{self, File};
use std::io::{self, Read, Write};
use std::os::fd::AsRawFd;
use std::path::Path;
use std::process::Command;

use gatemix::files::text::{CSV_CAP, Encoding, Format, YAML_CAP, decode, read, read_from};

fn refused(path: &Path, format: Format) -> String {
    read(path, format).unwrap_err().to_string()
}

#[test]
fn scenario_a_path_that_cannot_be_read_says_why() {
    let folder = tempfile::tempdir().unwrap();
    let missing = folder.path().join("site.yaml");
    let said = refused(&missing, Format::Yaml);
    assert_eq!(
        said,
        format!("{}: refused: there is no such file; check the name and the folder", missing.display())
    );

    let said = refused(folder.path(), Format::Yaml);
    assert!(said.ends_with("refused: this is a folder, not a file; name a file inside it"), "{said}");

    fs::write(folder.path().join("plain"), "x").unwrap();
    let said = refused(&folder.path().join("plain").join("site.yaml"), Format::Yaml);
    assert!(
        said.contains("refused: cannot be read: ") && said.ends_with("; check that you may read it"),
        "{said}"
    );
}

#[test]
fn scenario_a_pipe_or_device_named_as_a_file_is_refused_without_waiting() {
    let folder = tempfile::tempdir().unwrap();
    let pipe = folder.path().join("cast.csv");
    assert!(Command::new("mkfifo").arg(&pipe).status().unwrap().success());
    let expected = "refused: this is a pipe or a device, not a file; copy the data into an ordinary file, \
                    or pipe it in and name the file -";
    for path in [pipe.as_path(), Path::new("/dev/zero")] {
        let said = refused(path, Format::Csv);
        assert!(said.ends_with(expected), "{said}");
    }
}

#[test]
fn scenario_an_open_stream_can_be_named_by_its_number() {
    let (reader, mut writer) = io::pipe().unwrap();
    writer.write_all(b"depth_m\n1\n").unwrap();
    drop(writer);
    let path = format!("/dev/fd/{}", reader.as_raw_fd());
    assert_eq!(read(Path::new(&path), Format::Csv).unwrap().text, "depth_m\n1\n");
}

#[test]
fn scenario_a_sparse_file_of_200_mb_is_refused_by_its_size() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("huge.csv");
    File::create(&path).unwrap().set_len(200 << 20).unwrap();
    let said = refused(&path, Format::Csv);
    let expected = "refused: this is larger than 64 MiB; \
                    check that this is the right file, or export a shorter stretch of time";
    assert!(said.ends_with(expected), "{said}");
    let said = refused(&path, Format::Yaml);
    let expected = "refused: this is larger than 4 MiB; \
                    check that this is the site file; it is a few kilobytes as a rule";
    assert!(said.ends_with(expected), "{said}");
}

struct Counting<'c>(&'c Cell<u64>);

impl Read for Counting<'_> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        buffer.fill(b'1');
        self.0.set(self.0.get() + buffer.len() as u64);
        Ok(buffer.len())
    }
}

#[test]
fn law_an_endless_stream_is_read_one_byte_past_the_cap_and_no_more() {
    for (format, cap) in [(Format::Yaml, YAML_CAP), (Format::Csv, CSV_CAP)] {
        let taken = Cell::new(0);
        let problem = read_from("standard input", Counting(&taken), format).unwrap_err();
        assert_eq!((problem.kind, taken.get()), ("too-large", cap + 1));
        assert_eq!(problem.place.file.as_deref(), Some("standard input"));
    }
    let exact = read_from("x", io::repeat(b'a').take(YAML_CAP), Format::Yaml).unwrap();
    assert_eq!(exact.text.len() as u64, YAML_CAP);
}

struct Broken;

impl Read for Broken {
    fn read(&mut self, _: &mut [u8]) -> io::Result<usize> {
        Err(io::Error::other("the line went dead"))
    }
}

#[test]
fn scenario_a_stream_that_breaks_off_is_unreadable() {
    let said = read_from("standard input", Broken, Format::Csv).unwrap_err().to_string();
    assert_eq!(
        said,
        "standard input: refused: cannot be read: the line went dead; check that you may read it"
    );
}

#[test]
fn scenario_nothing_and_blanks_are_empty() {
    for bytes in ["".as_bytes(), b" \r\n\t\n", b"\xef\xbb\xbf", b"\xff\xfe"] {
        let said = decode(bytes, Format::Csv).unwrap_err().to_string();
        assert_eq!(said, "refused: there is nothing in it; export the data as CSV text (UTF-8)", "{bytes:?}");
    }
}

#[test]
fn scenario_binary_files_are_named_for_what_they_are() {
    let known: [(&[u8], &str); 5] = [
        (b"PK\x03\x04rest", "this is a zip archive, as spreadsheets save their workbooks, not text"),
        (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "this is an old spreadsheet or document file, not text"),
        (b"%PDF-1.7", "this is a PDF document, not text"),
        (b"\x1f\x8b\x08", "this is a compressed file, not text"),
        (b"\xff\xfea\0b", "this starts like UTF-16 text but does not go on like it"),
    ];
    for (bytes, words) in known {
        let said = decode(bytes, Format::Csv).unwrap_err().to_string();
        assert_eq!(said, format!("refused: {words}; export the data as CSV text (UTF-8)"));
    }
    for bytes in
        [b"depth_m\0,temperature_C\n1,2\n".as_slice(), b"\x01\x02\x03abc", b"\x89\x90\x01\x02\x03\x04"]
    {
        let said = decode(bytes, Format::Yaml).unwrap_err().to_string();
        assert_eq!(said, "refused: this is binary data, not text; write the site file as plain YAML text");
    }
}

#[test]
fn scenario_encodings_of_logger_exports_give_the_same_text() {
    let text = "depth_m,temperature_°C\r\n0.5,21.3\r\n";
    let utf16 = |order: fn(u16) -> [u8; 2]| text.encode_utf16().flat_map(order).collect::<Vec<u8>>();
    let latin: Vec<u8> = text.chars().map(|c| u8::try_from(u32::from(c)).unwrap()).collect();
    let with_mark = |mark: &[u8], body: &[u8]| [mark, body].concat();
    let cases = [
        (text.as_bytes().to_vec(), Encoding::Utf8),
        (with_mark(b"\xef\xbb\xbf", text.as_bytes()), Encoding::Utf8),
        (utf16(u16::to_le_bytes), Encoding::Utf16Le),
        (with_mark(b"\xff\xfe", &utf16(u16::to_le_bytes)), Encoding::Utf16Le),
        (utf16(u16::to_be_bytes), Encoding::Utf16Be),
        (with_mark(b"\xfe\xff", &utf16(u16::to_be_bytes)), Encoding::Utf16Be),
        (latin, Encoding::Windows1252),
    ];
    for (bytes, encoding) in cases {
        assert_eq!(decode(&bytes, Format::Csv).unwrap(), (text.to_owned(), encoding));
    }
    assert_eq!(
        [Encoding::Utf8.name(), Encoding::Utf16Be.name(), Encoding::Windows1252.name()],
        ["UTF-8", "UTF-16", "Windows-1252"]
    );
}

#[test]
fn scenario_a_guessed_encoding_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("cast.csv");
    fs::write(&path, b"temp \xb0C\n12\n").unwrap();
    let source = read(&path, Format::Csv).unwrap();
    assert_eq!(
        (source.text.as_str(), source.bytes.as_slice()),
        ("temp °C\n12\n", b"temp \xb0C\n12\n".as_slice())
    );
    let said = source.note().unwrap().to_string();
    let words = "note: the bytes are not UTF-8 and were read as Windows-1252; check names and degree signs";
    assert!(said.ends_with(words), "{said}");
    fs::write(&path, "temp °C\n12\n").unwrap();
    assert_eq!(read(&path, Format::Csv).unwrap().note(), None);
}
