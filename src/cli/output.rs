//! Files that are never seen half written, and never fall on the plan's own.

use std::fs;
use std::io::{self, BufWriter, Write};
use std::path::{Path, PathBuf};

use super::status::Failure;

/// Bytes gathered before a file is written to.
const GATHERED: usize = 1 << 16;

/// Writes a file beside its place and moves it there when it is whole.
pub(super) fn write_whole(
    path: &Path,
    write: impl FnOnce(&mut (dyn Write + Send)) -> io::Result<()>,
) -> Result<(), Failure> {
    write_beside(path, write).map_err(|source| Failure::write(path, source))
}

fn write_beside(
    path: &Path,
    write: impl FnOnce(&mut (dyn Write + Send)) -> io::Result<()>,
) -> io::Result<()> {
    // A link is followed, so that the file it names is replaced and not the link.
    let place = fs::canonicalize(path).unwrap_or_else(|_| path.to_owned());
    match fs::metadata(&place) {
        Ok(found) if found.is_dir() => {
            return Err(io::Error::new(
                io::ErrorKind::IsADirectory,
                "it is a folder",
            ));
        }
        // A pipe or a device is written to; putting a file in its place would break it.
        Ok(found) if !found.is_file() => {
            let mut out = BufWriter::with_capacity(GATHERED, fs::File::create(&place)?);
            write(&mut out)?;
            return out.flush();
        }
        _ => {}
    }
    let folder = match place.parent() {
        Some(parent) if !parent.as_os_str().is_empty() => parent,
        _ => Path::new("."),
    };
    let mut builder = tempfile::Builder::new();
    readable_by_others(&mut builder);
    let mut beside = builder.prefix(".isomargin-").tempfile_in(folder)?;
    let mut out = BufWriter::with_capacity(GATHERED, beside.as_file_mut());
    write(&mut out)?;
    out.flush()?;
    drop(out);
    beside.persist(&place)?;
    Ok(())
}

/// The rights of any new file instead of a private temporary one.
#[cfg(unix)]
fn readable_by_others(builder: &mut tempfile::Builder) {
    use std::os::unix::fs::PermissionsExt;
    const NEW_FILE: u32 = 0o666;
    builder.permissions(fs::Permissions::from_mode(NEW_FILE));
}

#[cfg(not(unix))]
fn readable_by_others(_builder: &mut tempfile::Builder) {}

/// Refuses a place where one of the plan's own files stands.
pub(super) fn refuse_inputs<'a>(
    places: impl IntoIterator<Item = &'a PathBuf>,
    inputs: &[PathBuf],
) -> Result<(), Failure> {
    let real = |path: &Path| fs::canonicalize(path).ok();
    let inputs: Vec<PathBuf> = inputs.iter().filter_map(|input| real(input)).collect();
    for place in places {
        if real(place).is_some_and(|place| inputs.contains(&place)) {
            return Err(Failure::Usage(format!(
                "{} is a file of the plan itself and would be lost",
                place.display()
            )));
        }
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_write_that_fails_leaves_the_old_file_whole() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("spends.csv");
        fs::write(&path, "old").unwrap();
        let failed = write_whole(&path, |out| {
            out.write_all(b"half")?;
            Err(io::Error::other("the disk is full"))
        });
        assert!(failed.is_err());
        assert_eq!(fs::read_to_string(&path).unwrap(), "old");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }

    #[test]
    fn a_whole_file_replaces_the_old_one() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("spends.csv");
        fs::write(&path, "old").unwrap();
        write_whole(&path, |out| out.write_all(b"new")).unwrap();
        assert_eq!(fs::read_to_string(&path).unwrap(), "new");
    }

    #[test]
    fn the_plans_own_files_are_not_overwritten() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("activities.csv");
        fs::write(&path, "activity").unwrap();
        let same = folder.path().join(".").join("activities.csv");
        assert!(refuse_inputs([&same], std::slice::from_ref(&path)).is_err());
        let other = folder.path().join("spends.csv");
        assert!(refuse_inputs([&other], &[path]).is_ok());
    }
}
