//! The command line: the only room with arguments, the terminal, the clock and the environment.
