"""Surface temperatures from thermal-camera frames, with their uncertainty or a plain reason why not."""
