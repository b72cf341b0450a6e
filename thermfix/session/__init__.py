"""What both front ends drive."""
