"""Rules as data: standards, materials, occupancies, combinations and section catalogues, read once and validated."""
