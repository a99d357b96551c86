"""One module a kind of question; each turns a question into an answer."""
