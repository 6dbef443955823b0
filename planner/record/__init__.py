"""The JSON record: everything that is printed, compared or exported is a function of it."""
