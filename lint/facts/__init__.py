"""Facts as rules read them: what is known of each number, and where it stands while something is not known."""
