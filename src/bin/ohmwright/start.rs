//! `start`: a sheet to begin with.

use std::path::Path;

use ohmwright::recording::{Rows, reader_of, start};

use crate::args::Start;
use crate::failure::Failure;
use crate::files::Source;
use crate::side::tell;
use crate::trace::{self, Asked, Product};

pub(crate) fn run(args: &Start) -> Result<(), Failure> {
    let target = args.output.as_deref().filter(|path| path.as_os_str() != "-");
    if let Some(path) = target.filter(|path| path.exists()) {
        // a sheet holds what somebody found out: it is not replaced
        return Err(Failure::error(format!(
            "{}: there is a file of this name already; give another -o",
            path.display()
        )));
    }
    let product = make(&args.recording)?;
    trace::write(&product, target, Asked::Start)?;
    product.notes.iter().for_each(|note| tell(note));
    Ok(())
}

/// The text of a sheet.
pub(crate) fn make(recording: &Path) -> Result<Product, Failure> {
    let mut source = Source::new(recording).with_fingerprint();
    let (taken, name) = (source.clone(), source.name().to_string());
    let sheet = {
        let mut reader = reader_of(&mut source, &ohmwright::sheet::Layout::default())?;
        // a sheet names its recording without the folder, so that it is the same wherever it is made
        let bare = recording.file_name().map_or_else(|| name.clone(), |n| n.to_string_lossy().into_owned());
        start(&mut reader, if recording.as_os_str() == "-" { &name } else { &bare })?
    };
    let mut notes = Vec::new();
    if !sheet.lines().any(|line| line.starts_with("[channel.")) {
        notes.push(format!(
            "{name}: no column could be made a channel: it has none of numbers, or no unit is known; see the comments of the sheet"
        ));
    }
    Ok(Product { bytes: sheet.into_bytes(), read: vec![(recording.to_path_buf(), taken.fingerprint()?)], notes })
}
