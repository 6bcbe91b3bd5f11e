//! The environment without its vapour: temperature alone, for buoyancy without the virtual correction.

use crate::column::{Column, Levels};
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
                let mut column = Column::default();
                let levels = Levels {
                    td: &dry,
                    ..environment.levels()
                };
                // There is no step at which humidity ends.
                column.fill(&levels, environment.len(), environment.len() - 1);
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
