//! Files of the demo data: built in memory, written to a folder, or held against what lies there.
#![expect(
    clippy::disallowed_methods,
    reason = "a generator of demo data reads and writes files; it is no part of the program"
)]

use std::error::Error;
use std::io::{Cursor, Read, Write};
use std::path::Path;

/// A file: its name in the folder of demo data, and its content.
pub struct Page {
    /// The name, without a folder.
    pub name: &'static str,
    /// The content.
    pub bytes: Vec<u8>,
}

/// Runs a generator: writes its pages to the folder of demo data, or with `--check` only compares.
///
/// # Errors
///
/// When a file cannot be read or written, or when a page differs from the file of its name.
pub fn run(
    pages: impl FnOnce() -> Result<Vec<Page>, Box<dyn Error>>,
) -> Result<(), Box<dyn Error>> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("demo-data");
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let only_compare = match arguments.as_slice() {
        [] => false,
        [flag] if flag == "--check" => true,
        _ => return Err("the only argument that can be given is --check".into()),
    };
    for page in pages()? {
        let path = folder.join(page.name);
        if only_compare {
            if !same_content(&page, &std::fs::read(&path)?)? {
                return Err(format!("{} is not what the generator makes", page.name).into());
            }
            eprintln!("{}: same", page.name);
        } else {
            std::fs::write(&path, &page.bytes)?;
            eprintln!("{}: {} bytes", page.name, page.bytes.len());
        }
    }
    Ok(())
}

/// Says whether `bytes` hold what `page` holds. Compressed files are compared by what they hold,
/// because a later version of the compressor may well pack the same content differently.
///
/// # Errors
///
/// When a compressed file cannot be read.
pub fn same_content(page: &Page, bytes: &[u8]) -> Result<bool, Box<dyn Error>> {
    if page.name.ends_with(".xlsx") {
        Ok(parts(&page.bytes)? == parts(bytes)?)
    } else if page.name.ends_with(".gz") {
        Ok(unpacked(&page.bytes)? == unpacked(bytes)?)
    } else {
        Ok(page.bytes == bytes)
    }
}

/// The content of a gzip file.
///
/// # Errors
///
/// When `bytes` are no gzip file.
pub fn unpacked(bytes: &[u8]) -> Result<Vec<u8>, Box<dyn Error>> {
    let mut content = Vec::new();
    let _ = flate2::read::GzDecoder::new(bytes).read_to_end(&mut content)?;
    Ok(content)
}

/// The content as a gzip file without a date.
///
/// # Errors
///
/// Writing to memory does not fail; the compressor's signature says that it may.
pub fn packed(content: &[u8]) -> Result<Vec<u8>, Box<dyn Error>> {
    let mut packer = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::best());
    packer.write_all(content)?;
    Ok(packer.finish()?)
}

/// A part of a workbook file: its name and its content.
type Part = (String, Vec<u8>);

/// The parts of a workbook file, in their order.
fn parts(bytes: &[u8]) -> Result<Vec<Part>, Box<dyn Error>> {
    let mut archive = zip::ZipArchive::new(Cursor::new(bytes))?;
    let mut parts = Vec::new();
    for at in 0..archive.len() {
        let mut part = archive.by_index(at)?;
        let mut content = Vec::new();
        let _ = part.read_to_end(&mut content)?;
        parts.push((part.name()?.into_owned(), content));
    }
    Ok(parts)
}

/// Rows of text joined by `delimiter`, one per line. No cell of the demo data needs quoting.
pub fn lines(rows: &[Vec<String>], delimiter: char) -> Vec<u8> {
    let mut text = String::new();
    for row in rows {
        for (at, cell) in row.iter().enumerate() {
            if at > 0 {
                text.push(delimiter);
            }
            text.push_str(cell);
        }
        text.push('\n');
    }
    text.into_bytes()
}

/// Rows become columns.
pub fn transposed(rows: &[Vec<String>]) -> Vec<Vec<String>> {
    let n_columns = rows.first().map_or(0, Vec::len);
    (0..n_columns)
        .map(|column| rows.iter().map(|row| row[column].clone()).collect())
        .collect()
}

/// A number with a fixed count of decimals and a decimal point.
pub fn with_point(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    // A small negative number must not read "-0.00".
    let is_zero = text
        .bytes()
        .all(|byte| !byte.is_ascii_digit() || byte == b'0');
    if is_zero {
        text.trim_start_matches('-').to_owned()
    } else {
        text
    }
}

/// A number with a fixed count of decimals and a decimal comma.
pub fn with_comma(value: f64, decimals: usize) -> String {
    with_point(value, decimals).replace('.', ",")
}

/// `value` at the precision at which a laboratory writes it down.
pub fn rounded(value: f64, decimals: u32) -> f64 {
    let scale = f64::from(10_u32.pow(decimals));
    (value * scale).round() / scale
}
