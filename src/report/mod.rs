//! The `report` room of the pipeline.
