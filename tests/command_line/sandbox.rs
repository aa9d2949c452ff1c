//! A folder to run the program in, and small audit files.

use std::ffi::OsStr;
use std::path::{Path, PathBuf};

use assert_cmd::Command;
use tempfile::TempDir;

pub const PROGRAM: &str = env!("CARGO_BIN_EXE_boundmark");

/// Variables that change colours or messages.
const VARIABLES: [&str; 6] = [
    "NO_COLOR",
    "CLICOLOR",
    "CLICOLOR_FORCE",
    "FORCE_COLOR",
    "RUST_BACKTRACE",
    "CI",
];

/// A temporary folder.
pub struct Sandbox {
    folder: TempDir,
}

impl Sandbox {
    pub fn new() -> Self {
        let folder = tempfile::tempdir().expect("a temporary folder");
        Self { folder }
    }

    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// Writes a file and the folders above it.
    pub fn write(&self, name: &str, text: impl AsRef<[u8]>) -> PathBuf {
        let path = self.path(name);
        std::fs::create_dir_all(path.parent().expect("a folder")).expect("folders are made");
        std::fs::write(&path, text).expect("the file is written");
        path
    }

    pub fn read(&self, name: &str) -> String {
        std::fs::read_to_string(self.path(name)).unwrap_or_else(|error| panic!("{name}: {error}"))
    }

    /// Every file below a folder, relative to it, sorted.
    pub fn files(&self, name: &str) -> Vec<String> {
        let root = self.path(name);
        let mut found = Vec::new();
        let mut folders = vec![root.clone()];
        while let Some(folder) = folders.pop() {
            for entry in std::fs::read_dir(folder).expect("the folder can be read") {
                let path = entry.expect("an entry").path();
                if path.is_dir() {
                    folders.push(path);
                } else {
                    let relative = path.strip_prefix(&root).expect("below the folder");
                    found.push(relative.display().to_string());
                }
            }
        }
        found.sort();
        found
    }

    /// The program with these arguments, run in the folder.
    pub fn command(&self, arguments: impl IntoIterator<Item = impl AsRef<OsStr>>) -> Command {
        let mut command = Command::new(PROGRAM);
        command.args(arguments);
        self.prepared(command)
    }

    /// `boundmark audit` with these arguments, run in the folder.
    pub fn audit(&self, arguments: impl IntoIterator<Item = impl AsRef<OsStr>>) -> Command {
        let mut command = Command::new(PROGRAM);
        command.arg("audit").args(arguments);
        self.prepared(command)
    }

    /// Some program, run in the folder.
    pub fn prepared(&self, mut command: Command) -> Command {
        for variable in VARIABLES {
            command.env_remove(variable);
        }
        command.current_dir(self.folder.path());
        // No audit here may take long: a hang is a failure.
        command.timeout(std::time::Duration::from_secs(120));
        command
    }

    /// `boundmark audit` as a user who may not do everything: the superuser of a container could
    /// read and write whatever the permissions say.
    #[cfg(unix)]
    pub fn audit_unprivileged(&self, arguments: &[&str]) -> Command {
        use std::os::unix::process::CommandExt;
        const NOBODY: u32 = 65534;
        if !is_superuser(self.folder.path()) {
            return self.audit(arguments);
        }
        set_mode(self.folder.path(), 0o755);
        let program = self.path("boundmark");
        std::fs::copy(PROGRAM, &program).expect("a copy of the program");
        let mut command = std::process::Command::new(program);
        command.arg("audit").args(arguments).uid(NOBODY).gid(NOBODY);
        self.prepared(Command::from_std(command))
    }
}

#[cfg(unix)]
fn is_superuser(folder: &Path) -> bool {
    use std::os::unix::fs::MetadataExt;
    std::fs::metadata(folder)
        .expect("the folder is there")
        .uid()
        == 0
}

#[cfg(unix)]
pub fn set_mode(path: &Path, mode: u32) {
    use std::os::unix::fs::PermissionsExt;
    std::fs::set_permissions(path, std::fs::Permissions::from_mode(mode))
        .expect("permissions are set");
}

/// Texts of audit files.
pub struct Audit;

impl Audit {
    /// A polynomial for a formula, with a claim on the absolute error.
    pub fn polynomial(
        formula: &str,
        [left, right]: [&str; 2],
        coefficients: &[&str],
        at_most: Option<&str>,
    ) -> String {
        let coefficients: Vec<String> = coefficients.iter().map(|c| format!("\"{c}\"")).collect();
        let at_most = at_most.map_or(String::new(), |bound| format!("at_most = \"{bound}\"\n"));
        format!(
            "title = \"Exponential\"\n\
             [reference]\nformula = \"{formula}\"\n\
             [approximant]\nbasis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\n\
             pieces = [ {{ on = [\"{left}\", \"{right}\"], coefficients = [{}] }} ]\n\
             [[claims]]\nid = \"accuracy\"\nof = \"exact\"\nerror = \"absolute\"\n{at_most}",
            coefficients.join(", ")
        )
    }

    fn exponential(at_most: Option<&str>) -> String {
        Self::polynomial("exp(x)", ["0", "0.25"], &["1", "1", "0.52"], at_most)
    }

    /// The supremum is exp(1/4) - 1.2825 = 0.001525...
    pub fn holds() -> String {
        Self::exponential(Some("2e-3"))
    }

    pub fn fails() -> String {
        Self::exponential(Some("1e-3"))
    }

    pub fn measured() -> String {
        Self::exponential(None)
    }

    /// The supremum is exactly the bound, and is reached at pi/2 only: no enclosure shows that.
    pub fn undecided() -> String {
        Self::polynomial("sin(x)", ["0", "2"], &["0"], Some("1"))
    }

    /// The line x + 1 on many pieces of [0, 1].
    pub fn many_pieces(count: usize) -> String {
        let pieces: Vec<String> = (0..count)
            .map(|k| {
                format!(
                    "{{ on = [\"{k}/{count}\", \"{}/{count}\"], coefficients = [\"1\", \"1\"] }}",
                    k + 1
                )
            })
            .collect();
        format!(
            "[reference]\nformula = \"exp(x)\"\n\
             [approximant]\nbasis = \"power\"\nvariable = \"x\"\norder = \"ascending\"\n\
             pieces = [ {} ]\n\
             [[claims]]\nof = \"exact\"\nerror = \"absolute\"\nat_most = \"0.8\"\n",
            pieces.join(",\n  ")
        )
    }
}
