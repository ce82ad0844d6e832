"""The joint in words: frozen records in N, mm, MPa, K. They compute nothing; `read` fills them, the later stages use them."""
