"""How well the watch sees, held against other detectors and against what could be seen at best."""
