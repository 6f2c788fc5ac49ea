//! `pintle start DIR`: a new sheet with the sections in place.

use super::specs::Flag;
use super::{Context, Output, exit};
use pintle::render::page::printable;
use std::io::Write;
use std::path::Path;

/// The sheet, with values to be replaced. It compiles, with its assumption open.
const SHEET: &str = include_str!("start.pintle");

pub(super) fn run(context: &Context<'_>) -> Output {
    let folder = Path::new(context.word(0));
    if let Err(error) = std::fs::create_dir_all(folder) {
        return Output::failed(exit::FILE, format!("{} cannot be made: {error}", printable(context.word(0))));
    }
    let path = folder.join(format!("{}.pintle", stem(folder)));
    let shown = printable(&path.to_string_lossy());
    // `create_new` never overwrites, whatever else happens at the same time.
    let written = std::fs::OpenOptions::new().write(true).create_new(true).open(&path);
    match written.and_then(|mut file| file.write_all(SHEET.as_bytes())) {
        Ok(()) if context.has(Flag::Quiet) => Output::default(),
        Ok(()) => Output::sound(format!("{shown} is there; try `pintle solve {shown}`\n")),
        Err(error) if error.kind() == std::io::ErrorKind::AlreadyExists => {
            Output::failed(exit::USAGE, format!("{shown} exists already and is left as it is"))
        }
        Err(error) => Output::failed(exit::FILE, format!("{shown} cannot be written: {error}")),
    }
}

/// The folder's own name, for the file; `sheet` where it has none.
fn stem(folder: &Path) -> String {
    let name = |path: &Path| path.file_name().map(|name| name.to_string_lossy().into_owned());
    let own = name(folder).or_else(|| folder.canonicalize().ok().as_deref().and_then(name));
    own.filter(|name| !name.is_empty()).unwrap_or_else(|| "sheet".into())
}
