"""The commands of ``harvest``, one file each (the name, then an underscore)."""
