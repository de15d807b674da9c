"""Tables of the report, from the results tree alone."""
