//! Blends and kilometres: the ethanol a figure or a stored pathway.

use super::super::blend::{blend, intensity, kilometre};
use super::choice::{StoredChoice, stored, under};
use crate::app::App;
use crate::core::documents::Problems;
use crate::core::documents::blend::{
    Blend, BlendRequest, EnergyBasis, Intensity, OwnHeatingValues, PerKm, PerKmRequest,
};
use crate::core::documents::reader::{Place, text_of};
use crate::web::Refusal;
use crate::web::actor::{Actor, CanRead};
use crate::web::extract::{JsonBody, NoQuery};
use crate::web::problem::ProblemDocument;
use axum::Json;
use serde::Serialize;
use serde_json::{Map, Value, json};
use utoipa::ToSchema;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;
use uuid::Uuid;

/// The routes of this file.
pub(super) fn routes() -> OpenApiRouter<App> {
    OpenApiRouter::new()
        .routes(routes!(blend_fuels))
        .routes(routes!(per_kilometre))
}

/// A blend as asked for.
#[derive(Debug, Serialize, ToSchema)]
#[allow(
    dead_code,
    reason = "describes the body, which is read by hand so that every problem has its pointer"
)]
struct BlendQuestion {
    /// Rule set whose figures count; that of the stored pathway when left out. Needed where the ethanol is a figure.
    rule_set: Option<String>,
    /// Name at the pump: `E5`, `E10`, `E27` or `E85`. Instead of `ethanol_percent_vol`.
    blend: Option<String>,
    /// Pure ethanol, % of the volumes of both before mixing, 0 to 100.
    ethanol_percent_vol: Option<f64>,
    /// Temperature at which both volumes are read, degC.
    temperature_c: f64,
    /// Which heating values count.
    heating_values: EnergyBasis,
    /// Own heating values per litre, with `heating_values: own` only.
    own_heating_values: Option<OwnHeatingValues>,
    /// The ethanol.
    ethanol: EthanolChoice,
    /// Intensity of the petrol; the rule set's own figure for petrol when left out.
    petrol: Option<Intensity>,
}

/// The ethanol of a blend.
#[derive(Debug, Serialize, ToSchema)]
#[serde(untagged)]
#[allow(dead_code, reason = "describes the body")]
enum EthanolChoice {
    /// A stored pathway, at its current revision.
    Id(Uuid),
    /// A stored pathway, at a revision.
    Stored(StoredChoice),
    /// A figure with its source.
    Figure(Intensity),
}

/// A kilometre as asked for.
#[derive(Debug, Serialize, ToSchema)]
#[allow(dead_code, reason = "describes the body")]
struct PerKmQuestion {
    /// The blend.
    blend: BlendQuestion,
    /// What drives, for people.
    vehicle: Option<String>,
    /// Fuel energy, MJ/km, above 0 to 1000. Instead of `l_per_100_km`.
    mj_per_km: Option<f64>,
    /// Litres of the blend itself, L/100 km, above 0 to 5000. Instead of `mj_per_km`.
    l_per_100_km: Option<f64>,
    /// Where the figure comes from.
    source: String,
}

/// A kilometre with the blend it is driven on.
#[derive(Clone, Debug, PartialEq, Serialize, ToSchema)]
struct PerKmAnswer {
    /// The blend.
    blend: Blend,
    /// The kilometre.
    per_km: PerKm,
}

/// Blend ethanol with petrol
///
/// Shares by volume, energy and mass, intensity and saving of a blend. The ethanol is a figure with its source, or a stored
/// pathway. Stores nothing.
#[utoipa::path(post, path = "/blend", tag = "evaluation",
    request_body(content = BlendQuestion, content_type = "application/json"),
    responses((status = 200, description = "The blend.", body = Blend),
        (status = 404, description = "The pathway is not there.", body = ProblemDocument, content_type = "application/problem+json")))]
async fn blend_fuels(
    Actor { app, .. }: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<Blend>, Refusal> {
    let question = Question::read(&body).map_err(Refusal::invalid)?;
    Ok(Json(question.answer(&app).await?))
}

/// A kilometre on a blend
///
/// Grams per kilometre on a blend and on petrol alone. Stores nothing.
#[utoipa::path(post, path = "/per-km", tag = "evaluation",
    request_body(content = PerKmQuestion, content_type = "application/json"),
    responses((status = 200, description = "The kilometre.", body = PerKmAnswer),
        (status = 404, description = "The pathway is not there.", body = ProblemDocument, content_type = "application/problem+json")))]
async fn per_kilometre(
    Actor { app, .. }: Actor<CanRead>,
    _: NoQuery,
    JsonBody(body): JsonBody,
) -> Result<Json<PerKmAnswer>, Refusal> {
    let (question, request) = kilometre_question(&body).map_err(Refusal::invalid)?;
    let blend = question
        .answer(&app)
        .await
        .map_err(|refusal| refusal.under("/blend"))?;
    let per_km = kilometre(&request, &blend)?;
    Ok(Json(PerKmAnswer { blend, per_km }))
}

/// A question about a blend, read.
struct Question {
    rule_set: Option<String>,
    stored: Option<(Uuid, Option<i64>)>,
    request: BlendRequest,
}

impl Question {
    /// Reads a question: what is not the blend's own is taken out, so that the rest is read as everywhere.
    fn read(body: &Value) -> Result<Question, Problems> {
        let mut problems = Problems::default();
        let mut rest = body.clone();
        let mut rule_set = None;
        let mut chosen = None;
        if let Value::Object(fields) = &mut rest {
            rule_set = taken(fields, "rule_set").and_then(|value| {
                text_of(&value, &Place::ROOT.field("rule_set"), &mut problems).map(str::to_owned)
            });
            let ethanol = fields.get("ethanol").filter(|value| is_stored(value)).cloned();
            if let Some(ethanol) = ethanol {
                chosen = stored(&ethanol, &Place::ROOT.field("ethanol"), &mut problems);
                // Stands in until the pathway is read.
                fields.insert(
                    "ethanol".to_owned(),
                    json!({ "g_co2e_per_mj": 0, "source": "a pathway" }),
                );
            } else if rule_set.is_none() && body.get("rule_set").is_none_or(Value::is_null) {
                let remedy = "Name the rule set whose figures count.";
                problems.add("/rule_set", "\"rule_set\" is missing.", remedy);
            }
        }
        match BlendRequest::from_value(&rest) {
            Ok(request) if problems.is_empty() => Ok(Question {
                rule_set,
                stored: chosen,
                request,
            }),
            Ok(_) => Err(problems),
            Err(found) => {
                under("", found, &mut problems);
                Err(problems)
            }
        }
    }

    async fn answer(mut self, app: &App) -> Result<Blend, Refusal> {
        if let Some((id, revision)) = self.stored {
            if let Some(asked) = self.rule_set.as_deref() {
                super::stored::known_rule_set(&crate::rules::basis(app).await?.book, Some(asked))?;
            }
            let (ethanol, rule_set) = intensity(app, id, revision, self.rule_set.as_deref()).await?;
            self.request.ethanol = ethanol;
            self.rule_set = Some(rule_set);
        }
        let rule_set = self.rule_set.unwrap_or_default();
        Ok(blend(app, &self.request, &rule_set).await?)
    }
}

/// True for an id or an object that names one: anything else is read as a figure.
fn is_stored(value: &Value) -> bool {
    value.is_string() || value.get("id").is_some()
}

/// Takes a field out; `null` counts as absent.
fn taken(fields: &mut Map<String, Value>, name: &str) -> Option<Value> {
    fields.remove(name).filter(|value| !value.is_null())
}

fn kilometre_question(body: &Value) -> Result<(Question, PerKmRequest), Problems> {
    let mut problems = Problems::default();
    let mut rest = body.clone();
    let given = match &mut rest {
        Value::Object(fields) => taken(fields, "blend"),
        _ => None,
    };
    let question = match (given, body) {
        (Some(given), _) => Question::read(&given)
            .map_err(|found| under("/blend", found, &mut problems))
            .ok(),
        (None, Value::Object(_)) => {
            problems.add("/blend", "\"blend\" is missing.", "Add \"blend\".");
            None
        }
        (None, _) => None,
    };
    let request = PerKmRequest::from_value(&rest).map_err(|found| under("", found, &mut problems));
    match (question, request) {
        (Some(question), Ok(request)) => Ok((question, request)),
        _ => Err(problems),
    }
}
