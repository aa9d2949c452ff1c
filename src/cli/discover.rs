//! Which audit files a command is about, and where their certificates go.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

/// An audit file and the place of its certificate below the output folder.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Found {
    /// The audit file.
    pub path: PathBuf,
    /// Relative path of its certificate: sub-folders are kept, and `.audit.toml` or `.audit.json`
    /// becomes `.certificate.json`.
    pub certificate: PathBuf,
}

const ENDINGS: [&str; 2] = [".audit.toml", ".audit.json"];

/// Deepest folder that is searched.
const DEEPEST: usize = 64;

/// Lists the audit files that `paths` name: files as they are, folders with everything below
/// them, in the order of the paths and sorted within a folder. Symbolic links to folders are not
/// followed.
///
/// # Errors
///
/// A sentence for each path that cannot be read, folder without audit files, or two files whose
/// certificates would have the same place.
pub fn audit_files(paths: &[PathBuf]) -> Result<Vec<Found>, Vec<String>> {
    let mut found = Vec::new();
    let mut errors = Vec::new();
    for path in paths {
        if path.is_dir() {
            let before = found.len();
            below(path, path, 0, &mut found, &mut errors);
            if found.len() == before && errors.is_empty() {
                errors.push(format!(
                    "{}: no audit file below this folder; an audit file is named NAME.audit.toml or \
                     NAME.audit.json",
                    path.display()
                ));
            }
        } else {
            // Whether it exists and can be read shows when it is read.
            let name = path.file_name().map(PathBuf::from).unwrap_or_default();
            found.push(Found {
                path: path.clone(),
                certificate: certificate_path(&name),
            });
        }
    }
    let mut places: BTreeMap<&Path, &Path> = BTreeMap::new();
    for file in &found {
        if let Some(other) = places.insert(&file.certificate, &file.path)
            && other != file.path
        {
            errors.push(format!(
                "{} and {} would both write {}; rename one, or audit them into different folders",
                other.display(),
                file.path.display(),
                file.certificate.display()
            ));
        }
    }
    if errors.is_empty() {
        Ok(found)
    } else {
        Err(errors)
    }
}

fn below(
    root: &Path,
    folder: &Path,
    depth: usize,
    found: &mut Vec<Found>,
    errors: &mut Vec<String>,
) {
    if depth > DEEPEST {
        errors.push(format!(
            "{}: folders are nested more than {DEEPEST} deep",
            folder.display()
        ));
        return;
    }
    let entries = match fs_err::read_dir(folder).and_then(Iterator::collect::<Result<Vec<_>, _>>) {
        Ok(entries) => entries,
        Err(error) => {
            errors.push(error.to_string());
            return;
        }
    };
    let mut entries: Vec<(PathBuf, bool)> = entries
        .into_iter()
        .map(|entry| {
            (
                entry.path(),
                entry.file_type().is_ok_and(|kind| kind.is_dir()),
            )
        })
        .collect();
    entries.sort();
    for (path, is_folder) in entries {
        if is_folder {
            below(root, &path, depth + 1, found, errors);
        } else if is_audit_file(&path) {
            let relative = path.strip_prefix(root).unwrap_or(&path);
            found.push(Found {
                certificate: certificate_path(relative),
                path,
            });
        }
    }
}

fn is_audit_file(path: &Path) -> bool {
    let name = path.file_name().unwrap_or_default().to_string_lossy();
    ENDINGS
        .iter()
        .any(|ending| name.ends_with(ending) && name.len() > ending.len())
}

fn certificate_path(relative: &Path) -> PathBuf {
    let name = relative.file_name().unwrap_or_default().to_string_lossy();
    let stem = ENDINGS
        .iter()
        .find_map(|ending| name.strip_suffix(ending))
        .or_else(|| name.rsplit_once('.').map(|(stem, _)| stem))
        .unwrap_or(&name);
    relative.with_file_name(format!("{stem}.certificate.json"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn folders_are_searched_in_order_and_subfolders_kept() {
        let root = tempfile::tempdir().unwrap();
        let make = |name: &str| {
            let path = root.path().join(name);
            fs_err::create_dir_all(path.parent().unwrap()).unwrap();
            fs_err::write(path, "").unwrap();
        };
        make("b/two.audit.json");
        make("a.audit.toml");
        make("b/notes.toml");
        make("b/.audit.toml");
        let found = audit_files(&[root.path().to_owned()]).unwrap();
        let places: Vec<_> = found
            .iter()
            .map(|f| f.certificate.display().to_string())
            .collect();
        assert_eq!(places, ["a.certificate.json", "b/two.certificate.json"]);
        make("b/two.audit.toml");
        let errors = audit_files(&[root.path().to_owned()]).unwrap_err();
        assert!(
            errors[0].contains("would both write b/two.certificate.json"),
            "{errors:?}"
        );
        let empty = tempfile::tempdir().unwrap();
        assert!(audit_files(&[empty.path().to_owned()]).unwrap_err()[0].contains("no audit file"));
    }
}
