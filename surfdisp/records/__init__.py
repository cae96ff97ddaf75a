"""Field files to gathers."""
