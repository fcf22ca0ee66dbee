//! Reads posted forms with files (multipart/form-data) piece by piece: nothing is held whole, each file keeps to its limit,
//! and what stops arriving is given up.

use super::extract::{Form, Limits, is_of_type, megabytes, next_piece};
use super::problem::{Refusal, shown};
use axum::body::Bytes;
use axum::extract::multipart::{Field, MultipartError};
use axum::extract::{DefaultBodyLimit, FromRequest, Request};
use axum::http::StatusCode;
use axum::http::header::{CONTENT_LENGTH, EXPECT};
use std::future::Future;

/// Name of the hidden field that proves where a form of a page comes from. The check of forms takes it out before anyone
/// reads them; where none is made it is passed over.
pub const FORM_TOKEN: &str = "form_token";

/// A posted form with files.
pub struct Multipart {
    parts: axum::extract::Multipart,
    limits: Limits,
}

/// One field of it, of which nothing was read yet.
pub struct Part<'m> {
    field: Field<'m>,
    limits: Limits,
    arrived: usize,
}

/// A posted form, with files or without.
pub enum Posted {
    /// Its fields.
    Fields(Vec<(String, String)>),
    /// Its fields and files, still to be read.
    Parts(Multipart),
}

fn is_multipart(request: &Request) -> bool {
    is_of_type(request.headers(), |kind| kind == "multipart/form-data")
}

impl<S: Send + Sync> FromRequest<S> for Posted {
    type Rejection = Refusal;

    async fn from_request(request: Request, state: &S) -> Result<Posted, Refusal> {
        if is_multipart(&request) {
            Ok(Posted::Parts(Multipart::from_request(request, state).await?))
        } else {
            let Form(fields) = Form::from_request(request, state).await?;
            Ok(Posted::Fields(fields))
        }
    }
}

impl<S: Send + Sync> FromRequest<S> for Multipart {
    type Rejection = Refusal;

    async fn from_request(mut request: Request, state: &S) -> Result<Multipart, Refusal> {
        if !is_multipart(&request) {
            return Err(Refusal::of(StatusCode::UNSUPPORTED_MEDIA_TYPE)
                .detail("Send the form as multipart/form-data."));
        }
        let limits = Limits::of(request.extensions());
        // The fields beside the files are as long as any body may be.
        let most = limits.evidence_bytes.saturating_add(limits.body_bytes);
        let told = request
            .headers()
            .get(CONTENT_LENGTH)
            .and_then(|n| n.to_str().ok())
            .and_then(|n| n.parse::<u64>().ok());
        if told.is_some_and(|told| told > most as u64) {
            let waits_for_leave = request.headers().contains_key(EXPECT);
            if !waits_for_leave {
                let_it_finish(request, &limits, most.saturating_mul(2)).await?;
            }
            return Err(refused_size(&limits));
        }
        DefaultBodyLimit::max(most).apply(&mut request);
        match axum::extract::Multipart::from_request(request, state).await {
            Ok(parts) => Ok(Multipart { parts, limits }),
            Err(_) => Err(Refusal::bad_request(
                "The content type names no boundary of the parts.",
            )),
        }
    }
}

/// A sender that is cut off while it sends sees a broken connection and not our answer: it may finish, within reason.
async fn let_it_finish(request: Request, limits: &Limits, most: usize) -> Result<(), Refusal> {
    let mut pieces = request.into_body().into_data_stream();
    let mut arrived = 0_usize;
    while let Some(piece) = next_piece(&mut pieces, limits).await? {
        arrived = arrived.saturating_add(piece.len());
        if arrived > most {
            break;
        }
    }
    Ok(())
}

impl Multipart {
    /// The next field; what is left of the one before is passed over.
    ///
    /// # Errors
    /// 408 when nothing comes in time, 400 when the form breaks off or is none, 413 when it is too large.
    pub async fn next(&mut self) -> Result<Option<Part<'_>>, Refusal> {
        let limits = self.limits;
        let field = in_time(&limits, self.parts.next_field()).await?;
        Ok(field.map(|field| Part {
            field,
            limits,
            arrived: 0,
        }))
    }
}

impl Part<'_> {
    /// Name of the field.
    pub fn name(&self) -> &str {
        self.field.name().unwrap_or_default()
    }

    /// Name of the file, as sent; none for a field of text.
    pub fn file_name(&self) -> Option<&str> {
        self.field.file_name()
    }

    /// Media type, as sent; empty where none was.
    pub fn media_type(&self) -> &str {
        self.field.content_type().unwrap_or_default()
    }

    /// The next piece of a file.
    ///
    /// # Errors
    /// 413 beyond the limit of a file, else as [`Multipart::next`].
    pub async fn piece(&mut self) -> Result<Option<Bytes>, Refusal> {
        let most = self.limits.evidence_bytes;
        let piece = self.raw_piece().await?;
        if self.arrived <= most {
            return Ok(piece);
        }
        // The whole form has a limit of its own, so this ends.
        while self.raw_piece().await?.is_some() {}
        Err(refused_size(&self.limits))
    }

    /// The whole text of a field.
    ///
    /// # Errors
    /// 413 beyond the limit of a body, 400 when it is not UTF-8, else as [`Multipart::next`].
    pub async fn text(mut self) -> Result<String, Refusal> {
        let mut bytes = Vec::new();
        while let Some(piece) = self.raw_piece().await? {
            if self.arrived > self.limits.body_bytes {
                return Err(refused_size(&self.limits));
            }
            bytes.extend_from_slice(&piece);
        }
        let name = shown(self.name());
        String::from_utf8(bytes).map_err(|_| {
            Refusal::bad_request(format!("The field \"{name}\" holds bytes that are not UTF-8."))
        })
    }

    async fn raw_piece(&mut self) -> Result<Option<Bytes>, Refusal> {
        let piece = in_time(&self.limits, self.field.chunk()).await?;
        let length = piece.as_ref().map_or(0, Bytes::len);
        self.arrived = self.arrived.saturating_add(length);
        Ok(piece)
    }
}

async fn in_time<T>(
    limits: &Limits,
    work: impl Future<Output = Result<T, MultipartError>>,
) -> Result<T, Refusal> {
    match tokio::time::timeout(limits.body_pause, work).await {
        Err(_) => Err(Refusal::of(StatusCode::REQUEST_TIMEOUT)),
        Ok(Ok(value)) => Ok(value),
        Ok(Err(error)) if error.status() == StatusCode::PAYLOAD_TOO_LARGE => Err(refused_size(limits)),
        Ok(Err(_)) => Err(Refusal::bad_request(
            "The form broke off, or its parts cannot be told apart.",
        )),
    }
}

fn refused_size(limits: &Limits) -> Refusal {
    let most = megabytes(limits.evidence_bytes);
    Refusal::too_large(
        format!("The file is larger than the {most} this service takes."),
        format!(
            "Send a file of at most {most} ({} bytes), or have the setting evidence_bytes raised.",
            limits.evidence_bytes
        ),
    )
}
