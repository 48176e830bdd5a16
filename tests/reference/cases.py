"""Writes cases of published values, in the form that tests/support/cases.rs reads."""


def text(value):
    if isinstance(value, str):
        return '"%s"' % value
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(text(item) for item in value) + "]"
    if isinstance(value, dict):
        return "{ " + ", ".join("%s = %s" % (key, text(item)) for key, item in value.items()) + " }"
    return repr(float(value))


def write(path, heading, cases):
    with open(path, "w", encoding="utf-8") as file:
        file.write("".join("# %s\n" % line for line in heading))
        for case in cases:
            file.write("\n[[case]]\n")
            for key, value in case.items():
                file.write("%s = %s\n" % (key, text(value)))
