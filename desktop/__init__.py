"""The window, the printed page and the pictures; talks to `solver` through its public names."""
