/** The weighing room. @module */
