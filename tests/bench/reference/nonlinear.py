def nonlinear_plain(m, factors):
    raise NotImplementedError


class NonlinearOut:
    def __init__(self, m):
        raise NotImplementedError
