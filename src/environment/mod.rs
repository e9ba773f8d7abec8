//! The `environment` room of the pipeline.
