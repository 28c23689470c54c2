//! Imported bytes, named by their content.

use sha2::{Digest, Sha256};
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The SHA-256 of a source's bytes, in hexadecimal. It is on disk, so it is a published hash.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SourceId(String);

impl SourceId {
    /// The id of these bytes.
    #[must_use]
    pub fn of(bytes: &[u8]) -> Self {
        Self(fingerprint(bytes))
    }

    /// An id as it was written down; `None` unless it is 64 hexadecimal digits.
    #[must_use]
    pub fn parse(text: &str) -> Option<Self> {
        let lawful = text.len() == 64 && text.bytes().all(|b| b.is_ascii_hexdigit());
        lawful.then(|| Self(text.to_ascii_lowercase()))
    }

    /// The id of bytes that nobody has seen: a table that is named in a file but was not found.
    #[must_use]
    pub fn unknown() -> Self {
        Self("0".repeat(64))
    }

    /// Whether the bytes have been seen.
    #[must_use]
    pub fn is_known(&self) -> bool {
        self.0.bytes().any(|digit| digit != b'0')
    }

    /// The 64 hexadecimal digits.
    #[must_use]
    pub fn hex(&self) -> &str {
        &self.0
    }
}

/// The SHA-256 of bytes, in hexadecimal.
#[must_use]
pub fn fingerprint(bytes: &[u8]) -> String {
    Sha256::digest(bytes)
        .iter()
        .map(|byte| format!("{byte:02x}"))
        .collect()
}

/// The bytes of all imported files, beside the study.
///
/// The shelf only grows, so that undo never has to drop or restore bytes; saving writes the
/// sources that cells refer to.
#[derive(Clone, Debug, Default)]
pub struct Shelf {
    sources: BTreeMap<SourceId, Arc<[u8]>>,
    origins: BTreeMap<(SourceId, String), PathBuf>,
}

impl Shelf {
    /// Puts bytes on the shelf and returns the name under which they lie there.
    pub fn put(&mut self, bytes: impl Into<Arc<[u8]>>) -> SourceId {
        let bytes = bytes.into();
        let id = SourceId::of(&bytes);
        let _ = self.sources.entry(id.clone()).or_insert(bytes);
        id
    }

    /// Notes where a table with this file name was found. Paths are not part of the document; the
    /// shelf remembers them for a study that is saved in the form that names its tables by path.
    pub fn came_from(&mut self, id: &SourceId, file: &str, path: &Path) {
        let key = (id.clone(), file.to_owned());
        let _ = self.origins.insert(key, path.to_owned());
    }

    /// Where a table was found, if it was found outside a study.
    #[must_use]
    pub fn origin(&self, id: &SourceId, file: &str) -> Option<&Path> {
        let key = (id.clone(), file.to_owned());
        self.origins.get(&key).map(PathBuf::as_path)
    }

    /// The bytes with this name.
    #[must_use]
    pub fn get(&self, id: &SourceId) -> Option<&Arc<[u8]>> {
        self.sources.get(id)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_source_is_named_by_the_published_hash_of_its_bytes() {
        // FIPS 180-4, the example message "abc".
        assert_eq!(
            SourceId::of(b"abc").hex(),
            "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
        );
    }

    #[test]
    fn the_same_bytes_lie_on_the_shelf_once() {
        let mut shelf = Shelf::default();
        let first = shelf.put(b"a;b\n1;2\n".to_vec());
        let second = shelf.put(b"a;b\n1;2\n".to_vec());
        assert_eq!(first, second);
        assert_eq!(shelf.get(&first).map(|bytes| bytes.len()), Some(8));
    }
}
