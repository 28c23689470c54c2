//! The door to the disk: reading whole files, and replacing them without ever losing the old one.
#![expect(
    clippy::disallowed_methods,
    reason = "this is the door to files that the ban points to"
)]

use crate::base::problem::{Place, Problem};
use std::fs::{self, File, OpenOptions};
use std::io::{self, ErrorKind, Write};
use std::path::{Path, PathBuf};

/// The name of a file, for people.
#[must_use]
pub fn name_of(path: &Path) -> String {
    let name = path.file_name().unwrap_or(path.as_os_str());
    name.to_string_lossy().into_owned()
}

/// The bytes of a file.
///
/// # Errors
/// What the system says; also when the path leads to something that has no end, such as a device.
pub fn read(path: &Path) -> io::Result<Vec<u8>> {
    let metadata = fs::metadata(path)?;
    if metadata.is_dir() {
        return Err(ErrorKind::IsADirectory.into());
    }
    if !metadata.is_file() {
        return Err(io::Error::new(ErrorKind::InvalidInput, "not a plain file"));
    }
    fs::read(path)
}

/// The problem that a file could not be read. `what` is the thing with its article: “the study”.
#[must_use]
pub fn not_read(path: &Path, what: &str, error: &io::Error) -> Problem {
    let (code, found, mend) = match error.kind() {
        ErrorKind::NotFound | ErrorKind::NotADirectory => (
            "file-missing",
            format!("There is no file “{}” for {what}.", path.display()),
            "Check the name, or look where the file has gone.",
        ),
        ErrorKind::PermissionDenied => (
            "no-permission",
            format!("The file “{}” may not be read.", path.display()),
            "Ask for permission to read it, or choose a copy.",
        ),
        ErrorKind::IsADirectory => (
            "file-is-folder",
            format!("“{}” is a folder.", path.display()),
            "Choose a file inside it.",
        ),
        _ => (
            "file-not-read",
            format!("The file “{}” could not be read.", path.display()),
            "Try again, or copy the file to another disk first.",
        ),
    };
    Problem::new(code, found)
        .at(Place::file(&name_of(path)))
        .mend(mend)
        .details(error.to_string())
}

/// Puts bytes in place of a file: a neighbour is written and flushed to the disk, then renamed.
/// Whatever goes wrong, the old file is as it was.
///
/// # Errors
/// A [`Problem`] that says why the file could not be written.
pub fn replace(path: &Path, bytes: &[u8]) -> Result<(), Problem> {
    replace_through(path, bytes, &create)
}

/// Opens the neighbour afresh. A link that somebody laid there is not followed.
fn create(neighbor: &Path) -> io::Result<File> {
    let open = || {
        OpenOptions::new()
            .write(true)
            .create_new(true)
            .open(neighbor)
    };
    match open() {
        Err(error) if error.kind() == ErrorKind::AlreadyExists => {
            fs::remove_file(neighbor)?;
            open()
        }
        other => other,
    }
}

fn replace_through(
    path: &Path,
    bytes: &[u8],
    create: &dyn Fn(&Path) -> io::Result<File>,
) -> Result<(), Problem> {
    // The file behind a link is replaced, and the link stays.
    let target = fs::canonicalize(path).unwrap_or_else(|_| path.to_owned());
    let old = fs::metadata(&target).ok();
    if old.as_ref().is_some_and(|old| old.permissions().readonly()) {
        return Err(protected(path));
    }
    let neighbor = neighbor(&target);
    let write = || -> io::Result<()> {
        let mut file = create(&neighbor)?;
        file.write_all(bytes)?;
        if let Some(old) = &old {
            // Not worth losing a save over: some file systems know no permissions.
            let _ = fs::set_permissions(&neighbor, old.permissions());
        }
        file.sync_all()?;
        drop(file);
        fs::rename(&neighbor, &target)?;
        // The folder's own entry; a system that cannot flush folders has written it already.
        if let Some(folder) = target.parent()
            && let Ok(folder) = File::open(folder)
        {
            let _ = folder.sync_all();
        }
        Ok(())
    };
    write().map_err(|error| {
        let _ = fs::remove_file(&neighbor);
        not_written(path, &error)
    })
}

fn neighbor(target: &Path) -> PathBuf {
    let name = format!(".{}.{}.saving", name_of(target), std::process::id());
    target.with_file_name(name)
}

fn protected(path: &Path) -> Problem {
    Problem::new(
        "write-protected",
        format!("“{}” is write-protected.", path.display()),
    )
    .at(Place::file(&name_of(path)))
    .mend("Save under another name, or lift the protection.")
}

/// The problem that a file could not be written.
#[must_use]
pub fn not_written(path: &Path, error: &io::Error) -> Problem {
    let folder = path.parent().map(|folder| folder.display().to_string());
    let folder = folder.filter(|folder| !folder.is_empty());
    let folder = folder.unwrap_or_else(|| "this folder".to_owned());
    let (code, found, mend) = match error.kind() {
        ErrorKind::StorageFull | ErrorKind::QuotaExceeded | ErrorKind::FileTooLarge => (
            "disk-full",
            "There is no room left on the disk; what was saved before is untouched.".to_owned(),
            "Make room, or save to another disk.",
        ),
        ErrorKind::NotFound | ErrorKind::NotADirectory => (
            "folder-missing",
            format!("There is no folder “{folder}”."),
            "Choose a folder that exists.",
        ),
        ErrorKind::PermissionDenied | ErrorKind::ReadOnlyFilesystem => (
            "no-permission",
            format!("Nothing may be written to “{folder}”; what was saved before is untouched."),
            "Save to another folder.",
        ),
        ErrorKind::IsADirectory | ErrorKind::DirectoryNotEmpty => (
            "file-is-folder",
            format!("“{}” is a folder.", path.display()),
            "Choose another name.",
        ),
        _ => (
            "not-written",
            format!(
                "“{}” could not be written; what was saved before is untouched.",
                path.display()
            ),
            "Save to another folder or disk.",
        ),
    };
    Problem::new(code, found)
        .at(Place::file(&name_of(path)))
        .mend(mend)
        .details(error.to_string())
}

/// Makes a folder and those above it.
///
/// # Errors
/// A [`Problem`] that says why it could not be made.
pub fn make_folder(folder: &Path) -> Result<(), Problem> {
    fs::create_dir_all(folder).map_err(|error| not_written(&folder.join("…"), &error))
}

/// Takes a file away; one that is not there is no problem.
///
/// # Errors
/// A [`Problem`] when it is still there.
pub fn remove(path: &Path) -> Result<(), Problem> {
    match fs::remove_file(path) {
        Err(error) if error.kind() != ErrorKind::NotFound => Err(not_written(path, &error)),
        _ => Ok(()),
    }
}

/// The files in a folder by name; none when there is no such folder.
#[must_use]
pub fn files_in(folder: &Path) -> Vec<PathBuf> {
    let entries = fs::read_dir(folder).into_iter().flatten().flatten();
    let mut files: Vec<_> = entries.map(|entry| entry.path()).collect();
    files.retain(|path| path.is_file());
    files.sort();
    files
}

/// A folder of the user's own: the one that a variable of the environment names, or one below
/// the home folder. `None` where neither is known.
#[must_use]
pub fn folder_of_user(variable: &str, below_home: &str) -> Option<PathBuf> {
    let named = |variable| std::env::var_os(variable).map(PathBuf::from);
    // The standard for base folders has relative paths ignored.
    let own = named(variable).filter(|folder| folder.is_absolute());
    own.or_else(|| named("HOME").map(|home| home.join(below_home)))
        .map(|folder| folder.join("widefold"))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn folder(name: &str) -> PathBuf {
        let folder = std::env::temp_dir().join(format!("widefold-{}-{name}", std::process::id()));
        fs::create_dir_all(&folder).unwrap();
        folder
    }

    #[test]
    #[cfg(target_os = "linux")]
    fn a_full_disk_leaves_the_old_file_and_no_neighbor() {
        let folder = folder("full");
        let path = folder.join("study.widefold");
        replace(&path, b"old").unwrap();
        // /dev/full answers every write as a full disk does.
        let full = |_: &Path| OpenOptions::new().write(true).open("/dev/full");
        let problem = replace_through(&path, &[7; 100_000], &full).unwrap_err();
        assert_eq!(problem.code.0, "disk-full");
        assert_eq!(read(&path).unwrap(), b"old");
        assert_eq!(files_in(&folder), [path]);
        fs::remove_dir_all(folder).unwrap();
    }

    #[test]
    #[cfg(unix)]
    fn a_link_stays_a_link_and_a_planted_neighbor_is_not_followed() {
        let folder = folder("links");
        let (real, link) = (folder.join("real.json"), folder.join("link.json"));
        let bystander = folder.join("bystander");
        replace(&real, b"old").unwrap();
        replace(&bystander, b"innocent").unwrap();
        std::os::unix::fs::symlink(&real, &link).unwrap();
        std::os::unix::fs::symlink(&bystander, neighbor(&real)).unwrap();
        replace(&link, b"new").unwrap();
        assert!(fs::symlink_metadata(&link).unwrap().is_symlink());
        assert_eq!(read(&real).unwrap(), b"new");
        assert_eq!(read(&bystander).unwrap(), b"innocent");
        fs::remove_dir_all(folder).unwrap();
    }

    #[test]
    fn a_write_protected_file_is_respected() {
        let folder = folder("protected");
        let path = folder.join("study.json");
        replace(&path, b"old").unwrap();
        let mut permissions = fs::metadata(&path).unwrap().permissions();
        permissions.set_readonly(true);
        fs::set_permissions(&path, permissions).unwrap();
        let problem = replace(&path, b"new").unwrap_err();
        assert_eq!(problem.code.0, "write-protected");
        assert_eq!(read(&path).unwrap(), b"old");
        fs::remove_dir_all(folder).unwrap();
    }

    #[test]
    fn what_has_no_end_is_not_read() {
        let error = read(Path::new("/dev/zero")).unwrap_err();
        let expected = [ErrorKind::InvalidInput, ErrorKind::NotFound];
        assert!(expected.contains(&error.kind()));
    }
}
