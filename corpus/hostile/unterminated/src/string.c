const char *name = "no end
int after_string;
