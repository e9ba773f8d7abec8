//! The `disturbance` room of the pipeline.
