"""One module a command: reads its arguments, calls the rooms, prints, and gives the exit code."""
