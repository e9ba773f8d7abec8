//! The `momentum` room of the pipeline.
