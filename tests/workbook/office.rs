//! A spreadsheet program without a window: opens workbooks, works every formula out anew, and saves them again.

use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::process::Command;

/// Its settings: formulas are worked out on loading, whatever figures the file carries.
const SETTINGS: &str = r#"<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry" xmlns:xs="http://www.w3.org/2001/XMLSchema" xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance">
<item oor:path="/org.openoffice.Office.Calc/Formula/Load"><prop oor:name="OOXMLRecalcMode" oor:op="fuse"><value>0</value></prop></item>
</oor:items>
"#;

/// Opens and saves workbooks by name; the answer holds the path of each saved one.
pub fn recalculate(books: &BTreeMap<String, Vec<u8>>, folder: &str) -> BTreeMap<String, PathBuf> {
    let root = Path::new(env!("CARGO_TARGET_TMPDIR")).join(folder);
    let _ = std::fs::remove_dir_all(&root);
    let (from, to) = (root.join("in"), root.join("out"));
    let profile = root.join("profile");
    for folder in [&from, &to, &profile.join("user")] {
        std::fs::create_dir_all(folder).expect("a folder");
    }
    std::fs::write(profile.join("user/registrymodifications.xcu"), SETTINGS).expect("settings");
    let mut files = Vec::new();
    for (name, bytes) in books {
        let path = from.join(format!("{name}.xlsx"));
        std::fs::write(&path, bytes).expect("a workbook");
        files.push(path);
    }
    for some in files.chunks(60) {
        let output = Command::new("soffice")
            .arg(format!("-env:UserInstallation=file://{}", profile.display()))
            .args([
                "--headless",
                "--norestore",
                "--convert-to",
                "xlsx:Calc MS Excel 2007 XML",
                "--outdir",
            ])
            .arg(&to)
            .args(some)
            .output()
            .expect("soffice: install the Debian package libreoffice-calc-nogui");
        assert!(
            output.status.success(),
            "{}",
            String::from_utf8_lossy(&output.stderr)
        );
    }
    let saved = |name: &String| {
        let path = to.join(format!("{name}.xlsx"));
        assert!(path.is_file(), "{name} was not saved");
        (name.clone(), path)
    };
    books.keys().map(saved).collect()
}
