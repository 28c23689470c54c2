//! Pictures as files: SVG text to PNG bytes, with the bundled fonts only.
