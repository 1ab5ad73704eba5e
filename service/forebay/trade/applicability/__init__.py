"""Where depth-mean plane potential flow stops being believable: the warnings, as data and as rules."""
