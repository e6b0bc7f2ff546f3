"""From sections, webs and ribs to outlines, skins and cells."""
