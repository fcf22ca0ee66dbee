//! The SQL of the rows beside a document: one statement writes all rows of a table. `json_each` reads our own JSON,
//! so figures reach the columns without SQLite ever writing one as text.

use super::{RowTexts, Rows};
use crate::store::{Connection, OrganisationId, StoreError};
use serde::Serialize;

const ADD_STAGES: &str = "\
    INSERT INTO stage (organisation_id, revision_id, position, key, kind, name, material, amount, unit) \
    SELECT $1, $2, value ->> 'position', value ->> 'key', value ->> 'kind', value ->> 'name', value ->> 'material', \
           value ->> 'amount', value ->> 'unit' FROM json_each($3)";
const ADD_INTAKES: &str = "\
    INSERT INTO intake (organisation_id, revision_id, stage_key, position, source, product, amount, unit) \
    SELECT $1, $2, value ->> 'stage_key', value ->> 'position', value ->> 'source', value ->> 'product', \
           value ->> 'amount', value ->> 'unit' FROM json_each($3)";
const ADD_INPUTS: &str = "\
    INSERT INTO input (organisation_id, revision_id, stage_key, position, key, label, way, model, factors, amount, unit, \
                       origin) \
    SELECT $1, $2, value ->> 'stage_key', value ->> 'position', value ->> 'key', value ->> 'label', value ->> 'way', \
           value ->> 'model', value ->> 'factors', value ->> 'amount', value ->> 'unit', value ->> 'origin' \
    FROM json_each($3)";
const ADD_CO_PRODUCTS: &str = "\
    INSERT INTO co_product (organisation_id, revision_id, stage_key, position, key, name, role, material, amount, unit) \
    SELECT $1, $2, value ->> 'stage_key', value ->> 'position', value ->> 'key', value ->> 'name', value ->> 'role', \
           value ->> 'material', value ->> 'amount', value ->> 'unit' FROM json_each($3)";
const ADD_USES: &str = "\
    INSERT INTO factor_use (organisation_id, revision_id, factor, pointer, stage_key, input_key, co_product_key) \
    SELECT $1, $2, value ->> 'factor', value ->> 'pointer', value ->> 'stage_key', value ->> 'input_key', \
           value ->> 'co_product_key' FROM json_each($3)";
const ADD_EVIDENCE_USES: &str = "\
    INSERT INTO evidence_use (organisation_id, revision_id, evidence, pointer, stage_key, input_key) \
    SELECT $1, $2, value ->> 'evidence', value ->> 'pointer', value ->> 'stage_key', value ->> 'input_key' \
    FROM json_each($3)";
const STAGES: &str = "\
    SELECT position, key, kind, name, material, amount, unit FROM stage \
    WHERE organisation_id = $1 AND revision_id = $2 ORDER BY id";
const INTAKES: &str = "\
    SELECT stage_key, position, source, product, amount, unit FROM intake \
    WHERE organisation_id = $1 AND revision_id = $2 ORDER BY id";
const INPUTS: &str = "\
    SELECT stage_key, position, key, label, way, model, factors, amount, unit, origin FROM input \
    WHERE organisation_id = $1 AND revision_id = $2 ORDER BY id";
const CO_PRODUCTS: &str = "\
    SELECT stage_key, position, key, name, role, material, amount, unit FROM co_product \
    WHERE organisation_id = $1 AND revision_id = $2 ORDER BY id";
const USES: &str = "\
    SELECT factor, pointer, stage_key, input_key, co_product_key FROM factor_use \
    WHERE organisation_id = $1 AND revision_id = $2 ORDER BY id";
const EVIDENCE_USES: &str = "\
    SELECT evidence, pointer, stage_key, input_key FROM evidence_use \
    WHERE organisation_id = $1 AND revision_id = $2 ORDER BY id";
const USES_OF: &str = "\
    SELECT p.public_id, p.name, p.archived_at, r.number, u.factor, u.pointer, u.stage_key, u.input_key, u.co_product_key \
    FROM factor_use u \
    JOIN revision r ON r.id = u.revision_id AND r.organisation_id = u.organisation_id \
    JOIN pathway p ON p.id = r.pathway_id AND p.current_revision = r.number AND p.organisation_id = r.organisation_id \
    WHERE u.organisation_id = $1 AND u.factor = $2 ORDER BY p.name_folded, p.public_id, u.id";

/// The statements of this file.
pub(crate) const STATEMENTS: &[&str] = &[
    ADD_STAGES,
    ADD_INTAKES,
    ADD_INPUTS,
    ADD_CO_PRODUCTS,
    ADD_USES,
    ADD_EVIDENCE_USES,
    STAGES,
    INTAKES,
    INPUTS,
    CO_PRODUCTS,
    USES,
    EVIDENCE_USES,
    USES_OF,
];

/// A stage and its output.
#[derive(Clone, Debug, PartialEq, Serialize, sqlx::FromRow)]
#[allow(missing_docs, reason = "columns of the table of the same name")]
pub struct StageRow {
    pub position: i64,
    pub key: String,
    pub kind: String,
    pub name: Option<String>,
    pub material: String,
    pub amount: Option<f64>,
    pub unit: Option<String>,
}

/// What a stage takes of an earlier one.
#[derive(Clone, Debug, PartialEq, Serialize, sqlx::FromRow)]
#[allow(missing_docs, reason = "columns of the table of the same name")]
pub struct IntakeRow {
    pub stage_key: String,
    pub position: i64,
    pub source: String,
    pub product: Option<String>,
    pub amount: Option<f64>,
    pub unit: Option<String>,
}

/// An input as entered.
#[derive(Clone, Debug, PartialEq, Serialize, sqlx::FromRow)]
#[allow(missing_docs, reason = "columns of the table of the same name")]
pub struct InputRow {
    pub stage_key: String,
    pub position: i64,
    pub key: String,
    pub label: Option<String>,
    pub way: String,
    pub model: Option<String>,
    pub factors: String,
    pub amount: Option<f64>,
    pub unit: Option<String>,
    pub origin: Option<String>,
}

/// A second product.
#[derive(Clone, Debug, PartialEq, Serialize, sqlx::FromRow)]
#[allow(missing_docs, reason = "columns of the table of the same name")]
pub struct CoProductRow {
    pub stage_key: String,
    pub position: i64,
    pub key: String,
    pub name: String,
    pub role: String,
    pub material: String,
    pub amount: Option<f64>,
    pub unit: Option<String>,
}

/// A place that names a published row, `edition/row`.
#[derive(Clone, Debug, PartialEq, Serialize, sqlx::FromRow)]
#[allow(missing_docs, reason = "columns of the table of the same name")]
pub struct UseRow {
    pub factor: String,
    pub pointer: String,
    pub stage_key: Option<String>,
    pub input_key: Option<String>,
    pub co_product_key: Option<String>,
}

/// A place that names evidence, by its public id.
#[derive(Clone, Debug, PartialEq, Serialize, sqlx::FromRow)]
#[allow(missing_docs, reason = "columns of the table of the same name")]
pub struct EvidenceUseRow {
    pub evidence: String,
    pub pointer: String,
    pub stage_key: Option<String>,
    pub input_key: Option<String>,
}

/// A use with its pathway.
#[derive(sqlx::FromRow)]
pub(in crate::pathways) struct UseOfRow {
    pub(in crate::pathways) public_id: String,
    pub(in crate::pathways) name: String,
    pub(in crate::pathways) archived_at: Option<i64>,
    pub(in crate::pathways) number: i64,
    #[sqlx(flatten)]
    pub(in crate::pathways) place: UseRow,
}

/// Where the current revisions of an organisation name a published row.
pub(in crate::pathways) async fn uses_of(
    c: &mut Connection,
    who: OrganisationId,
    factor: &str,
) -> Result<Vec<UseOfRow>, StoreError> {
    Ok(sqlx::query_as(USES_OF)
        .bind(who.0)
        .bind(factor)
        .fetch_all(c)
        .await?)
}

/// Writes all rows of a revision.
pub(in crate::pathways) async fn write(
    c: &mut Connection,
    who: OrganisationId,
    revision: i64,
    rows: &RowTexts,
) -> Result<(), StoreError> {
    let tables = [
        (ADD_STAGES, &rows.stages),
        (ADD_INTAKES, &rows.intakes),
        (ADD_INPUTS, &rows.inputs),
        (ADD_CO_PRODUCTS, &rows.co_products),
        (ADD_USES, &rows.uses),
        (ADD_EVIDENCE_USES, &rows.evidence),
    ];
    for (sql, json) in tables {
        if let Some(json) = json {
            sqlx::query(sql)
                .bind(who.0)
                .bind(revision)
                .bind(json)
                .execute(&mut *c)
                .await?;
        }
    }
    Ok(())
}

/// Reads all rows of a revision, in the order they were written.
pub(in crate::pathways) async fn read(
    c: &mut Connection,
    who: OrganisationId,
    revision: i64,
) -> Result<Rows, StoreError> {
    Ok(Rows {
        stages: sqlx::query_as::<_, StageRow>(STAGES)
            .bind(who.0)
            .bind(revision)
            .fetch_all(&mut *c)
            .await?,
        intakes: sqlx::query_as::<_, IntakeRow>(INTAKES)
            .bind(who.0)
            .bind(revision)
            .fetch_all(&mut *c)
            .await?,
        inputs: sqlx::query_as::<_, InputRow>(INPUTS)
            .bind(who.0)
            .bind(revision)
            .fetch_all(&mut *c)
            .await?,
        co_products: sqlx::query_as::<_, CoProductRow>(CO_PRODUCTS)
            .bind(who.0)
            .bind(revision)
            .fetch_all(&mut *c)
            .await?,
        uses: sqlx::query_as::<_, UseRow>(USES)
            .bind(who.0)
            .bind(revision)
            .fetch_all(&mut *c)
            .await?,
        evidence: sqlx::query_as::<_, EvidenceUseRow>(EVIDENCE_USES)
            .bind(who.0)
            .bind(revision)
            .fetch_all(&mut *c)
            .await?,
    })
}
