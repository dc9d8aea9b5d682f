"""The commands of ``twolight``: check what was typed, call the domain, print; imports wait until they are needed."""
