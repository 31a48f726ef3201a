"""One module a command; each has `run(arguments) -> exit code`."""
