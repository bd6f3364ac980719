"""The command line: reads, calls and shows."""
