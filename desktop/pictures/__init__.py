"""The pictures: painters usable on screen and in print, and their widgets."""
