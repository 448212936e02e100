"""Kills, crowds, full disks, earlier layouts: what no call may do to a catalog."""
