"""Area loads, takedown from secondary to primary members, combinations, live-load reduction."""
