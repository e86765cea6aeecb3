"""Questions about an aircraft with its engine, beyond the flight of one mission."""
