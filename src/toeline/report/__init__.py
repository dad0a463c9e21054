"""Pages for people, from the finished run alone."""
