"""Made-up sections whose truth is known, to hold the watch against; physics of their own.

Nothing here imports the program: a mistake of the watch must not find its own likeness. A
`Scenario` says what a section is like and what befalls it, `make` lets chance work on it with a
seed, and the `Plant` that comes out holds what people wrote down beside what really happened.
"""
