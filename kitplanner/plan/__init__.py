"""The document as data: frozen records, their fields, edits, checks and file format."""
