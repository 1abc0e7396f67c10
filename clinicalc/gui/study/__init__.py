"""The Study page: from a file of people to a coefficient file, in steps."""
