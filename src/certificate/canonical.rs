//! Canonical bytes (RFC 8785) and atomic writing.

use std::io::Write;
use std::path::Path;

use crate::certificate::model::Certificate;

/// The certificate as canonical JSON: keys sorted, no white space, no trailing newline. Every
/// number that carries meaning is a string, so no reader can lose a digit.
///
/// # Errors
///
/// None in practice: the model has string keys and no number that JSON cannot hold.
pub fn bytes(certificate: &Certificate) -> Result<Vec<u8>, serde_json::Error> {
    serde_json_canonicalizer::to_vec(certificate)
}

/// Writes `bytes` to `path` so that a reader sees the old file or the new one, never a part: a
/// temporary file in the same folder, flushed to disk, then renamed over the target.
///
/// # Errors
///
/// Any error of the file system, with the path; the old file is then untouched.
pub fn write(path: &Path, bytes: &[u8]) -> std::io::Result<()> {
    let folder = path
        .parent()
        .filter(|p| !p.as_os_str().is_empty())
        .unwrap_or(Path::new("."));
    fs_err::create_dir_all(folder)?;
    let mut file = tempfile::Builder::new()
        .prefix(".boundmark-")
        .tempfile_in(folder)?;
    file.write_all(bytes)?;
    file.as_file().sync_all()?;
    // A temporary file is private to its owner; a certificate is published.
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        file.as_file()
            .set_permissions(std::fs::Permissions::from_mode(0o644))?;
    }
    file.persist(path).map_err(|error| {
        std::io::Error::new(
            error.error.kind(),
            format!("{}: {}", path.display(), error.error),
        )
    })?;
    Ok(())
}
