//! The `authority` room of the pipeline.
