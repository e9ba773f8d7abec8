//! The `cli` room of the pipeline.
