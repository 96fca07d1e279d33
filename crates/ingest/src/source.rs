//! The bytes of a file: opened, digested as they come from the disk, and decompressed.

use std::fs::{self, File};
use std::io::{BufReader, Chain, Cursor, ErrorKind, Read};
use std::path::Path;

use flate2::bufread::MultiGzDecoder;
use sha2::{Digest, Sha256};

use crate::error::IngestError;

/// The first two bytes of a gzip member (RFC 1952, section 2.3.1).
const GZIP_MAGIC: [u8; 2] = [0x1f, 0x8b];

/// The text of one file. Compression is told by the file's first bytes, not by its name.
pub(crate) struct Source {
    stream: Stream,
}

enum Stream {
    Plain(Replayed),
    Gzip(Box<MultiGzDecoder<BufReader<Replayed>>>),
}

/// The bytes taken to look at, and then the rest of the file.
type Replayed = Chain<Cursor<Vec<u8>>, Digested>;

struct Digested {
    file: File,
    digest: Option<Sha256>,
    bytes: u64,
}

impl Read for Digested {
    fn read(&mut self, buffer: &mut [u8]) -> std::io::Result<usize> {
        let length = self.file.read(buffer)?;
        if let Some(digest) = &mut self.digest {
            digest.update(&buffer[..length]);
        }
        self.bytes += length as u64;
        Ok(length)
    }
}

impl Source {
    /// Opens a file; `chunk` is how many compressed bytes are taken from the disk at once.
    pub(crate) fn open(path: &Path, digest: bool, chunk: usize) -> Result<Self, IngestError> {
        let metadata = fs::metadata(path).map_err(|error| disk_fault(path, &error))?;
        if metadata.is_dir() {
            return Err(IngestError::Directory { path: path.to_owned() });
        }
        let file = File::open(path).map_err(|error| disk_fault(path, &error))?;
        let mut file = Digested { file, digest: digest.then(Sha256::new), bytes: 0 };
        let mut beginning = Vec::with_capacity(GZIP_MAGIC.len());
        (&mut file)
            .take(GZIP_MAGIC.len() as u64)
            .read_to_end(&mut beginning)
            .map_err(|error| disk_fault(path, &error))?;
        let is_gzip = beginning == GZIP_MAGIC;
        let replayed = Cursor::new(beginning).chain(file);
        let stream = if is_gzip {
            let buffered = BufReader::with_capacity(chunk, replayed);
            Stream::Gzip(Box::new(MultiGzDecoder::new(buffered)))
        } else {
            Stream::Plain(replayed)
        };
        Ok(Self { stream })
    }

    /// Takes some bytes of text, 0 at the end; `path` and `lines`, the lines read so far, are for a fault.
    pub(crate) fn read(&mut self, buffer: &mut [u8], path: &Path, lines: u64) -> Result<usize, IngestError> {
        loop {
            let result = match &mut self.stream {
                Stream::Plain(stream) => stream.read(buffer),
                Stream::Gzip(stream) => stream.read(buffer),
            };
            let error = match result {
                Ok(length) => return Ok(length),
                Err(error) if error.kind() == ErrorKind::Interrupted => continue,
                Err(error) => error,
            };
            return Err(match (&self.stream, error.kind()) {
                (Stream::Gzip(_), ErrorKind::UnexpectedEof) => {
                    IngestError::GzipCutShort { path: path.to_owned(), lines }
                }
                (Stream::Gzip(_), ErrorKind::InvalidInput | ErrorKind::InvalidData) => {
                    IngestError::GzipCorrupt { path: path.to_owned(), lines, reason: error.to_string() }
                }
                _ => disk_fault(path, &error),
            });
        }
    }

    /// How many bytes have come from the disk.
    pub(crate) fn bytes(&self) -> u64 {
        self.digested().bytes
    }

    /// The digest of the bytes that have come from the disk, in lower-case hexadecimal; empty if none was asked for.
    pub(crate) fn sha256(&self) -> String {
        const DIGITS: &[u8; 16] = b"0123456789abcdef";
        let Some(digest) = self.digested().digest.clone() else {
            return String::new();
        };
        digest
            .finalize()
            .iter()
            .flat_map(|byte| [byte >> 4, byte & 15])
            .map(|digit| char::from(DIGITS[usize::from(digit)]))
            .collect()
    }

    fn digested(&self) -> &Digested {
        match &self.stream {
            Stream::Plain(stream) => stream.get_ref().1,
            Stream::Gzip(stream) => stream.get_ref().get_ref().get_ref().1,
        }
    }
}

fn disk_fault(path: &Path, error: &std::io::Error) -> IngestError {
    let path = path.to_owned();
    match error.kind() {
        ErrorKind::NotFound => IngestError::Missing { path },
        ErrorKind::IsADirectory => IngestError::Directory { path },
        _ => IngestError::Unreadable { path, reason: error.to_string() },
    }
}
