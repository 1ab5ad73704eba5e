"""Whether, when and to which intake released water comes: shares, travel times and arrival curves."""
