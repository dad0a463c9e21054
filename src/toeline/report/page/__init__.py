"""The page of `toeline report`: one file of HTML that a browser shows without a network."""
