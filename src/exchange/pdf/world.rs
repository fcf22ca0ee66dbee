//! What the typesetting library may see: three files of fixed names, our faces, the day of the statement. Nothing else.

use super::fonts::FONTS;
use super::sheet::Day;
use std::sync::LazyLock;
use typst::diag::{FileError, FileResult};
use typst::foundations::{Bytes, Datetime, Duration};
use typst::syntax::{FileId, RootedPath, Source, VirtualPath, VirtualRoot};
use typst::text::{Font, FontBook};
use typst::utils::LazyHash;
use typst::{Feature, Library, LibraryExt, World};

const TEMPLATE: &str = include_str!("../../../templates/print/statement.typ");
const MARK: &[u8] = include_bytes!("../../../templates/print/mark.svg");

/// Row headers of tables are still an extra of the library; readers aloud need them.
static LIBRARY: LazyLock<LazyHash<Library>> = LazyLock::new(|| {
    let features = [Feature::A11yExtras].into_iter().collect();
    LazyHash::new(Library::builder().with_features(features).build())
});

/// The file names. Each new name is kept by the library for ever, so there are no others.
static MAIN: LazyLock<FileId> = LazyLock::new(|| name("main.typ"));
static DATA: LazyLock<FileId> = LazyLock::new(|| name("data.json"));
static LADDER: LazyLock<FileId> = LazyLock::new(|| name("ladder.svg"));
static CODE: LazyLock<FileId> = LazyLock::new(|| name("code.svg"));
static BRAND: LazyLock<FileId> = LazyLock::new(|| name("mark.svg"));

#[expect(
    clippy::expect_used,
    reason = "the names are constants above: no input can lead here"
)]
fn name(name: &str) -> FileId {
    let path = VirtualPath::new(name).expect("a plain file name");
    RootedPath::new(VirtualRoot::Project, path).intern()
}

/// One statement to be set.
pub(super) struct Desk {
    /// The sheet as JSON bytes: the template reads them, they are never part of its markup.
    pub data: Bytes,
    /// The ladder; empty if there is none.
    pub ladder: Bytes,
    /// The QR code.
    pub code: Bytes,
    /// The day of the statement, which is "today" for the library.
    pub day: Day,
}

impl World for Desk {
    fn library(&self) -> &LazyHash<Library> {
        &LIBRARY
    }

    fn book(&self) -> &LazyHash<FontBook> {
        &FONTS.book
    }

    fn main(&self) -> FileId {
        *MAIN
    }

    fn source(&self, id: FileId) -> FileResult<Source> {
        if id == *MAIN {
            Ok(Source::new(id, TEMPLATE.to_owned()))
        } else {
            Err(FileError::AccessDenied)
        }
    }

    fn file(&self, id: FileId) -> FileResult<Bytes> {
        match id {
            id if id == *DATA => Ok(self.data.clone()),
            id if id == *LADDER => Ok(self.ladder.clone()),
            id if id == *CODE => Ok(self.code.clone()),
            id if id == *BRAND => Ok(Bytes::new(MARK)),
            _ => Err(FileError::AccessDenied),
        }
    }

    fn font(&self, index: usize) -> Option<Font> {
        FONTS.faces.get(index).cloned()
    }

    fn today(&self, _offset: Option<Duration>) -> Option<Datetime> {
        Datetime::from_ymd(i32::from(self.day.year), self.day.month, self.day.day)
    }
}
