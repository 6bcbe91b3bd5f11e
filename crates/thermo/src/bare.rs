//! The environment without its vapour: temperature alone, for buoyancy without the virtual correction.

use crate::column::{Column, Levels, WIDEST};
use crate::{Buoyancy, Environment};

/// The surroundings a parcel is compared with.
#[derive(Debug, Clone)]
pub(crate) enum Surroundings<'e> {
    /// With the virtual correction: the environment as it is.
    Virtual(&'e Environment),
    /// Temperature alone: every level counts as dry.
    Bare {
        environment: &'e Environment,
        dry: Vec<Option<f64>>,
        column: Box<Column>,
    },
}

impl<'e> Surroundings<'e> {
    pub fn of(environment: &'e Environment, buoyancy: Buoyancy) -> Self {
        match buoyancy {
            Buoyancy::Virtual => Self::Virtual(environment),
            Buoyancy::Temperature => {
                let dry = vec![None; environment.len()];
                let column = of_temperature(environment.levels());
                Self::Bare {
                    environment,
                    dry,
                    column: Box::new(column),
                }
            }
        }
    }

    pub fn levels(&self) -> Levels<'_> {
        match self {
            Self::Virtual(environment) => environment.levels(),
            Self::Bare {
                environment, dry, ..
            } => Levels {
                td: dry,
                ..environment.levels()
            },
        }
    }

    pub fn column(&self) -> &Column {
        match self {
            Self::Virtual(environment) => environment.column(),
            Self::Bare { column, .. } => column,
        }
    }
}

/// Temperature alone at nodes; straight lines between them, so that the trapezium is exact.
fn of_temperature(levels: Levels) -> Column {
    let mut column = Column::default();
    let mut sum = 0.0;
    let mut push = |z: f64, t: f64, sum: f64| {
        column.z.push(z);
        column.tv.push(t);
        column.tv_integral.push(sum);
    };
    if let (Some(z), Some(t)) = (levels.z.first(), levels.t.first()) {
        push(*z, *t, sum);
    }
    for (z, t) in levels.z.windows(2).zip(levels.t.windows(2)) {
        let ([foot, head], [below, above]) = (z, t) else {
            continue;
        };
        // A scan takes it that no step is wider.
        let pieces = ((head - foot) / WIDEST).ceil().max(1.0);
        let mut last = (*foot, *below);
        for piece in 1..=pieces as usize {
            let share = piece as f64 / pieces;
            let here = if share < 1.0 {
                (
                    foot + share * (head - foot),
                    below + share * (above - below),
                )
            } else {
                (*head, *above)
            };
            sum += 0.5 * (last.1 + here.1) * (here.0 - last.0);
            push(here.0, here.1, sum);
            last = here;
        }
    }
    column
}
