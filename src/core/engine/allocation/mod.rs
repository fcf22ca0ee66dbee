//! Shares of a stage's burden between its products. Directive (EU) 2018/2001 Annex V Part C points 16 to 18: energy by
//! lower heating value; exergy where a stage gives only heat and power; residues and wastes take nothing. Other rule sets
//! may also allow dry mass, value and substitution.

mod measures;

use super::materials::Materials;
use super::resolved::Product;
use crate::core::documents::assessment::Step;
use crate::core::documents::pathway::{CoProduct, Role, Stage};
use crate::core::documents::problem::Problems;
use crate::core::documents::reader::Place;
use crate::core::domain::RuleSet;
use crate::core::domain::rule_set::AllocationMethod;
use crate::core::models::factors::step;
use crate::core::models::flow::{HEAT, POWER};
use crate::core::units::Currency;
use crate::core::units::rounding::plain;
use measures::{Scene, energy, exergy, mass, value};

/// What sharing looks at beside the stage itself.
pub struct Ground<'g> {
    /// The rule set in force.
    pub rules: &'g RuleSet,
    /// Heating values.
    pub materials: &'g Materials<'g>,
    /// Strength of the fuel at the wheel, mass fraction; none where it is not known.
    pub wheel_strength: Option<f64>,
}

/// How a stage shares.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Shared {
    /// The method; none where something is wrong, which is then noted.
    pub method: Option<AllocationMethod>,
    /// Unit of what it measures.
    pub unit: &'static str,
}

/// Sets share and measure of every product.
pub fn share(
    stage: &Stage,
    products: &mut [Product],
    ground: &Ground,
    at: &Place,
    problems: &mut Problems,
    steps: &mut Vec<Step>,
) -> Shared {
    let rules = ground.rules;
    let Some(method) = method(stage, products, rules, at, problems) else {
        return Shared::default();
    };
    let mut shared = Shared {
        method: Some(method),
        unit: match method {
            AllocationMethod::Exergy => "MJ of exergy",
            AllocationMethod::Mass => "kg dry",
            AllocationMethod::Energy => "MJ",
            AllocationMethod::Economic | AllocationMethod::Substitution => "",
        },
    };
    let alone = products.iter().filter(|product| product.shares_burden).count() < 2;
    if alone || method == AllocationMethod::Substitution {
        for (index, product) in products.iter_mut().enumerate() {
            product.share = if index == 0 { 1.0 } else { 0.0 };
        }
        return shared;
    }
    let before = problems.len();
    let co_products_at = at.field("co_products");
    let output_at = at.field("output");
    let mut money: Option<Currency> = None;
    for (index, product) in products.iter_mut().enumerate() {
        if !product.shares_burden {
            continue;
        }
        let (place, flow) = match index {
            0 => (output_at, &stage.output.flow),
            _ => (co_products_at.item(index - 1), &stage.co_products[index - 1].flow),
        };
        let scene = Scene {
            flow,
            rules,
            materials: ground.materials,
            wheel_strength: ground.wheel_strength,
            at: &place,
            is_output: index == 0,
            name: product.name,
        };
        let measured = match method {
            AllocationMethod::Exergy => exergy(&product.flow, &scene, problems, steps),
            AllocationMethod::Mass => mass(&product.flow, &scene, problems, steps),
            AllocationMethod::Economic => {
                value(&product.flow, &scene, problems, steps).and_then(|(worth, currency)| {
                    let first = *money.get_or_insert(currency);
                    one_currency(first, currency, &place, problems).then_some(worth)
                })
            }
            AllocationMethod::Energy | AllocationMethod::Substitution => {
                energy(&product.flow, &scene, problems, steps)
            }
        };
        product.measure = measured.unwrap_or(0.0);
    }
    if let Some(currency) = money {
        shared.unit = currency.symbol();
    }
    if problems.len() > before {
        return shared;
    }
    let sum: f64 = products.iter().map(|product| product.measure).sum();
    if sum <= 0.0 || !sum.is_finite() {
        problems.add(
            at.field("co_products"),
            "The products hold nothing that could share the burden.",
            "Give amounts and heating values above zero.",
        );
        return shared;
    }
    for product in products.iter_mut().filter(|product| product.shares_burden) {
        product.share = product.measure / sum;
        let text = format!(
            "share of {}: {} / {} {}",
            product.name,
            plain(product.measure),
            plain(sum),
            shared.unit
        );
        steps.push(step(text, product.share, "", &rules.source));
    }
    shared
}

/// True if a price is in the currency of the others of its stage.
fn one_currency(first: Currency, found: Currency, at: &Place, problems: &mut Problems) -> bool {
    if first == found {
        return true;
    }
    let detail = format!(
        "The prices of one stage are in {} and {}, and no rate of exchange is known here.",
        first.symbol(),
        found.symbol()
    );
    problems.add(
        at.field("price").field("unit"),
        detail,
        "Give all of them in one currency.",
    );
    false
}

fn method(
    stage: &Stage,
    products: &[Product],
    rules: &RuleSet,
    at: &Place,
    problems: &mut Problems,
) -> Option<AllocationMethod> {
    let energy_only = products[0].flow.is_heat_or_power();
    let usual = if energy_only {
        rules.allocation_heat_and_power
    } else {
        rules.allocation
    };
    let asked = stage.allocation.unwrap_or(usual);
    let odd = |product: &CoProduct| {
        let heat_or_power = product.material == HEAT || product.material == POWER;
        heat_or_power != energy_only && (heat_or_power || product.role == Role::CoProduct)
    };
    // Neither a price nor what is displaced asks whether energy and goods can be put side by side.
    let any_product = matches!(asked, AllocationMethod::Economic | AllocationMethod::Substitution);
    if !(any_product && rules.allocation_allowed.contains(&asked)) && stage.co_products.iter().any(odd) {
        problems.add(
            at.field("co_products"),
            "Heat or power cannot share a burden beside another product.",
            "Put the boiler house or turbine in a stage of its own, of kind utility, or use a model of kind chp; \
             it then carries what the unit that makes it emits.",
        );
        return None;
    }
    let allowed =
        asked == usual || (rules.allocation_allowed.contains(&asked) && (!energy_only || any_product));
    if !allowed {
        let mut names: Vec<&str> = match energy_only {
            true => vec![usual.name()],
            false => Vec::new(),
        };
        let others = rules.allocation_allowed.iter().filter(|method| {
            !energy_only
                || matches!(
                    method,
                    AllocationMethod::Economic | AllocationMethod::Substitution
                )
        });
        names.extend(others.map(|method| method.name()));
        names.sort_unstable();
        names.dedup();
        problems.add(
            at.field("allocation"),
            format!("{} does not allow sharing by {} here.", rules.id, asked.name()),
            format!("Use {}, or leave it out.", names.join(" or ")),
        );
        return None;
    }
    Some(asked)
}
