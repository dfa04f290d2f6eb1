"""Who renders the frames and portions of a shot: for now this process, one after the other."""
