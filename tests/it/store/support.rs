//! A program on its own temporary data file, with a clock that stands still and ids that repeat.

use serde_json::{Value, json};
use std::path::PathBuf;
use std::time::Duration;
use tempfile::TempDir;
use wheelwort::app::App;
use wheelwort::clock::Clock;
use wheelwort::core::documents::Pathway;
use wheelwort::core::evaluate::evaluate;
use wheelwort::library;
use wheelwort::store::{Settings, Store, StoreError};

/// Settings that do not wait five seconds for a lock.
pub fn settings() -> Settings {
    Settings {
        busy_timeout: Duration::from_millis(50),
        ..Settings::default()
    }
}

pub struct Bench {
    pub app: App,
    folder: TempDir,
}

impl Bench {
    pub async fn new() -> Bench {
        let folder = tempfile::tempdir().expect("a folder");
        let app = open(folder.path().join("wheelwort.db")).await;
        Bench { app, folder }
    }

    pub fn file(&self) -> PathBuf {
        self.folder.path().join("wheelwort.db")
    }

    /// Closes the program and opens it again on the same file.
    pub async fn restarted(self) -> Bench {
        self.app.close().await;
        let app = open(self.file()).await;
        Bench {
            app,
            folder: self.folder,
        }
    }

    /// One number out of the file.
    pub async fn number(&self, sql: &'static str) -> i64 {
        number(&self.app.store, sql).await
    }

    /// Runs SQL where writes run; what SQLite says.
    pub async fn force(&self, sql: &'static str) -> Result<(), String> {
        force(&self.app.store, sql).await
    }
}

async fn open(file: PathBuf) -> App {
    let clock = Clock::fixed("2026-12-01T12:00:00Z".parse().expect("a time"), 7);
    App::open_with(&file, clock, library::book(), evaluate, settings())
        .await
        .expect("opens")
}

pub async fn number(store: &Store, sql: &'static str) -> i64 {
    let mut reader = store.reader().await.expect("a reader");
    sqlx::query_scalar(sql)
        .fetch_one(&mut *reader)
        .await
        .expect("a number")
}

pub async fn force(store: &Store, sql: &'static str) -> Result<(), String> {
    let done: Result<(), StoreError> = store
        .write(move |c| Box::pin(async move { Ok(sqlx::query(sql).execute(c).await.map(drop)?) }))
        .await;
    done.map_err(|error| chain(&error))
}

/// An error with all its causes.
pub fn chain(error: &dyn std::error::Error) -> String {
    let mut text = error.to_string();
    let mut cause = error.source();
    while let Some(next) = cause {
        text = format!("{text} <- {next}");
        cause = next.source();
    }
    text
}

/// A small invented pathway, from field to wheel.
pub fn wheat(name: &str) -> Value {
    json!({
        "format": "wheelwort.pathway/1", "name": name, "feedstock": "wheat",
        "period": { "from": "2026-07-01", "to": "2027-06-30" },
        "rule_set": "eu-2018-2001", "plant_started": "2017-05-01",
        "stages": [
            { "key": "field", "kind": "cultivation", "name": "Growers",
              "output": { "material": "wheat", "amount": 8.2, "unit": "t", "moisture_percent": 14.0 },
              "inputs": [
                  { "key": "n", "label": "Ammonium nitrate", "amount": 165, "unit": "kg N",
                    "factor": "eu-2022-996/fert_n_an" },
                  { "key": "diesel", "label": "Field diesel", "amount": 92.5, "unit": "L",
                    "factor": ["eu-2022-996/fuel_diesel", "eu-2022-996/mach_diesel_agriculture"] },
                  { "key": "methane", "label": "Given gases", "gases": { "ch4_biogenic": 0.25 } } ] },
            { "key": "works", "kind": "processing", "name": "Works",
              "output": { "material": "ethanol", "amount": 300, "unit": "t", "strength_percent_mass": 99.7 },
              "intakes": [{ "from": "field", "amount": 1000, "unit": "t", "moisture_percent": 13.0 }],
              "inputs": [
                  { "key": "gas", "label": "Gas", "amount": 3000, "unit": "GJ",
                    "factor": ["eu-2022-996/fuel_natural_gas", "eu-2022-996/comb_ng_boiler"] },
                  { "key": "enzyme", "label": "Enzyme", "amount": 1.5, "unit": "t",
                    "factor": { "gases": { "co2e_unsplit": 2.5 }, "per": "kg", "citation": "sheet 12/2026" } } ],
              "co_products": [
                  { "key": "grains", "name": "Grains", "role": "co_product", "material": "ddgs_wheat",
                    "amount": 320, "unit": "t", "moisture_percent": 10.0 } ] },
            { "key": "truck", "kind": "fuel_transport", "name": "Truck",
              "output": { "material": "ethanol", "amount": 299, "unit": "t", "strength_percent_mass": 99.7 },
              "intakes": [{ "from": "works", "amount": 300, "unit": "t", "strength_percent_mass": 99.7 }],
              "inputs": [
                  { "key": "haul", "label": "Truck",
                    "model": { "kind": "haul",
                               "vehicle": "eu-2022-996/tr_truck_40_tonne_for_liquids_and_pellets_diesel",
                               "distance": { "value": 150, "unit": "km" } } } ] },
            { "key": "car", "kind": "combustion", "name": "Cars",
              "output": { "material": "ethanol", "amount": 1, "unit": "MJ" },
              "intakes": [{ "from": "truck" }],
              "inputs": [
                  { "key": "use", "label": "Use", "gases": { "ch4_biogenic": 0.00001 } } ] } ]
    })
}

/// The same, read.
pub fn pathway(name: &str) -> Pathway {
    read(&wheat(name))
}

/// The same with another amount of fertiliser, kg N.
pub fn fertilised(name: &str, amount: f64) -> Pathway {
    let mut document = wheat(name);
    document["stages"][0]["inputs"][0]["amount"] = json!(amount);
    read(&document)
}

pub fn read(document: &Value) -> Pathway {
    Pathway::from_value(document).unwrap_or_else(|problems| panic!("{problems:?}"))
}
