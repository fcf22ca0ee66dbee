//! The first sheet: what the workbook is, what it rests on, what to be careful about, and how to read the others.

use super::look::Part;
use super::page::{Layout, Page};
use super::plan::Plan;
use super::{About, chain, factors, findings, inputs, terms, totals, workings};
use crate::core::domain::rule_set::Standing;
use rust_xlsxwriter::XlsxError;

/// Name of the sheet.
pub const NAME: &str = "About";

/// Writes the sheet.
pub fn write(mut page: Page, plan: &Plan, about: &About) -> Result<(), XlsxError> {
    let layout = Layout {
        columns: &[("", 30.0), ("", 110.0)],
        head: 0,
        fixed: 0,
        wide: false,
    };
    page.lay_out("Greenhouse-gas account of fuel ethanol", &layout)?;
    let (assessment, rules) = (plan.assessment, plan.resolved.rules);
    let mut row = 1;
    let mut line = |page: &mut Page, head: &str, words: &str, part: Part| -> Result<(), XlsxError> {
        page.text(row, 0, head, Part::Text)?;
        page.text(row, 1, words, part)?;
        row += 1;
        Ok(())
    };
    if assessment.example {
        line(
            &mut page,
            "EXAMPLE",
            "EXAMPLE: invented demonstration data. No real company, site, person or delivery.",
            Part::Loud,
        )?;
    }
    let period = &plan.resolved.pathway.period;
    let text = Part::Long;
    line(&mut page, "Pathway", &assessment.pathway_name, text)?;
    if let Some(issuer) = about.issuer {
        line(&mut page, "Of", issuer, text)?;
    }
    if let Some((number, hash)) = about.statement {
        line(
            &mut page,
            "Belongs to statement",
            &format!("{number}, hash {hash}"),
            text,
        )?;
    }
    line(
        &mut page,
        "Days covered",
        &format!("{} to {}", period.from, period.to),
        text,
    )?;
    line(&mut page, "Reach", &assessment.basis, text)?;
    let rule = format!("{}: {} (data version {})", rules.id, rules.title, rules.version);
    line(&mut page, "Rule set", &rule, text)?;
    line(&mut page, "Its source", &rules.source, text)?;
    line(
        &mut page,
        "Gas weights",
        &format!("{}: {}", plan.resolved.gwp.id, plan.resolved.gwp.title),
        text,
    )?;
    for (edition, source) in editions(plan) {
        line(&mut page, "Edition used", &format!("{edition}: {source}"), text)?;
    }
    line(
        &mut page,
        "Hash of the pathway",
        &format!("SHA-256 of its canonical bytes: {}", assessment.pathway_hash),
        text,
    )?;
    line(&mut page, "Made", &about.made_at.to_string(), text)?;
    line(
        &mut page,
        "By",
        &format!("Wheelwort {}", assessment.program),
        text,
    )?;
    if rules.standing != Standing::InForce {
        line(
            &mut page,
            "Caution",
            &format!("The rule set is {}.", rules.standing.words()),
            Part::Loud,
        )?;
    }
    for caution in about.cautions {
        line(&mut page, "Caution", caution, Part::Loud)?;
    }
    let blocking = assessment
        .findings
        .iter()
        .filter(|finding| finding.severity == crate::core::documents::assessment::Severity::Block)
        .count();
    if blocking > 0 {
        let words = format!("{blocking} finding(s) block a statement: see {}.", findings::NAME);
        line(&mut page, "Caution", &words, Part::Loud)?;
    }
    for note in &rules.notes {
        line(&mut page, "Note of the rule set", note, text)?;
    }
    line(&mut page, "", "", text)?;
    guide(&mut page, row)
}

/// Editions whose rows are used, with their source.
fn editions<'p>(plan: &'p Plan) -> Vec<(&'p str, &'p str)> {
    let all = plan.book.editions.values();
    all.filter(|edition| plan.factors.uses(&edition.id))
        .map(|edition| (edition.title.as_str(), edition.citation.source.as_str()))
        .collect()
}

fn guide(page: &mut Page, mut row: u32) -> Result<(), XlsxError> {
    page.text(row, 0, "The sheets", Part::Band)?;
    page.text(row, 1, "", Part::Band)?;
    for (sheet, words) in [
        (
            inputs::NAME,
            "Every amount as entered, its conversion, its factor, its gases, and its g CO2e/MJ.",
        ),
        (
            factors::NAME,
            "Factors used with their sources, gas weights, constants of the rule set.",
        ),
        (
            chain::NAME,
            "Recipes, intakes, shares, and how many recipes one megajoule asks for.",
        ),
        (terms::NAME, "The net by term."),
        (
            totals::NAME,
            "Net, baseline, saving, minimum savings, gases, stages.",
        ),
        (findings::CARBON, "The crop's carbon (values)."),
        (findings::NAME, "What the checks have to say (text)."),
        (
            workings::NAME,
            "Every step in words, also inside the models (values).",
        ),
    ] {
        row += 1;
        page.link(row, 0, (sheet, 0, 0), sheet)?;
        page.text(row, 1, words, Part::Long)?;
    }
    row += 2;
    page.text(row, 0, "How to read it", Part::Band)?;
    page.text(row, 1, "", Part::Band)?;
    for (head, part, words) in [
        (
            "Blue on pale blue",
            Part::Entered,
            "Entered by a person. Change it: the net follows by formula.",
        ),
        (
            "Green",
            Part::Published,
            "Published: a factor, a constant, the size of a unit. Its source stands on Factors.",
        ),
        (
            "Grey italics",
            Part::Value,
            "Worked out by a model of the program (soil N2O, land, distillation, strengths by OIML R 22 and others): a value, \
          because its formula would be a program of its own. It does not follow when its stage changes; its steps stand on Workings.",
        ),
        (
            "Black",
            Part::Formula,
            "A formula. The file carries the program's own figure for each, so a reader that does not calculate shows the same.",
        ),
    ] {
        row += 1;
        page.text(row, 0, head, part)?;
        page.text(row, 1, words, Part::Long)?;
    }
    row += 2;
    page.text(
        row,
        0,
        "Figures are kept in full and shown rounded. Published defaults and minimum savings do not change with an amount: whether \
         a rule allows a changed pathway is for the program to say.",
        Part::Text,
    )
}
