//! Engines and boilers of the 2006 IPCC Guidelines.

use crate::core::domain::factor::Use;
use crate::core::domain::{Counts, Factor, Gas, Status};
use crate::library::book;

fn factor(row: &str) -> &'static Factor {
    book()
        .factor(&format!("ipcc-2006/{row}"))
        .unwrap_or_else(|| panic!("{row} is missing"))
}

/// Volume 2 Chapter 3 Table 3.2.2.
#[test]
fn engines_by_vehicle() {
    let engine = |row: &str| match &factor(row).usage {
        Use::Engine(engine) => (engine.ch4_kg_per_tj, engine.n2o_kg_per_tj),
        other => panic!("{other:?}"),
    };
    assert_eq!(
        engine("road_ethanol_car_br"),
        (Some(18.0), None),
        "no N2O is printed"
    );
    assert_eq!(engine("road_ethanol_truck_us"), (Some(260.0), Some(41.0)));
    assert_eq!(engine("road_petrol_ldv95"), (Some(3.8), Some(5.7)));
    assert_eq!(
        factor("road_ethanol_truck_us").gases.get(Gas::Ch4Biogenic),
        Some(0.00026)
    );
    assert_eq!(factor("road_diesel").gases.get(Gas::Ch4Fossil), Some(0.0000039));
    assert_eq!(factor("offroad_diesel_agri").citation.status, Status::Memory);
    assert_eq!(factor("road_ethanol_truck_us").citation.status, Status::Read);
}

/// Volume 2 Chapter 2 Tables 2.2 and 2.3.
#[test]
fn fuels_by_sector() {
    let coal = |end: &str| {
        factor(&format!("other_bituminous_coal_{end}"))
            .gases
            .get(Gas::Ch4Fossil)
    };
    assert_eq!((coal("2_2"), coal("2_3")), (Some(1.0 / 1e6), Some(10.0 / 1e6)));
    let gas = factor("natural_gas_2_3");
    assert_eq!(gas.gases.get(Gas::Co2Fossil), Some(0.0561));
    assert_eq!(
        (gas.lhv_mj_per_kg, gas.counts, &gas.usage),
        (Some(48.0), Counts::Fuel, &Use::Amount)
    );
    let wood = factor("wood_2_3");
    assert_eq!(wood.gases.get(Gas::Co2Biogenic), Some(0.112));
    assert_eq!(
        (wood.gases.get(Gas::Co2Fossil), wood.gases.get(Gas::Ch4Biogenic)),
        (None, Some(0.00003))
    );
    let lignite = factor("lignite_2_3");
    assert_eq!(lignite.citation.status, Status::Memory);
    assert!(
        lignite
            .note
            .as_deref()
            .is_some_and(|note| note.contains("From memory: CH4, N2O."))
    );
}
