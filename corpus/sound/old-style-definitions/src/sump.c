#define SUMP 3

extern unsigned adin();
unsigned sump_mv;

long
scale(c, span, full)
    unsigned c;
    long span;
    long full;
{
    register long v;

    v = c * span;
    return v / full;
}

sump()
{
    unsigned c;

    c = adin(SUMP);
    sump_mv = scale(c, 5000L, 1024L);
}
