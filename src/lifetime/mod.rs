//! The `lifetime` room of the pipeline.
