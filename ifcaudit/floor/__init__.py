"""What carries what, and how slabs are shared out among their supports. Geometry only, no rules."""
