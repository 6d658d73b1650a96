//! Results as files: one module a format, each from values to bytes; only `folder` touches the disk.

pub mod pictures;
