"""Practice: what thermodynamics cannot know, as rules over computed facts."""
