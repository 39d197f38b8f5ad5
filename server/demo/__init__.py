"""Made-up tankhouses whose truth is known: what happened in them, and what people wrote down.

`physics` and `current` make what really happened in a section, `readings` and `scale` what meters,
scales and pencils made of it, `truth` answers for any time what an account should say, `house` puts
sections together, `sheets` prints them as a real plant would hand them in.
"""
