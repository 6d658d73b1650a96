//! `run.pvd`: the list of snapshots with their times in seconds, in the collection format of the Visualization Toolkit's
//! XML files. It names the files relative to itself.

use quick_xml::Writer;
use quick_xml::events::{BytesDecl, Event};
use solver::results::Snapshot;

use super::EncodeError;

/// Name of the file of a snapshot, relative to the result folder.
pub fn snapshot_name(index: usize) -> String {
    format!("fields/{index:04}.vtu")
}

/// The file.
///
/// # Errors
/// The XML could not be written.
pub fn collection(snapshots: &[Snapshot]) -> Result<Vec<u8>, EncodeError> {
    let mut writer = Writer::new_with_indent(Vec::new(), b' ', 2);
    writer.write_event(Event::Decl(BytesDecl::new("1.0", None, None)))?;
    let file = [("type", "Collection"), ("version", "1.0"), ("byte_order", "LittleEndian")];
    writer.create_element("VTKFile").with_attributes(file).write_inner_content(|writer| {
        writer.create_element("Collection").write_inner_content(|writer| {
            for (index, snapshot) in snapshots.iter().enumerate() {
                let (time, name) = (format!("{:?}", snapshot.time_s), snapshot_name(index));
                let entry = [("timestep", time.as_str()), ("part", "0"), ("file", name.as_str())];
                writer.create_element("DataSet").with_attributes(entry).write_empty()?;
            }
            Ok(())
        })?;
        Ok(())
    })?;
    let mut bytes = writer.into_inner();
    bytes.push(b'\n');
    Ok(bytes)
}
