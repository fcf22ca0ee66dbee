//! Where the crop's carbon went: the split bar, its table, the closure, and the same in line.

use crate::charts::carbon_split::{self, CarbonSplit, Kind, Part};
use crate::core::documents::assessment::Carbon;
use crate::web::csv::{Cell, Table};
use crate::web::filters::Markup;

/// The crop's carbon on a page.
#[derive(Clone, Debug, PartialEq)]
pub struct CarbonView {
    /// The bar as SVG; empty where there is none.
    pub bar: Markup,
    /// The rows of the table.
    pub rows: Vec<CarbonRow>,
    /// Carbon in the crop, g CO2/MJ.
    pub in_crop: Option<f64>,
    /// Carbon out over carbon in, %.
    pub closure: Option<f64>,
    /// Half-range that typical contents bring to the closure, points.
    pub half_range: Option<f64>,
    /// What keeps the closure unknown.
    pub missing: Vec<String>,
    /// Uptake attributed to the fuel, negative.
    pub uptake: f64,
    /// All that is given back.
    pub back: f64,
    /// The net, counted apart.
    pub net: f64,
    /// The net in line.
    pub in_line: f64,
}

/// One place of the carbon.
#[derive(Clone, Debug, PartialEq)]
pub struct CarbonRow {
    /// Its sample as SVG.
    pub swatch: Markup,
    /// Its name.
    pub name: &'static str,
    /// g CO2 per MJ; none where a content is unknown.
    pub g: Option<f64>,
    /// Share of the carbon in the crop, %.
    pub percent: Option<f64>,
}

impl CarbonView {
    /// The view of an assessment's carbon.
    pub fn of(carbon: &Carbon, net: f64) -> CarbonView {
        let whole = carbon.feedstock_g_co2_per_mj.filter(|g| *g > 0.0);
        let named = [
            (
                "Ethanol, burnt in the engine",
                Kind::Fuel,
                Some(carbon.fuel_g_co2_per_mj),
            ),
            (
                "Fermentation gas",
                Kind::Fermentation,
                Some(carbon.fermentation_g_co2_per_mj),
            ),
            (
                "Co-products that leave",
                Kind::CoProduct,
                carbon.co_products_g_co2_per_mj,
            ),
            ("Residues, yeast, losses", Kind::Other, carbon.other_g_co2_per_mj),
        ];
        let known = named.iter().all(|(_, _, g)| g.is_some());
        let split = whole.filter(|_| known).map(|in_crop| CarbonSplit {
            title: "Where the crop\u{2019}s carbon went".to_owned(),
            id: "cs".to_owned(),
            in_crop,
            parts: named
                .iter()
                .map(|(name, kind, g)| Part {
                    name: (*name).to_owned(),
                    kind: *kind,
                    g: g.unwrap_or(0.0),
                })
                .collect(),
        });
        let percent = |g: Option<f64>| Some(g? / whole? * 100.0);
        let mut rows: Vec<CarbonRow> = named
            .iter()
            .map(|(name, kind, g)| CarbonRow {
                swatch: Markup(carbon_split::swatch(*kind)),
                name,
                g: *g,
                percent: percent(*g),
            })
            .collect();
        if let Some(open) = split.as_ref().map(CarbonSplit::open) {
            rows.push(CarbonRow {
                swatch: Markup(carbon_split::swatch(Kind::Open)),
                name: if open < 0.0 {
                    "More than went in"
                } else {
                    "Not accounted for"
                },
                g: Some(open),
                percent: percent(Some(open)),
            });
        }
        CarbonView {
            bar: Markup(
                split
                    .as_ref()
                    .and_then(|split| carbon_split::draw(split).ok())
                    .unwrap_or_default(),
            ),
            rows,
            in_crop: carbon.feedstock_g_co2_per_mj,
            closure: carbon.closure_percent,
            half_range: carbon.closure_half_range_points,
            missing: carbon.missing.clone(),
            uptake: carbon.uptake_g_co2_per_mj,
            back: carbon.releases.iter().map(|release| release.g_co2_per_mj).sum(),
            net,
            in_line: carbon.net_in_line_g_co2e_per_mj,
        }
    }

    /// The table as CSV.
    pub fn table(&self) -> Table {
        let mut table = Table::new(&["where", "g_co2_per_mj", "percent_of_crop_carbon"]);
        for row in &self.rows {
            table
                .rows
                .push(vec![row.name.into(), row.g.into(), row.percent.into()]);
        }
        table
            .rows
            .push(vec!["In the crop".into(), self.in_crop.into(), Cell::Empty]);
        table
    }
}
