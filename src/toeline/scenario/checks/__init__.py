"""What must hold between tables that are right each by itself."""
