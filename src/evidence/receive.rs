//! A posted file with what stands beside it, taken in piece by piece.

use super::{Arrived, EvidenceError, Incoming, Naming};
use crate::app::App;
use crate::core::documents::Problem;
use crate::web::Refusal;
use crate::web::multipart::{FORM_TOKEN, Multipart, Part};
use crate::web::problem::shown;

/// The file of one part; none for a field of a form in which no file was chosen.
///
/// # Errors
/// When it is too large, too slow or breaks off, or cannot be put down.
pub async fn file(app: &App, mut part: Part<'_>) -> Result<Option<(Arrived, Naming)>, Refusal> {
    let naming = Naming {
        file_name: part.file_name().unwrap_or_default().to_owned(),
        media_type: part.media_type().to_owned(),
        ..Naming::default()
    };
    let mut incoming = Incoming::begin(app).await?;
    while let Some(piece) = part.piece().await? {
        incoming.add(&piece).await?;
    }
    let arrived = incoming.arrived().await?;
    // What a browser sends for a field of files that was left alone.
    let left_alone = naming.file_name.is_empty() && arrived.size == 0;
    Ok((!left_alone).then_some((arrived, naming)))
}

/// The parts `file`, `id` and `note`, in any order.
///
/// # Errors
/// When another part is there, the file is missing, or as [`file`].
pub(super) async fn whole(app: &App, parts: &mut Multipart) -> Result<(Arrived, Naming), Refusal> {
    let (mut found, mut id, mut note) = (None, None, None);
    while let Some(part) = parts.next().await? {
        match part.name() {
            "file" if found.is_none() => found = file(app, part).await?,
            "id" if id.is_none() => id = Some(part.text().await?),
            "note" if note.is_none() => note = Some(part.text().await?),
            FORM_TOKEN => {}
            name @ ("file" | "id" | "note") => {
                let words = format!("The form has two fields \"{name}\". Send one file at a time.");
                return Err(Refusal::bad_request(words));
            }
            name => {
                let words = format!(
                    "The form takes no field \"{}\". Send \"file\", and \"id\" and \"note\" if you like.",
                    shown(name)
                );
                return Err(Refusal::bad_request(words));
            }
        }
    }
    let Some((arrived, naming)) = found else {
        let problem = Problem {
            pointer: "/file".into(),
            detail: "There is no file.".into(),
            remedy: "Choose the file that backs the figure, and send it as the part \"file\".".into(),
        };
        return Err(EvidenceError::Problems(problem.into()).into());
    };
    Ok((arrived, Naming { id, note, ..naming }))
}
