"""The wire contract: what question, answer and problem look like. Knows numbers and names, no mathematics."""
