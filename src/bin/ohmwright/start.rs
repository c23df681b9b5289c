//! `start`: a sheet to begin with.

use ohmwright::recording::{Output, Rows, reader_of, start};

use crate::args::Start;
use crate::failure::Failure;
use crate::files::Source;

pub(crate) fn run(args: &Start) -> Result<(), Failure> {
    let mut source = Source::new(&args.recording);
    let name = source.name().to_string();
    let mut reader = reader_of(&mut source, &ohmwright::sheet::Layout::default())?;
    let sheet = start(&mut reader, &name)?;
    let mut output = match &args.output {
        // a sheet holds what somebody found out: it is not replaced
        Some(path) if path.exists() => {
            return Err(Failure::error(format!(
                "{}: there is a file of this name already; give another -o",
                path.display()
            )));
        }
        Some(path) => Output::to_path(path)?,
        None => Output::stdout(),
    };
    output.put(sheet.as_bytes())?;
    output.finish()?;
    if !sheet.lines().any(|line| line.starts_with("[channel.")) {
        crate::side::tell(&format!(
            "{name}: no column could be made a channel: it has none of numbers, or no unit is known; see the comments of the sheet"
        ));
    }
    Ok(())
}
