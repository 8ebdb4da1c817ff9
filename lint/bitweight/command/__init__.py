"""The command line: options in, pipeline, report out, exit status."""
