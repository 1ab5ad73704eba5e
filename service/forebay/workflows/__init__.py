"""One use case a file: domain values in, one frozen result out."""
