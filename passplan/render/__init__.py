"""Plan to text, table and calendar: returns, never prints, reads no clock and no files."""
