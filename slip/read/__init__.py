"""From the file to the joint: schema, reading, checks, defaults. The only stage that sees text typed by a person."""
