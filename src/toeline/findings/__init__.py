"""What a finished run says: the water ledger, incidents, and where the jumps stood; from the dataset alone."""
