"""What is shown and kept: text, tables, figures, page and record."""
