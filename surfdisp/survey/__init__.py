"""The whole job."""
