//! The trace beside every file that a command writes: what it was made of, so that `repeat` can make it again.
//!
//! A table of results has one of its own kind (`convert/trace.rs`); this is that of all else.

use std::ffi::OsString;
use std::io::Write;
use std::path::{Component, Path, PathBuf};

use ohmwright::recording::{Fingerprint, Used};
use serde::{Deserialize, Serialize};

use crate::args::{Curve, Evidence};
use crate::failure::Failure;
use crate::files;

/// The form that this version writes and reads.
const FORM: u32 = 1;

/// What a command makes that is no table of results.
pub(crate) struct Product {
    pub(crate) bytes: Vec<u8>,
    /// The files that it read, with what they were: first the one that the command names.
    pub(crate) read: Vec<(PathBuf, Fingerprint)>,
    /// What there is to say beside it.
    pub(crate) notes: Vec<String>,
}

/// What was asked for.
#[derive(Clone, Debug, Serialize, Deserialize)]
#[serde(tag = "command", rename_all = "lowercase")]
pub(crate) enum Asked {
    Image,
    Curve(Curve),
    Start,
    Evidence(Evidence),
}

/// The trace of a product.
#[derive(Debug, Serialize, Deserialize)]
pub(crate) struct Made {
    #[serde(rename = "trace of ohmwright")]
    form: u32,
    pub(crate) version: String,
    pub(crate) result: Used,
    pub(crate) read: Vec<Used>,
    #[serde(flatten)]
    pub(crate) asked: Asked,
}

impl Made {
    /// Reads the trace of a product; `None` where it is one of a table of results, or none at all.
    pub(crate) fn read(name: &str, text: &str) -> Option<Result<Self, Failure>> {
        let value: serde_json::Value = serde_json::from_str(text).ok()?;
        value.get("command")?;
        Some(match serde_json::from_value::<Self>(value) {
            Ok(made) if made.form == FORM => Ok(made),
            Ok(made) => Err(Failure::error(format!(
                "{name}: value '{}': the form of this trace; this version reads form {FORM}",
                made.form
            ))),
            Err(e) => Err(Failure::error(format!("{name}: this trace is damaged: {e}"))),
        })
    }
}

/// Writes a product to a file, with its trace beside it, or to standard output.
pub(crate) fn write(product: &Product, target: Option<&Path>, asked: Asked) -> Result<(), Failure> {
    let Some(path) = target else {
        std::io::stdout().lock().write_all(&product.bytes)?;
        return Ok(());
    };
    let inputs: Vec<_> = product.read.iter().map(|(file, _)| (file.as_path(), "file it is made of")).collect();
    keep(path, &inputs)?;
    files::whole(path, &product.bytes)?;
    if !has_trace(path) {
        return Ok(());
    }
    let beside = beside(path);
    let folder = folder_of(&beside);
    let made = Made {
        form: FORM,
        version: env!("CARGO_PKG_VERSION").into(),
        result: used(&folder, path, fingerprint(&product.bytes)?),
        read: product.read.iter().map(|(file, now)| used(&folder, file, now.clone())).collect(),
        asked,
    };
    let text = serde_json::to_string_pretty(&made).map_err(|e| Failure::error(e.to_string()))?;
    files::whole(&beside, (text + "\n").as_bytes())
}

/// The fingerprint of bytes in memory.
pub(crate) fn fingerprint(bytes: &[u8]) -> Result<Fingerprint, Failure> {
    Ok(Fingerprint::of(bytes, "memory")?)
}

/// Files with what they are now.
pub(crate) fn taken(files: impl IntoIterator<Item = PathBuf>) -> Result<Vec<(PathBuf, Fingerprint)>, Failure> {
    files.into_iter().map(|file| files::fingerprint(&file).map(|now| (file, now)).map_err(Failure::from)).collect()
}

/// Refuses a result that would replace what it is made of.
pub(crate) fn keep(result: &Path, inputs: &[(&Path, &str)]) -> Result<(), Failure> {
    let Ok(out) = result.canonicalize() else { return Ok(()) };
    match inputs.iter().find(|(input, _)| input.canonicalize().is_ok_and(|input| input == out)) {
        Some((input, what)) => Err(Failure::error(format!(
            "{}: the result would replace the {what} itself; give another -o",
            input.display()
        ))),
        None => Ok(()),
    }
}

/// Whether a result has a trace: a device has none beside it.
pub(crate) fn has_trace(result: &Path) -> bool {
    std::fs::metadata(result).map_or(true, |m| m.is_file())
}

/// Where the trace of a result stands: its name with `.trace` behind it.
pub(crate) fn beside(result: &Path) -> PathBuf {
    let mut name = OsString::from(result);
    name.push(".trace");
    name.into()
}

/// A file as a trace names it.
pub(crate) fn used(folder: &Path, file: &Path, fingerprint: Fingerprint) -> Used {
    let file = if file.as_os_str() == "-" { "-".into() } else { from_folder(folder, file) };
    Used { file, fingerprint }
}

/// The folder that a file is in.
pub(crate) fn folder_of(file: &Path) -> PathBuf {
    file.parent().filter(|p| !p.as_os_str().is_empty()).unwrap_or_else(|| Path::new(".")).to_path_buf()
}

/// A path as it is written in a trace: from its folder, with `/` between names; whole where there is no way from there.
fn from_folder(folder: &Path, file: &Path) -> String {
    let whole = |path: &Path| path.canonicalize().or_else(|_| std::path::absolute(path));
    let (Ok(folder), Ok(target)) = (whole(folder), whole(file)) else { return file.display().to_string() };
    let (from, to): (Vec<Component<'_>>, Vec<Component<'_>>) =
        (folder.components().collect(), target.components().collect());
    let common = from.iter().zip(&to).take_while(|(a, b)| a == b).count();
    if common == 0 {
        return target.display().to_string();
    }
    let up = std::iter::repeat_n("..".to_string(), from.len() - common);
    let down = to.iter().skip(common).map(|c| c.as_os_str().to_string_lossy().into_owned());
    up.chain(down).collect::<Vec<_>>().join("/")
}
