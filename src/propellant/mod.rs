//! The `propellant` room of the pipeline.
