//! The `config` room of the pipeline.
