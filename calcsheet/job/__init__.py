"""The job folder: its files read into validated core inputs, and written back."""
