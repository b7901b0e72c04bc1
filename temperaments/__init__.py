"""Temperament records, one YAML file each; ``layout.job.records`` reads them."""
