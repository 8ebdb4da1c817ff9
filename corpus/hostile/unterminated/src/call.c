#define TWICE(x) ((x) * 2)
int twice = TWICE(21
