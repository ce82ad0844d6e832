"""Tables of many load cases: read in chunks, judged by the same functions as one joint file, written as a table."""
