"""A table with its fields understood → batches of motors with figures in SI."""
