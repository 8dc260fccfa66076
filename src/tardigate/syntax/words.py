"""The reserved words of IEEE 1364-2005 (annex B) and what the coarse lexer makes of each. Data only."""

from __future__ import annotations

GATES = (
    "and", "nand", "or", "nor", "xor", "xnor", "buf", "not", "bufif0", "bufif1", "notif0", "notif1",
)  # fmt: skip
"""The gate primitives that the model knows (clause 7.2 to 7.4)."""

SWITCHES = (
    "nmos", "pmos", "cmos", "rnmos", "rpmos", "rcmos", "tran", "tranif0", "tranif1", "rtran", "rtranif0",
    "rtranif1",
)  # fmt: skip
"""Switches (clause 7.5 to 7.7): refused."""

PLAIN_DECLARATIONS = ("input", "output", "inout", "wire")
"""Words that may begin a declaration that is read in bulk."""

PROCEDURAL = ("always", "initial", "task", "function")
"""Words that begin procedural code (clause 9 and 10)."""

UNREAD = ("primitive", "table", "config")
"""Words of the standard that cannot stand inside a module, or that the reader does not understand there."""

OTHERS = (
    "specify", "generate", "genvar", "defparam", "integer", "real", "realtime", "time", "event", "trireg",
    "for", "if", "case", "begin", "pullup", "pulldown",
    "assign", "automatic", "casex", "casez", "cell", "deassign", "default", "design", "disable", "edge",
    "else", "end", "endcase", "endconfig", "endfunction", "endgenerate", "endmodule", "endprimitive",
    "endspecify", "endtable", "endtask", "force", "forever", "fork", "highz0", "highz1", "ifnone", "incdir",
    "include", "instance", "join", "large", "liblist", "library", "localparam", "macromodule", "medium",
    "module", "negedge", "noshowcancelled", "parameter", "posedge", "pull0", "pull1", "pulsestyle_ondetect",
    "pulsestyle_onevent", "reg", "release", "repeat", "scalared", "showcancelled", "signed", "small",
    "specparam", "strong0", "strong1", "supply0", "supply1", "tri", "tri0", "tri1", "triand", "trior",
    "unsigned", "use", "uwire", "vectored", "wait", "wand", "weak0", "weak1", "while", "wor",
)  # fmt: skip

RESERVED = frozenset((*GATES, *SWITCHES, *PLAIN_DECLARATIONS, *PROCEDURAL, *UNREAD, *OTHERS))
"""All reserved words."""
