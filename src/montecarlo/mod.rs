//! The `montecarlo` room of the pipeline.
