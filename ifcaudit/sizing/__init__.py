"""The lightest adequate section."""
