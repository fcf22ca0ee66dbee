//! Changes a person might make in a workbook, each beside the same change of the document.

use super::file;
use calamine::{Data, Range};
use std::collections::BTreeMap;
use wheelwort::core::documents::Pathway;
use wheelwort::core::documents::input::OneOrMany;
use wheelwort::core::documents::pathway::{Role, Stage};
use wheelwort::core::domain::rule_set::AllocationMethod;

/// One change.
pub struct Change {
    /// `input`, `intake`, `co-product` or `output`.
    pub kind: &'static str,
    /// A name for it.
    pub what: String,
    /// The document with the change.
    pub pathway: Pathway,
    /// The sheet it is made on.
    pub sheet: &'static str,
    /// Cells and their new figures.
    pub cells: Vec<(String, f64)>,
}

/// Models whose gases stand as values and rest on amounts of their stage: About says that these do not follow.
const VALUES: [&str; 4] = ["distillation", "dehydration", "land_use_change", "soil_n2o"];

fn rests_on_values(stage: &Stage) -> bool {
    let models = stage.inputs.iter().filter_map(|input| input.model.as_ref());
    models
        .flat_map(OneOrMany::list)
        .any(|model| VALUES.contains(&model.kind.as_str()))
}

/// The changes that are tried on a document: one of each kind, the first or the last. Every one was tried once (404
/// workbooks); one of a kind keeps the run short.
pub fn changes(pathway: &Pathway, bytes: &[u8], last: bool) -> Vec<Change> {
    let mut by_kind: BTreeMap<&str, Change> = BTreeMap::new();
    for change in every(pathway, bytes) {
        if last || !by_kind.contains_key(change.kind) {
            by_kind.insert(change.kind, change);
        }
    }
    by_kind.into_values().collect()
}

fn every(pathway: &Pathway, bytes: &[u8]) -> Vec<Change> {
    let mut out = Vec::new();
    let (inputs, chain) = (file::sheet(bytes, "Inputs"), file::sheet(bytes, "Chain"));
    for (j, stage) in pathway.stages.iter().enumerate() {
        // Rows are found by title: of two stages of one name it is not known which is which.
        if pathway
            .stages
            .iter()
            .filter(|other| other.title() == stage.title())
            .count()
            > 1
        {
            continue;
        }
        out.extend(input(pathway, j, &inputs));
        let rows = stage_rows(&chain, stage.title());
        for k in 0..stage.intakes.len() {
            let Some(amount) = stage.intakes[k].flow.amount.filter(|_| !rests_on_values(stage)) else {
                continue;
            };
            let mut changed = pathway.clone();
            changed.stages[j].intakes[k].flow.amount = Some(amount * 0.83);
            let row = rows.iter().filter(|(what, _)| what == "intake").nth(k).unwrap().1;
            out.push(on_chain(
                "intake",
                format!("{}-intake-{k}", stage.key),
                changed,
                row,
                amount * 0.83,
            ));
        }
        for (k, product) in stage.co_products.iter().enumerate() {
            let Some(amount) = product.flow.amount.filter(|_| product.role == Role::CoProduct) else {
                continue;
            };
            let mut changed = pathway.clone();
            changed.stages[j].co_products[k].flow.amount = Some(amount * 1.21);
            let products = rows
                .iter()
                .filter(|(what, _)| what != "intake" && what != "stage");
            let row = products.skip(1).nth(k).unwrap().1;
            out.push(on_chain(
                "co-product",
                format!("{}-{}", stage.key, product.key),
                changed,
                row,
                amount * 1.21,
            ));
        }
        if let Some(amount) = stage.output.flow.amount.filter(|_| !rests_on_values(stage)) {
            let mut changed = pathway.clone();
            changed.stages[j].output.flow.amount = Some(amount * 1.1);
            let row = rows.iter().find(|(what, _)| what == "output").unwrap().1;
            out.push(on_chain(
                "output",
                format!("{}-output", stage.key),
                changed,
                row,
                amount * 1.1,
            ));
        }
    }
    out
}

fn on_chain(kind: &'static str, what: String, pathway: Pathway, row: u32, figure: f64) -> Change {
    Change {
        kind,
        what,
        pathway,
        sheet: "Chain",
        cells: vec![(file::address(row, 3), figure)],
    }
}

/// The rows of a stage on the sheet of stages: what each is, and where.
fn stage_rows(chain: &Range<Data>, title: &str) -> Vec<(String, u32)> {
    let end = chain.end().map_or(0, |(row, _)| row);
    (5..=end)
        .filter(|row| file::words(chain, *row, 0) == title)
        .map(|row| (file::words(chain, row, 1), row))
        .collect()
}

/// The first input of a stage that is priced by a factor.
fn input(pathway: &Pathway, j: usize, inputs: &Range<Data>) -> Option<Change> {
    let stage = &pathway.stages[j];
    let index = stage
        .inputs
        .iter()
        .position(|input| input.amount.is_some_and(|amount| amount > 0.0))?;
    let document = &stage.inputs[index];
    let amount = document.amount? * 1.37;
    let mut changed = pathway.clone();
    changed.stages[j].inputs[index].amount = Some(amount);
    let end = inputs.end().map_or(0, |(row, _)| row);
    let cells: Vec<(String, f64)> = (5..=end)
        .filter(|row| {
            file::words(inputs, *row, 0) == stage.title() && file::words(inputs, *row, 1) == document.key
        })
        .map(|row| (file::address(row, 5), amount))
        .collect();
    assert_eq!(
        cells.len(),
        document.factor.as_ref().map_or(0, |factor| factor.list().len())
    );
    Some(Change {
        kind: "input",
        what: format!("{}-{}", stage.key, document.key),
        pathway: changed,
        sheet: "Inputs",
        cells,
    })
}

/// Forms that the cases lack: the same chains under other rule sets, by dry mass, by value and by substitution.
pub fn other_forms(known: &BTreeMap<String, Pathway>) -> BTreeMap<String, Pathway> {
    let mut out = BTreeMap::new();
    let some = [
        "contract_example",
        "utility_heat_and_power",
        "co_product_intake_in_chain",
        "two_regions",
        "soil_carbon_capped",
        "gross_gas",
    ];
    for (name, pathway) in known.iter().filter(|(name, _)| {
        some.contains(&name.as_str()) || name.contains("_maize_") || name.contains("_beet_")
    }) {
        let mut under = pathway.clone();
        "inventory-ar6".clone_into(&mut under.rule_set);
        under.defaults.clear();
        out.insert(format!("ar6_{name}"), under.clone());
        let method = |method: AllocationMethod| {
            let mut other = under.clone();
            for stage in other
                .stages
                .iter_mut()
                .filter(|stage| !stage.co_products.is_empty())
            {
                stage.allocation = Some(method);
                if method == AllocationMethod::Economic {
                    stage.output.flow.price = price(&stage.output.flow, 0.31);
                    for product in &mut stage.co_products {
                        product.flow.price = price(&product.flow, 0.19);
                    }
                }
                if method == AllocationMethod::Substitution {
                    for product in stage
                        .co_products
                        .iter_mut()
                        .filter(|product| product.role == Role::CoProduct)
                    {
                        product.displaces = displaced();
                    }
                }
            }
            other
        };
        out.insert(format!("mass_{name}"), method(AllocationMethod::Mass));
        out.insert(format!("value_{name}"), method(AllocationMethod::Economic));
        out.insert(format!("credit_{name}"), method(AllocationMethod::Substitution));
    }
    out
}

fn price(
    flow: &wheelwort::core::documents::pathway::Flow,
    value: f64,
) -> Option<wheelwort::core::documents::Amount> {
    let unit = flow.unit.as_deref()?;
    let per = if unit.contains("heat") || unit.contains("power") {
        "GJ"
    } else {
        unit
    };
    Some(wheelwort::core::documents::Amount {
        value,
        unit: format!("EUR/{per}"),
    })
}

fn displaced() -> Option<wheelwort::core::documents::pathway::Displaces> {
    use wheelwort::core::documents::input::FactorRef;
    Some(wheelwort::core::documents::pathway::Displaces {
        amount: 12.5,
        unit: "GJ".to_owned(),
        factor: OneOrMany::One(FactorRef::Id("eu-2022-996/fuel_natural_gas".to_owned())),
    })
}
