"""The command line: data on stdout, everything else on stderr, one exit code per family of errors."""
