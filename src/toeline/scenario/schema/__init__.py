"""What the input files may say: one class a table, with the meaning of every key."""
