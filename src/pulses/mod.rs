//! The `pulses` room of the pipeline.
