"""Parameter studies: many cases from a plan, kept in a file as they come, on any number of processes or machines."""
