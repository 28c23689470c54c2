//! Compressed files: what a gzip archive holds.

use crate::base::work::{Cancelled, Work};
use crate::table::read::error::ReadError;
use flate2::read::MultiGzDecoder;
use std::io::Read;

/// Larger contents are refused: a few kilobytes can claim to hold any number of bytes.
const MOST: usize = 8 << 30;

/// How many bytes are unpacked between two questions whether to go on.
const PIECE: usize = 1 << 20;

/// Whether the bytes begin like a gzip archive.
pub fn is_gzip(bytes: &[u8]) -> bool {
    bytes.starts_with(&[0x1f, 0x8b])
}

/// Unpacks a gzip archive, of one or several members.
pub fn gunzip(bytes: &[u8], work: &Work<'_>) -> Result<Result<Vec<u8>, ReadError>, Cancelled> {
    let mut counted = Counted { bytes, taken: 0 };
    let mut decoder = MultiGzDecoder::new(&mut counted);
    let mut content = Vec::new();
    let mut piece = vec![0; PIECE];
    loop {
        match decoder.read(&mut piece) {
            Ok(0) => return Ok(Ok(content)),
            Ok(length) => content.extend_from_slice(&piece[..length]),
            Err(error) if error.kind() == std::io::ErrorKind::Interrupted => {}
            Err(error) => {
                let is_short = error.kind() == std::io::ErrorKind::UnexpectedEof;
                return Ok(Err(if is_short {
                    ReadError::TruncatedArchive {
                        unpacked: content.len(),
                    }
                } else {
                    ReadError::DamagedArchive {
                        details: error.to_string(),
                    }
                }));
            }
        }
        if content.len() > MOST {
            return Ok(Err(ReadError::TooLarge));
        }
        work.step(decoder.get_ref().taken, bytes.len())?;
    }
}

/// Bytes that say how many of them were read.
struct Counted<'a> {
    bytes: &'a [u8],
    taken: usize,
}

impl Read for Counted<'_> {
    fn read(&mut self, into: &mut [u8]) -> std::io::Result<usize> {
        let length = self.bytes.read(into)?;
        self.taken += length;
        Ok(length)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::Write;

    fn packed(text: &[u8]) -> Vec<u8> {
        let mut encoder = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::fast());
        encoder.write_all(text).unwrap();
        encoder.finish().unwrap()
    }

    #[test]
    fn archives_of_several_members_are_read_whole() {
        let both = [packed(b"a,b\n"), packed(b"1,2\n")].concat();
        let content = gunzip(&both, &Work::unattended()).unwrap().unwrap();
        assert_eq!(content, b"a,b\n1,2\n");
    }

    #[test]
    fn a_truncated_archive_is_said_to_be_truncated() {
        let whole = packed(&b"1.5,2.5\n".repeat(1000));
        for length in [5, 20, whole.len() - 1] {
            let error = gunzip(&whole[..length], &Work::unattended()).unwrap();
            assert!(
                matches!(error, Err(ReadError::TruncatedArchive { .. })),
                "{length}"
            );
        }
    }
}
