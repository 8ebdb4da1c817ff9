#if defined(HATCHERY)
#if 0
int inside;
#else
int other;
