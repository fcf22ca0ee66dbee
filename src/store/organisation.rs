//! The organisation that owns the records of a fresh installation.

use super::{Store, StoreError};
use uuid::Uuid;

/// Inner id of an organisation. Every record carries one and every query names it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct OrganisationId(pub(crate) i64);

impl OrganisationId {
    /// No organisation: it has no records.
    pub(crate) const NOBODY: OrganisationId = OrganisationId(0);
}

const FIRST: &str = "SELECT id FROM organisation ORDER BY id LIMIT 1";
const ALL: &str = "SELECT id FROM organisation ORDER BY id";
const ADD: &str = "INSERT INTO organisation (public_id, name, created_at) VALUES ($1, $2, $3) RETURNING id";

/// The statements of this file.
pub(crate) const STATEMENTS: &[&str] = &[FIRST, ALL, ADD];

impl Store {
    /// The first organisation, made with the given id and name where there is none yet.
    ///
    /// # Errors
    /// When the database fails.
    pub async fn first_organisation(
        &self,
        id: Uuid,
        name: &'static str,
        now: i64,
    ) -> Result<OrganisationId, StoreError> {
        self.write(move |connection| {
            Box::pin(async move {
                if let Some(id) = sqlx::query_scalar(FIRST).fetch_optional(&mut *connection).await? {
                    return Ok(OrganisationId(id));
                }
                add(connection, id, name, now).await
            })
        })
        .await
    }

    /// Every organisation.
    ///
    /// # Errors
    /// When the database fails.
    pub async fn organisations(&self) -> Result<Vec<OrganisationId>, StoreError> {
        let mut reader = self.reader().await?;
        let ids: Vec<i64> = sqlx::query_scalar(ALL).fetch_all(&mut *reader).await?;
        Ok(ids.into_iter().map(OrganisationId).collect())
    }

    /// Another organisation.
    ///
    /// # Errors
    /// When the id is taken or the database fails.
    pub async fn add_organisation(
        &self,
        id: Uuid,
        name: &'static str,
        now: i64,
    ) -> Result<OrganisationId, StoreError> {
        self.write(move |connection| Box::pin(add(connection, id, name, now)))
            .await
    }
}

async fn add(
    connection: &mut super::Connection,
    id: Uuid,
    name: &'static str,
    now: i64,
) -> Result<OrganisationId, StoreError> {
    let added = sqlx::query_scalar(ADD).bind(id.to_string()).bind(name).bind(now);
    Ok(OrganisationId(added.fetch_one(connection).await?))
}
