"""wearbook: the library and the command line."""
