"""The contract: one frozen struct per noun, and the border where unit strings become SI floats."""
