"""What lies under everything and knows no bolts: units, errors, formulas with their sources, data tables."""
