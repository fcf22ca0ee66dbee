//! The works of a chain: stages between farm gate and fuel depot that hang together, with what crosses their fence per MJ
//! of fuel, physically and apart from sharing.

use crate::core::domain::StageKind;
use crate::core::engine::demand::Demand;
use crate::core::engine::resolved::{Product, Resolved, Stage};
use crate::core::models::flow::Measured;

/// Stages of one works, as indices of the plan.
pub struct Works {
    /// The stages, suppliers first.
    pub stages: Vec<usize>,
}

/// True for a section of a works that handles matter.
pub fn handles_matter(kind: StageKind) -> bool {
    matches!(
        kind,
        StageKind::Preparation
            | StageKind::Fermentation
            | StageKind::Distillation
            | StageKind::Dehydration
            | StageKind::CoProductHandling
            | StageKind::Processing
            | StageKind::Capture
    )
}

/// The same with its boiler houses.
pub fn with_boiler_house(kind: StageKind) -> bool {
    handles_matter(kind) || kind == StageKind::Utility
}

/// The works of a chain: stages of the wanted kinds, joined where one takes from another.
pub fn find(resolved: &Resolved, belongs: fn(StageKind) -> bool) -> Vec<Works> {
    let mut group: Vec<usize> = (0..resolved.stages.len()).collect();
    let inside = |j: usize| belongs(resolved.stages[j].kind());
    for (j, stage) in resolved.stages.iter().enumerate().filter(|(j, _)| inside(*j)) {
        for from in stage
            .intakes
            .iter()
            .map(|intake| intake.from)
            .filter(|from| inside(*from))
        {
            let (old, new) = (group[j], group[from]);
            for member in &mut group {
                if *member == old {
                    *member = new;
                }
            }
        }
    }
    let mut works: Vec<(usize, Works)> = Vec::new();
    for &j in resolved.order.iter().filter(|j| inside(**j)) {
        match works.iter_mut().find(|(id, _)| *id == group[j]) {
            Some((_, found)) => found.stages.push(j),
            None => works.push((group[j], Works { stages: vec![j] })),
        }
    }
    works.into_iter().map(|(_, works)| works).collect()
}

impl Works {
    /// The stage that speaks for the works: where ethanol first appears, else the last one.
    pub fn head<'r, 'p>(&self, resolved: &'r Resolved<'p>) -> Option<&'r Stage<'p>> {
        let first = self.stages.iter().find(|j| makes_ethanol(&resolved.stages[**j]));
        first.or(self.stages.last()).map(|j| &resolved.stages[*j])
    }

    /// What comes in through the fence: the flow of each intake and how often per MJ.
    pub fn incoming<'r>(&self, resolved: &'r Resolved, demand: &Demand) -> Vec<(&'r Measured, f64)> {
        let mut found = Vec::new();
        for &j in &self.stages {
            let outside = resolved.stages[j]
                .intakes
                .iter()
                .filter(|intake| !self.stages.contains(&intake.from));
            found.extend(outside.map(|intake| (&intake.flow, demand.whole[j])));
        }
        found
    }

    /// What leaves through the fence: stage, index of the product, the product and how often per MJ.
    pub fn leaving<'r, 'p>(
        &self,
        resolved: &'r Resolved<'p>,
        demand: &Demand,
    ) -> Vec<(usize, usize, &'r Product<'p>, f64)> {
        let mut found = Vec::new();
        for &j in &self.stages {
            for (index, product) in resolved.stages[j].products.iter().enumerate() {
                let takers = self.stages.iter().flat_map(|t| {
                    let intakes = resolved.stages[*t].intakes.iter();
                    intakes.map(|intake| (*t, intake))
                });
                let kept: f64 = takers
                    .filter(|(_, intake)| intake.from == j && intake.product == index)
                    .map(|(t, intake)| demand.whole[t] * intake.recipes)
                    .sum();
                let left = demand.whole[j] - kept;
                if left > demand.whole[j] * 1e-9 {
                    found.push((j, index, product, left));
                }
            }
        }
        found
    }
}

/// True where ethanol first appears.
pub fn makes_ethanol(stage: &Stage) -> bool {
    stage.products.iter().any(|product| product.flow.is_ethanol())
        && !stage.intakes.iter().any(|intake| intake.flow.is_ethanol())
}
