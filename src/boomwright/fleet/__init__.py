"""Many designs through the pipeline."""
