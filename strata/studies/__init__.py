"""Questions asked of many projections at once."""
