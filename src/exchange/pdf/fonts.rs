//! The faces of the paper, read once, and which characters they have.

use std::sync::LazyLock;
use typst::foundations::Bytes;
use typst::text::{Font, FontBook};
use typst::utils::LazyHash;

/// The faces, compiled in: the same statement looks the same on every machine. Licences lie beside them.
const FACES: [&[u8]; 3] = [
    include_bytes!("../../../templates/print/fonts/SourceSans3-Regular.otf"),
    include_bytes!("../../../templates/print/fonts/SourceSans3-Semibold.otf"),
    include_bytes!("../../../templates/print/fonts/Vollkorn-SemiBold-Latin.ttf"),
];

/// The faces and the book that finds them.
pub(super) struct Fonts {
    pub faces: Vec<Font>,
    pub book: LazyHash<FontBook>,
}

/// The faces of the paper.
pub(super) static FONTS: LazyLock<Fonts> = LazyLock::new(|| {
    let faces: Vec<Font> = FACES
        .iter()
        .filter_map(|&face| Font::new(Bytes::new(face), 0))
        .collect();
    let book = LazyHash::new(FontBook::from_fonts(&faces));
    Fonts { faces, book }
});

/// True if the text face has `c` in both its weights. A character that no face has would make the file unfit for the
/// archive standard, and the writer refuse it.
pub(super) fn has(c: char) -> bool {
    let mut text = FONTS
        .faces
        .iter()
        .map(Font::info)
        .filter(|info| info.family == "Source Sans 3")
        .peekable();
    text.peek().is_some() && text.all(|info| info.coverage.contains(u32::from(c)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_face_is_read_and_named_as_the_template_names_it() {
        let names: Vec<&str> = FONTS
            .faces
            .iter()
            .map(|font| font.info().family.as_str())
            .collect();
        assert_eq!(names, ["Source Sans 3", "Source Sans 3", "Vollkorn"]);
        assert!(has('\u{2212}') && has('\u{2009}') && has('Ж') && has('\u{25a1}'));
        assert!(!has('中') && !has('\u{1f33e}'));
    }
}
