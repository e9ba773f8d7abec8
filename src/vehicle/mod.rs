//! The `vehicle` room of the pipeline.
