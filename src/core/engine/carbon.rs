//! The crop's carbon, followed physically and apart from sharing: in with the crop, out as fuel, fermentation CO2,
//! co-products and the rest. CO2 per C is 44.0095/12.011 here.

use super::demand::Demand;
use super::materials::{CarbonContent, Materials};
use super::resolved::{Product, Resolved};
use crate::core::documents::assessment::{BiogenicRow, Carbon, Finding, Release, Severity, Terms};
use crate::core::domain::{CarbonClass, StageKind, Term};
use crate::core::models::flow::{ETHANOL, Measured};
use crate::core::units::rounding::plain;

/// kg CO2 per kg of carbon, from molar masses.
pub const CO2_PER_C: f64 = 44.0095 / 12.011;
/// kg CO2 per kg of ethanol burnt: 2 x 44.0095 / 46.06844, rounded to five decimals as documents print it, so that a
/// reader who redoes the balance with the printed figure finds the same.
pub const CO2_PER_ETHANOL: f64 = 1.91061;
/// kg CO2 per kg of ethanol fermented: one CO2 for each C2H5OH.
pub const FERMENTATION_CO2_PER_ETHANOL: f64 = 44.0095 / 46.06844;

/// Which carbon contents the closure rests on.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Basis {
    /// The main feed's content is the pathway's own.
    pub main_feed_own: bool,
    /// The largest co-product's content is the pathway's own, or there is none.
    pub largest_co_product_own: bool,
}

struct Parcel {
    what: String,
    stage: String,
    field: String,
    dry_g: f64,
    content: Option<CarbonContent>,
    fuel_g_co2: Option<f64>,
}

impl Parcel {
    fn g_co2(&self, content: CarbonContent) -> f64 {
        self.dry_g * content.percent / 100.0 * CO2_PER_C
    }
}

/// Works the balance out. `terms` are those of the net without any biogenic CO2.
pub fn carbon(
    resolved: &Resolved,
    demand: &Demand,
    materials: &Materials,
    terms: &Terms,
    findings: &mut Vec<Finding>,
) -> (Carbon, Basis) {
    let net = terms.sum();
    let strength = resolved
        .last
        .and_then(|last| resolved.stages[last].products.first()?.flow.strength);
    let fuel = 1000.0 * CO2_PER_ETHANOL / resolved.rules.ethanol_mj_per_kg(strength.unwrap_or(1.0));
    let mut releases = Vec::new();
    let fermentation = fermentation(resolved, demand, &mut releases);
    let (other_all, other_works) = other_inputs(resolved, demand, &mut releases);
    let feed = feed(resolved, demand, materials);
    let (leaving, residues) = products(resolved, demand, materials);
    releases.push(burning(resolved, fuel));
    let uptake = -(fuel + fermentation + other_all);
    let rows = rows(resolved, uptake, &releases);
    let mut carbon = Carbon {
        fuel_g_co2_per_mj: fuel,
        fermentation_g_co2_per_mj: fermentation,
        uptake_g_co2_per_mj: uptake,
        combustion_g_co2_per_mj: fuel,
        other_biogenic_g_co2_per_mj: other_all,
        net_in_line_g_co2e_per_mj: net + uptake + fermentation + fuel + other_all,
        presentation: resolved.rules.biogenic_co2,
        terms_in_line_g_co2e_per_mj: in_line(terms, &rows),
        rows,
        releases,
        ..Carbon::default()
    };
    let mut used = Vec::new();
    let Some(into) = settle_feed(&feed, &mut carbon, &mut used) else {
        // What the works give off beside fermentation is known whatever the crop holds.
        let side = |parcels: &[Parcel]| settle(parcels, None, &mut Vec::new(), &mut Vec::new());
        carbon.co_products_g_co2_per_mj = side(&leaving);
        carbon.other_g_co2_per_mj = side(&residues).map(|g| g + other_works);
        return (carbon, Basis::default());
    };
    carbon.feedstock_g_co2_per_mj = Some(into);
    let total = (into > 0.0).then_some(into);
    carbon.co_products_g_co2_per_mj = settle(&leaving, total, &mut carbon.missing, &mut used);
    let rest = settle(&residues, total, &mut carbon.missing, &mut used);
    carbon.other_g_co2_per_mj = rest.map(|g| g + other_works);
    if total.is_none() {
        carbon.missing.push("no crop enters this chain".to_owned());
    }
    if let (Some(into), Some(co_products), Some(other)) =
        (total, carbon.co_products_g_co2_per_mj, carbon.other_g_co2_per_mj)
    {
        carbon.closure_percent = Some(100.0 * (fuel + fermentation + co_products + other) / into);
        let spread: f64 = used.iter().map(|(_, points)| points * points).sum();
        if spread > 0.0 {
            carbon.closure_half_range_points = Some(100.0 * spread.sqrt() / into);
        }
    }
    findings.extend(used.into_iter().map(|(finding, _)| finding));
    (
        carbon,
        Basis {
            main_feed_own: own(&feed),
            largest_co_product_own: leaving.is_empty() || own(&leaving),
        },
    )
}

/// Fermentation CO2 by the models of a stage; without one, a mole for each mole of ethanol where it first appears.
fn fermentation(resolved: &Resolved, demand: &Demand, releases: &mut Vec<Release>) -> f64 {
    let mut sum = 0.0;
    for &j in &resolved.order {
        let stage = &resolved.stages[j];
        let modelled: Vec<f64> = stage
            .inputs
            .iter()
            .filter_map(|input| input.fermentation_kg)
            .collect();
        let first = !stage.intakes.iter().any(|intake| intake.flow.is_ethanol());
        let kg = match modelled[..] {
            [] if first => {
                stage.products.iter().filter_map(|p| p.flow.pure_kg).sum::<f64>()
                    * FERMENTATION_CO2_PER_ETHANOL
            }
            _ => modelled.iter().sum(),
        };
        let g = 1000.0 * kg * demand.whole[j];
        if g != 0.0 {
            let what = if stage.kind() == StageKind::Bought {
                "fermentation, at the supplier's"
            } else {
                "fermentation"
            };
            releases.push(Release {
                stage: stage.document.key.clone(),
                what: what.to_owned(),
                g_co2_per_mj: g,
            });
        }
        sum += g;
    }
    sum
}

/// Biogenic CO2 of inputs other than fermentation: of all stages, and of those beyond the farm gate.
fn other_inputs(resolved: &Resolved, demand: &Demand, releases: &mut Vec<Release>) -> (f64, f64) {
    let (mut all, mut works) = (0.0, 0.0);
    for &j in &resolved.order {
        let stage = &resolved.stages[j];
        let kg: f64 = stage
            .inputs
            .iter()
            .filter(|i| i.fermentation_kg.is_none())
            .map(|i| i.biogenic_kg)
            .sum();
        let g = 1000.0 * kg * demand.whole[j];
        if g == 0.0 {
            continue;
        }
        all += g;
        if !stage.kind().is_before_works() {
            works += g;
        }
        releases.push(Release {
            stage: stage.document.key.clone(),
            what: "biogenic fuel and other inputs".to_owned(),
            g_co2_per_mj: g,
        });
    }
    (all, works)
}

fn burning(resolved: &Resolved, fuel: f64) -> Release {
    let stage = resolved
        .last
        .map(|last| &resolved.stages[last])
        .filter(|stage| stage.kind() == StageKind::Combustion);
    Release {
        stage: stage.map(|stage| stage.document.key.clone()).unwrap_or_default(),
        what: "burning the fuel".to_owned(),
        g_co2_per_mj: fuel,
    }
}

/// The crop's own CO2 as rows of the account: the uptake, then what gives it back.
fn rows(resolved: &Resolved, uptake: f64, releases: &[Release]) -> Vec<BiogenicRow> {
    let stage = |key: &str| {
        resolved
            .stages
            .iter()
            .find(|stage| !key.is_empty() && stage.document.key == key)
    };
    let grown: Vec<&str> = resolved
        .stages
        .iter()
        .filter(|stage| matches!(stage.kind(), StageKind::Cultivation | StageKind::Bought))
        .map(|stage| stage.document.key.as_str())
        .collect();
    let mut rows = vec![BiogenicRow {
        stage: match grown[..] {
            [one] => one.to_owned(),
            _ => String::new(),
        },
        term: Term::Eec,
        what: "taken up by the crop".to_owned(),
        g_co2_per_mj: uptake,
    }];
    rows.extend(releases.iter().map(|release| BiogenicRow {
        stage: release.stage.clone(),
        term: stage(&release.stage).map_or(Term::Eu, |stage| stage.kind().term()),
        what: release.what.clone(),
        g_co2_per_mj: release.g_co2_per_mj,
    }));
    rows
}

/// Terms with the crop's own CO2 in line.
fn in_line(terms: &Terms, rows: &[BiogenicRow]) -> Terms {
    rows.iter().fold(*terms, |mut terms, row| {
        terms.add(row.term, row.g_co2_per_mj);
        terms
    })
}

/// Every intake that crosses from the farm side into the works.
fn feed(resolved: &Resolved, demand: &Demand, materials: &Materials) -> Vec<Parcel> {
    let mut parcels = Vec::new();
    for &j in &resolved.order {
        let stage = &resolved.stages[j];
        if stage.kind().is_before_works() {
            continue;
        }
        for intake in &stage.intakes {
            let source = &resolved.stages[intake.from];
            if !source.kind().is_before_works() {
                continue;
            }
            let content = match intake.carbon_percent_dry {
                Some(percent) => Some(given(percent)),
                None => upstream(resolved, intake.from, intake.product)
                    .map(given)
                    .or_else(|| materials.carbon(&intake.flow.material)),
            };
            parcels.push(parcel(
                format!(
                    "{} into {}",
                    materials.name(&intake.flow.material),
                    stage.document.title()
                ),
                &stage.document.key,
                format!("intakes.{}", source.document.key),
                &intake.flow,
                demand.whole[j],
                content,
            ));
        }
    }
    parcels
}

/// Co-products that leave, and residues and wastes, of the stages beyond the farm side.
fn products(resolved: &Resolved, demand: &Demand, materials: &Materials) -> (Vec<Parcel>, Vec<Parcel>) {
    let (mut leaving, mut residues) = (Vec::new(), Vec::new());
    for &j in &resolved.order {
        let stage = &resolved.stages[j];
        if stage.kind().is_before_works() {
            continue;
        }
        for (index, product) in stage.products.iter().enumerate() {
            let left = demand.whole[j] - demand.whole_by_product[j][index];
            if left <= demand.whole[j] * 1e-12
                || product.flow.is_heat_or_power()
                || Some(j) == resolved.last && index == 0
            {
                continue;
            }
            let content = match product.carbon_percent_dry {
                Some(percent) => Some(given(percent)),
                None => passed_on(resolved, j, product)
                    .map(given)
                    .or_else(|| materials.carbon(&product.flow.material)),
            };
            let field = product
                .key
                .map_or_else(|| "output".to_owned(), |key| format!("co_products.{key}"));
            let parcel = parcel(
                format!("{} of {}", product.name, stage.document.title()),
                &stage.document.key,
                field,
                &product.flow,
                left,
                content,
            );
            if product.key.is_some() && is_residue(resolved, j, index) {
                residues.push(parcel);
            } else {
                leaving.push(parcel);
            }
        }
    }
    (leaving, residues)
}

fn is_residue(resolved: &Resolved, stage: usize, product: usize) -> bool {
    let documents = &resolved.stages[stage].document.co_products;
    documents
        .get(product - 1)
        .is_some_and(|p| p.role != crate::core::documents::pathway::Role::CoProduct)
}

fn given(percent: f64) -> CarbonContent {
    CarbonContent {
        percent,
        half_range: 0.0,
        class: None,
    }
}

/// The content of the flow before an intake of the same material: the supplier's product, else what it was made from.
fn upstream(resolved: &Resolved, stage: usize, product: usize) -> Option<f64> {
    let product = &resolved.stages[stage].products[product];
    product
        .carbon_percent_dry
        .or_else(|| passed_on(resolved, stage, product))
}

/// The content of the intakes of the same material, weighted by dry mass where there are several.
fn passed_on(resolved: &Resolved, stage: usize, product: &Product) -> Option<f64> {
    let mut sum = (0.0, 0.0);
    for intake in resolved.stages[stage]
        .intakes
        .iter()
        .filter(|i| i.flow.material == product.flow.material)
    {
        let percent = intake
            .carbon_percent_dry
            .or_else(|| upstream(resolved, intake.from, intake.product));
        if let (Some(percent), Some(dry)) = (percent, intake.flow.dry_kg()) {
            sum = (sum.0 + percent * dry, sum.1 + dry);
        }
    }
    (sum.1 > 0.0).then(|| sum.0 / sum.1)
}

fn parcel(
    what: String,
    stage: &str,
    field: String,
    flow: &Measured,
    recipes: f64,
    content: Option<CarbonContent>,
) -> Parcel {
    let ethanol = flow.pure_kg.filter(|_| flow.material == ETHANOL);
    let dry = flow.dry_kg().filter(|_| ethanol.is_none());
    Parcel {
        what,
        stage: stage.to_owned(),
        field,
        dry_g: 1000.0 * recipes * dry.unwrap_or(f64::NAN),
        content,
        fuel_g_co2: ethanol.map(|pure| 1000.0 * recipes * pure * CO2_PER_ETHANOL),
    }
}

/// The carbon that comes in. A `side` content serves a feed only under a quarter of the whole.
fn settle_feed(parcels: &[Parcel], carbon: &mut Carbon, used: &mut Vec<(Finding, f64)>) -> Option<f64> {
    let guess: f64 = parcels
        .iter()
        .filter_map(|p| p.content.map(|content| p.g_co2(content)))
        .sum();
    settle(parcels, Some(guess), &mut carbon.missing, used)
}

/// Adds parcels up; none where a content is unknown or may not stand in.
fn settle(
    parcels: &[Parcel],
    total: Option<f64>,
    missing: &mut Vec<String>,
    used: &mut Vec<(Finding, f64)>,
) -> Option<f64> {
    let mut sum = Some(0.0);
    for parcel in parcels {
        if let Some(g) = parcel.fuel_g_co2 {
            sum = sum.map(|sum| sum + g);
            continue;
        }
        let serves = |content: CarbonContent| match content.class {
            None | Some(CarbonClass::Exact | CarbonClass::Typical) => true,
            Some(CarbonClass::Side) => total.is_some_and(|total| parcel.g_co2(content) < total / 4.0),
            Some(CarbonClass::Measure) => false,
        };
        let content = parcel
            .content
            .filter(|content| serves(*content) && parcel.dry_g.is_finite());
        let Some(content) = content else {
            missing.push(format!("carbon content of {}", parcel.what));
            sum = None;
            continue;
        };
        sum = sum.map(|sum| sum + parcel.g_co2(content));
        if matches!(content.class, Some(CarbonClass::Typical | CarbonClass::Side)) {
            used.push((
                typical(parcel, content),
                parcel.dry_g * content.half_range / 100.0 * CO2_PER_C,
            ));
        }
    }
    sum
}

fn typical(parcel: &Parcel, content: CarbonContent) -> Finding {
    Finding {
        id: "K-07".to_owned(),
        severity: Severity::Info,
        stage: parcel.stage.clone(),
        field: parcel.field.clone(),
        message: format!(
            "The carbon of {} is a typical {} % of dry mass, not measured.",
            parcel.what,
            plain(content.percent)
        ),
        remedy: "Enter a laboratory figure to make the balance a proof.".to_owned(),
        reason: None,
    }
}

/// True if the largest parcel's content is the pathway's own.
fn own(parcels: &[Parcel]) -> bool {
    let weight = |p: &Parcel| {
        p.fuel_g_co2
            .or_else(|| p.content.map(|c| p.g_co2(c)))
            .unwrap_or(f64::INFINITY)
    };
    parcels
        .iter()
        .max_by(|a, b| weight(a).total_cmp(&weight(b)))
        .is_some_and(|p| p.fuel_g_co2.is_some() || p.content.is_some_and(|content| content.class.is_none()))
}
