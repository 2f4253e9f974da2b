"""Rules of a plan as sentences, with a form for each kind. A new kind is one file and one entry of KINDS."""
