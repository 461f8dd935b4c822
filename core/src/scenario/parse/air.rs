//! `atmosphere` and `drag` of a body.

use super::super::grammar;
use super::super::model::{Atmosphere, Drag};
use super::super::reader::{Field, Reading};
use crate::units::{Density, Length};

/// Most rows of a table.
const MOST_ROWS: usize = 1000;

/// The air around a body, where it is stated and right.
pub(super) fn atmosphere(body: &Reading<'_>) -> Option<Atmosphere> {
    let field = body.get("atmosphere")?;
    if body.get("radius").is_none() && body.get("real").is_none() {
        let wrong = "a body without a radius has no surface for its atmosphere";
        field.report.error(&field.key_at, wrong, "give it its radius");
    }
    if field.item.is_str() {
        return field.choice(&[("Earth", ())]).map(|()| Atmosphere::Earth);
    }
    let table = field.table(&grammar::ATMOSPHERE)?;
    let (rows, formula) = (["heights", "densities"], ["surface-density", "scale-height"]);
    let by_rows = !table.stated(&rows).is_empty();
    if by_rows && let Some(other) = table.stated(&formula).first() {
        let wrong = format!("an atmosphere has both heights and {}", other.name());
        other.report.error(
            &other.key_at,
            wrong,
            "state heights and densities, or surface-density and scale-height",
        );
    }
    if by_rows { rows_of(&table) } else { formula_of(&table) }
}

fn formula_of(table: &Reading<'_>) -> Option<Atmosphere> {
    let surface_density = table.need("surface-density").and_then(|field| field.positive());
    let scale_height = table.need("scale-height").and_then(|field| field.positive());
    Some(Atmosphere::Exponential { surface_density: surface_density?, scale_height: scale_height? })
}

fn rows_of(table: &Reading<'_>) -> Option<Atmosphere> {
    let (heights, densities) = (table.need("heights"), table.need("densities"));
    let of_heights: Option<Vec<Length>> = heights.as_ref().and_then(Field::list);
    let of_densities: Option<Vec<Density>> = densities.as_ref().and_then(Field::list);
    let (heights, densities) = (heights?, densities?);
    let (of_heights, of_densities) = (of_heights?, of_densities?);
    let rows = of_heights.len();
    if !(2..=MOST_ROWS).contains(&rows) {
        heights.error(format!("there are {rows} heights"), format!("2 to {MOST_ROWS} are wanted"));
    } else if of_densities.len() != rows {
        let wrong = format!("there are {} densities for {rows} heights", of_densities.len());
        densities.error(wrong, "state one for each");
    }
    if of_heights.windows(2).any(|pair| pair[0] >= pair[1])
        || of_heights.iter().any(|height| height.m() < 0.0)
    {
        heights.error("the heights do not rise", "write them upwards, from the surface at 0 or above");
    }
    if of_densities.iter().any(|density| density.kg_m3() <= 0.0) {
        densities.error("a density is not more than 0", "end the list where there is no air");
    }
    Some(Atmosphere::Table(of_heights.into_iter().zip(of_densities).collect()))
}

/// What a body offers to air, where it is stated and right.
pub(super) fn drag(body: &Reading<'_>) -> Option<Drag> {
    let table = body.get("drag")?.table(&grammar::DRAG)?;
    let area_per_mass = table.need("area-per-mass").and_then(|field| field.positive());
    let coefficient = match table.get("coefficient") {
        Some(field) => {
            let number = field.number()?;
            if number < 0.0 {
                field.error(format!("coefficient is {number}"), "it must not be negative");
            }
            number
        }
        None => 1.0,
    };
    Some(Drag { area_per_mass: area_per_mass?, coefficient })
}
