/** The campaign room. @module */
