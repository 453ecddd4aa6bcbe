//! A file or standard input as text: bounded, decoded, refused with a cure where it is not text.

use std::borrow::Cow;
use std::fs::{self, File};
use std::io::{self, Read};
use std::path::Path;

use encoding_rs::{UTF_16BE, UTF_16LE, WINDOWS_1252};

use crate::problem::Problem;

/// Largest YAML file read, in bytes (choice: a site file is a few kilobytes).
pub const YAML_CAP: u64 = 4 << 20;
/// Largest CSV file read, in bytes (choice: a year of ten-minute rows is about 5 MB).
pub const CSV_CAP: u64 = 64 << 20;

/// What a file should hold; decides how much is read and what the cures say.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Format {
    /// A site file.
    Yaml,
    /// A cast, a weather file, a plan: rows and columns.
    Csv,
}

impl Format {
    /// Largest size read, in bytes.
    pub fn cap_bytes(self) -> u64 {
        match self {
            Self::Yaml => YAML_CAP,
            Self::Csv => CSV_CAP,
        }
    }

    fn wanted(self) -> &'static str {
        match self {
            Self::Yaml => "write the site file as plain YAML text",
            Self::Csv => "export the data as CSV text (UTF-8)",
        }
    }
}

/// How the bytes were turned into text.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Encoding {
    /// UTF-8, with or without byte order mark.
    Utf8,
    /// UTF-16, low byte first.
    Utf16Le,
    /// UTF-16, high byte first.
    Utf16Be,
    /// Windows-1252: taken where the bytes are text but not UTF-8, as older logger software writes.
    Windows1252,
}

impl Encoding {
    /// The usual name.
    pub fn name(self) -> &'static str {
        match self {
            Self::Utf8 => "UTF-8",
            Self::Utf16Le | Self::Utf16Be => "UTF-16",
            Self::Windows1252 => "Windows-1252",
        }
    }
}

/// The text of one input, with the bytes it came from (for the fingerprint of the inputs).
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Source {
    /// The file as the user named it, or `standard input`.
    pub name: String,
    /// The bytes as read.
    pub bytes: Vec<u8>,
    /// The text, without byte order mark.
    pub text: String,
    /// How the bytes were decoded.
    pub encoding: Encoding,
}

impl Source {
    /// A note for the reader where the encoding had to be guessed.
    pub fn note(&self) -> Option<Problem> {
        (self.encoding == Encoding::Windows1252).then(|| {
            let words = "the bytes are not UTF-8 and were read as Windows-1252; check names and degree signs";
            Problem::note("encoding", words).in_file(&self.name)
        })
    }
}

/// Reads a file, or standard input for `-`.
///
/// A named pipe or a device is read only where the path says that it stands for an open stream
/// (`/dev/stdin`, `/dev/fd/3`): opening any other pipe could wait for ever.
///
/// # Errors
/// One [`Problem`] naming the file: missing, a folder, not a regular file, unreadable, empty, larger
/// than the cap of `format`, or not text.
pub fn read(path: &Path, format: Format) -> Result<Source, Problem> {
    if path == Path::new("-") {
        return read_from("standard input", io::stdin().lock(), format);
    }
    let name = path.display().to_string();
    let failed = |error: &io::Error| unopened(error).in_file(&name);
    let about = fs::metadata(path).map_err(|e| failed(&e))?;
    if about.is_dir() {
        let cure = "name a file inside it";
        return Err(Problem::refused("folder", "this is a folder, not a file", cure).in_file(&name));
    }
    let stream = ["/dev/stdin", "/dev/fd/", "/proc/self/fd/"].iter().any(|open| name.starts_with(open));
    if !about.is_file() && !stream {
        let cure = "copy the data into an ordinary file, or pipe it in and name the file -";
        return Err(
            Problem::refused("not-a-file", "this is a pipe or a device, not a file", cure).in_file(&name)
        );
    }
    if about.is_file() && about.len() > format.cap_bytes() {
        return Err(too_large(format).in_file(&name));
    }
    let file = File::open(path).map_err(|e| failed(&e))?;
    read_from(&name, file, format)
}

/// Reads a stream to its end, at most one byte past the cap of `format`. `name` is for the problems.
///
/// # Errors
/// As [`read`].
pub fn read_from(name: &str, stream: impl Read, format: Format) -> Result<Source, Problem> {
    let mut bytes = Vec::new();
    let read = stream.take(format.cap_bytes() + 1).read_to_end(&mut bytes);
    let decoded = match read {
        Err(error) => Err(unopened(&error)),
        Ok(_) if bytes.len() as u64 > format.cap_bytes() => Err(too_large(format)),
        Ok(_) => decode(&bytes, format),
    };
    let (text, encoding) = decoded.map_err(|problem| problem.in_file(name))?;
    Ok(Source { name: name.to_owned(), bytes, text, encoding })
}

/// Turns bytes into text and says how.
///
/// # Errors
/// `empty` where there is nothing but blanks, `not-text` for binary data.
pub fn decode(bytes: &[u8], format: Format) -> Result<(String, Encoding), Problem> {
    if let Some(what) = known_binary(bytes) {
        let words = format!("this is {what}, not text");
        return Err(Problem::refused("not-text", words, format.wanted()));
    }
    let (text, encoding) = if let Some(body) = bytes.strip_prefix(&[0xff, 0xfe]) {
        (UTF_16LE.decode_without_bom_handling(body), Encoding::Utf16Le)
    } else if let Some(body) = bytes.strip_prefix(&[0xfe, 0xff]) {
        (UTF_16BE.decode_without_bom_handling(body), Encoding::Utf16Be)
    } else if let Some(encoding) = sniff_utf16(bytes) {
        let coding = if encoding == Encoding::Utf16Le { UTF_16LE } else { UTF_16BE };
        (coding.decode_without_bom_handling(bytes), encoding)
    } else if let Ok(text) = std::str::from_utf8(bytes) {
        ((Cow::Borrowed(text.strip_prefix('\u{feff}').unwrap_or(text)), false), Encoding::Utf8)
    } else {
        (WINDOWS_1252.decode_without_bom_handling(bytes), Encoding::Windows1252)
    };
    let (text, broken) = text;
    if broken {
        let words = "this starts like UTF-16 text but does not go on like it";
        return Err(Problem::refused("not-text", words, format.wanted()));
    }
    if looks_binary(&text) {
        return Err(Problem::refused("not-text", "this is binary data, not text", format.wanted()));
    }
    if text.trim().is_empty() {
        return Err(Problem::refused("empty", "there is nothing in it", format.wanted()));
    }
    Ok((text.into_owned(), encoding))
}

/// Files that people hand over in place of text, by their first bytes (standard signatures, from memory).
fn known_binary(bytes: &[u8]) -> Option<&'static str> {
    const KNOWN: [(&[u8], &str); 4] = [
        (b"PK\x03\x04", "a zip archive, as spreadsheets save their workbooks"),
        (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "an old spreadsheet or document file"),
        (b"%PDF-", "a PDF document"),
        (b"\x1f\x8b", "a compressed file"),
    ];
    KNOWN.iter().find(|(start, _)| bytes.starts_with(start)).map(|(_, what)| *what)
}

/// UTF-16 without byte order mark: mostly western text has a zero in one half of most pairs and none in
/// the other (choice: 2 of 5 pairs among the first 512).
fn sniff_utf16(bytes: &[u8]) -> Option<Encoding> {
    let pairs: Vec<_> = bytes.chunks_exact(2).take(512).collect();
    let high = pairs.iter().filter(|p| p[0] == 0).count();
    let low = pairs.iter().filter(|p| p[1] == 0).count();
    let many = |zeros: usize| zeros > 0 && zeros * 5 >= pairs.len() * 2;
    match (many(high), many(low)) {
        (false, true) if high == 0 => Some(Encoding::Utf16Le),
        (true, false) if low == 0 => Some(Encoding::Utf16Be),
        _ => None,
    }
}

/// A NUL never stands in text; other control characters may stray in (choice: up to 1 in 10).
fn looks_binary(text: &str) -> bool {
    let mut controls = 0;
    let mut all = 0;
    for c in text.chars() {
        if c == '\0' {
            return true;
        }
        all += 1;
        controls += usize::from(c.is_control() && !matches!(c, '\n' | '\r' | '\t'));
    }
    controls * 10 > all
}

fn unopened(error: &io::Error) -> Problem {
    if error.kind() == io::ErrorKind::NotFound {
        return Problem::refused("missing-file", "there is no such file", "check the name and the folder");
    }
    Problem::refused("unreadable", format!("cannot be read: {error}"), "check that you may read it")
}

fn too_large(format: Format) -> Problem {
    let words = format!("this is larger than {} MiB", format.cap_bytes() >> 20);
    let cure = match format {
        Format::Yaml => "check that this is the site file; it is a few kilobytes as a rule",
        Format::Csv => "check that this is the right file, or export a shorter stretch of time",
    };
    Problem::refused("too-large", words, cure)
}
